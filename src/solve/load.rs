//! Loads: what each block draws from the outputs that feed it, from the last block to the first.

use crate::block::{AmpId, Role, open_loop, outside_loop, rectifier};
use crate::circuit::NetId;
use crate::solve::board::Board;
use crate::solve::model::Fault;
use crate::solve::{Drain, Excitation, Feed, List, LoadStamp, Node, Solved, regenerates};

/// Output, net, siemens: what a volt at the net draws from the output.
type Draws = Vec<(AmpId, NetId, f64)>;
/// Output, feed, ampere: what one unit of the feed draws from the output.
type Drains = Vec<(AmpId, Feed, f64)>;

/// A solution that leaves more than this unexplained, after one refinement, is none: sound blocks stay near
/// 1e-15.
const MOST_REMAINDER: f64 = 1e-9;

/// What a block's solution leaves unexplained, infinite where it is no number, with a volt at every port and in series with every input.
fn remainder(solved: &Solved<f64>) -> f64 {
    let network = solved.network();
    let excitation = Excitation {
        ports: List::from_elem(1.0, network.ports),
        errors: smallvec::SmallVec::from_elem(1.0, network.members),
        constant: true,
        ..Excitation::none()
    };
    solved.forward(&excitation).residual
}

impl Board<'_> {
    /// From the last block to the first: each is solved under its load and reduced to what it draws from
    /// the outputs that feed it.
    pub(super) fn load(&mut self) {
        self.drain_sources();
        for at in (0..self.models.len()).rev() {
            let fault = self.verify(at);
            self.models[at].fault = self.models[at].fault.take().or(fault);
            let Some((draws, drains)) = self.draws(at) else { continue };
            for (amp, net, siemens) in draws {
                let (block, _) = self.place[amp.0 as usize];
                let output = self.layout.amp(amp).output;
                let role = self.layout.role(net);
                let model = &mut self.models[block];
                let (Some(Node::Unknown(output)), node) = (model.node(output), model.port(net, role)) else {
                    continue;
                };
                model.network.loads.push(LoadStamp { output, node, siemens });
            }
            for (amp, feed, amps) in drains {
                self.drain(amp, feed, amps);
            }
        }
    }

    /// A current that leaves an output for one unit of what feeds it.
    fn drain(&mut self, amp: AmpId, feed: Feed, amps: f64) {
        let model = &mut self.models[self.place[amp.0 as usize].0];
        if let Some(Node::Unknown(output)) = model.node(self.layout.amp(amp).output) {
            model.drains.push(Drain { output, feed, amps });
        }
    }

    /// Currents that sources draw from outputs, beyond those that feed the output's own block.
    fn drain_sources(&mut self) {
        let circuit = self.circuit;
        for (at, current) in circuit.currents.iter().enumerate() {
            for (net, amps) in [(current.into, -1.0), (current.from, 1.0)] {
                let Role::Output(amp) = self.layout.role(net) else { continue };
                let (block, _) = self.place[amp.0 as usize];
                if !self.layout.blocks[block].currents.contains(&(at as u32)) {
                    self.drain(amp, Feed::Current(at as u32), amps);
                }
            }
        }
    }

    /// What makes a block's figures meaningless though its equations stand.
    fn verify(&self, at: usize) -> Option<Fault> {
        let (model, block) = (&self.models[at], &self.layout.blocks[at]);
        if model.fault.is_some() {
            return None;
        }
        if let Some(element) = outside_loop(self.circuit, self.layout, block) {
            return Some(Fault::OutsideLoop(element));
        }
        if let Some(diode) = rectifier(self.circuit, self.layout, block) {
            return Some(Fault::NonLinear(diode));
        }
        if open_loop(self.circuit, self.layout, block) {
            return Some(Fault::OpenLoop);
        }
        let twin = model.nominal.twin(|amp| model.op_amps[amp].is_some());
        let twin = match Solved::new(&model.network, twin) {
            Ok(twin) => twin,
            Err(singular) => return Some(Fault::NoTwin(model.net(singular.unknown))),
        };
        let real = match Solved::new(&model.network, model.nominal.clone()) {
            Ok(real) => real,
            Err(singular) => return Some(Fault::Singular(model.net(singular.unknown))),
        };
        let left = remainder(&twin).max(remainder(&real));
        if MOST_REMAINDER < left {
            return Some(Fault::Inexact(left));
        }
        regenerates(&model.network, &model.nominal).then_some(Fault::Regenerative)
    }

    /// Currents that a block draws from the outputs that feed it: for a volt at a net, and by itself.
    fn draws(&self, at: usize) -> Option<(Draws, Drains)> {
        let (model, block) = (&self.models[at], &self.layout.blocks[at]);
        let fed: Vec<(usize, AmpId)> = model
            .ports
            .iter()
            .enumerate()
            .filter_map(|(place, port)| match port.role {
                Role::Output(amp) => Some((place, amp)),
                _ => None,
            })
            .collect();
        if fed.is_empty() {
            return None;
        }
        let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
        // Of several blocks on one network only one counts it; what hangs on outputs is counted there.
        let (branches, shorts) =
            if block.owns_network { (model.feedback_branches, model.feedback_shorts) } else { (0, 0) };
        let drawn = |excitation: &Excitation<f64>| {
            let state = solved.forward(excitation);
            let amps = |amp: usize| block.owns_network || model.held(amp);
            let drawn = solved.drawn(&state, branches, shorts, amps);
            let taken: Vec<(AmpId, f64)> = fed.iter().map(|(place, amp)| (*amp, drawn[*place])).collect();
            taken.into_iter().filter(|(_, amps)| *amps != 0.0)
        };
        let (mut draws, mut drains) = (Draws::new(), Drains::new());
        for (column, port) in model.ports.iter().enumerate() {
            let taken = drawn(&Excitation::port(model.ports.len(), column));
            draws.extend(taken.map(|(amp, siemens)| (amp, port.net, siemens)));
        }
        for feed in self.feeds(at) {
            let taken = drawn(&self.fed(at, feed));
            drains.extend(taken.map(|(amp, amps)| (amp, feed, amps)));
        }
        Some((draws, drains))
    }

    /// What feeds a block beside its ports.
    fn feeds(&self, at: usize) -> Vec<Feed> {
        let model = &self.models[at];
        let mut feeds: Vec<Feed> =
            self.layout.blocks[at].currents.iter().map(|at| Feed::Current(*at)).collect();
        feeds.extend(model.drains.iter().map(|drain| drain.feed));
        if model.network.shorts.iter().any(|short| short.volts != 0.0) {
            feeds.push(Feed::Constant);
        }
        feeds.sort_unstable();
        feeds.dedup();
        feeds
    }

    /// A block's excitation by one unit of what feeds it.
    fn fed(&self, at: usize, feed: Feed) -> Excitation<f64> {
        let model = &self.models[at];
        let mut excitation = Excitation { constant: feed == Feed::Constant, ..Excitation::none() };
        for (current, (into, from)) in self.layout.blocks[at].currents.iter().zip(self.currents(at)) {
            if Feed::Current(*current) == feed {
                excitation.injections.extend([(into, 1.0), (from, -1.0)]);
            }
        }
        let drains = model.drains.iter().filter(|drain| drain.feed == feed);
        excitation.injections.extend(drains.map(|drain| (Node::Unknown(drain.output), -drain.amps)));
        excitation
    }
}
