//! One stage of a composed board: its main port, its transfers, and the figures in turn.

use crate::block::{AmpId, Block, Layout, Role};
use crate::circuit::{Circuit, NetId, OpAmp, SourceResistance};
use crate::device::{Profile, Rank};
use crate::figure::legs::Legs;
use crate::figure::range::Drive;
use crate::figure::{Figure, Kind, PinVoltages, Reach};
use crate::figure::{
    bias_error, common_error, feedback_resistance, gain_error, gain_spread, input_headroom, input_resistance,
    loop_gain, offset_error, output_headroom, output_resistance, rated, reach, rejection, resistor_power,
    source_loading,
};
use crate::solve::{Board, Device, Excitation, Fault, List, Model, Node, Solved, Values, Weights};
use smallvec::smallvec;

/// Where the legs of a stage's rejection are.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum LegsFrom {
    /// A declared pair alone.
    #[default]
    Pair,
    /// A declared pair, else the two signals of a difference stage.
    Signals,
    /// None: the stage is one of a pair, and the one behind it is judged.
    Nowhere,
}

/// What the budget asks of a stage, and what its name says of it.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Requirement {
    /// Intended gain from the main port, signed.
    pub gain: Option<f64>,
    /// Intended gains by the name of an input.
    pub gains: Vec<(String, f64)>,
    /// Which legs its rejection is taken from.
    pub legs: LegsFrom,
}

/// The port that a stage's transfer is taken from; indices into the block's ports or currents.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Main {
    /// A voltage port.
    Port(usize),
    /// A declared pair: its index, the ports of its positive and its negative leg.
    Pair(usize, usize, usize),
    /// A current.
    Current(usize),
}

/// Something a stage has a transfer from.
#[derive(Debug, Clone, PartialEq)]
pub struct Input {
    /// The port, pair or current.
    pub from: Main,
    /// Its name in reports.
    pub name: String,
    /// Whether it is a signal; else a reference or a rail.
    pub signal: bool,
}

/// A transfer from one input to the output, at DC.
#[derive(Debug, Clone, PartialEq)]
pub struct Transfer {
    /// From where.
    pub input: Input,
    /// Of the twin.
    pub ideal: f64,
    /// With the real op amp; `None` for an unknown device.
    pub actual: Option<f64>,
    /// Least and greatest over the travel of adjustable parts, where there are any.
    pub adjusts: Option<(f64, f64)>,
}

/// One stage while its figures are computed.
#[derive(Debug, Clone, Copy)]
pub struct Stage<'b> {
    /// The board.
    pub board: &'b Board<'b>,
    /// Index of its block.
    pub block: usize,
    /// Its place among the block's members.
    pub member: usize,
    /// Index of its op amp in the circuit.
    pub op_amp: u32,
    /// What moves each amplifier's output beyond its signals, volt, with its rank.
    pub deviations: &'b [(f64, Rank)],
    /// How many random trials each figure gets.
    pub trials: u32,
}

/// Everything that is computed of a stage.
#[derive(Debug, Clone, PartialEq)]
pub struct Review {
    /// Transfers from every input, signals first.
    pub transfers: Vec<Transfer>,
    /// The input that figures refer to, as its place among the transfers.
    pub main: Option<usize>,
    /// Voltages at the output's extremes; empty where ranges are unknown.
    pub pins: Vec<PinVoltages>,
    /// Declared output span, else the guaranteed swing, with whether it is declared.
    pub span: Option<(f64, bool)>,
    /// What it can do where nothing is declared.
    pub reach: Reach,
    /// Figures in the order of [`Kind::ALL`].
    pub figures: Vec<Figure>,
}

impl<'b> Stage<'b> {
    /// The stage of an amplifier; `None` for a controlled source.
    pub fn of(board: &'b Board<'b>, deviations: &'b [(f64, Rank)], amp: AmpId) -> Option<Stage<'b>> {
        let (block, member) = board.place[amp.0 as usize];
        Some(Stage { board, block, member, op_amp: board.layout.amp(amp).op_amp?, deviations, trials: 0 })
    }

    /// The block's equations.
    pub fn model(&self) -> &'b Model {
        &self.board.models[self.block]
    }

    /// The block.
    pub fn cut(&self) -> &'b Block {
        &self.board.layout.blocks[self.block]
    }

    /// The op amp.
    pub fn part(&self) -> &'b OpAmp {
        &self.board.circuit.op_amps[self.op_amp as usize]
    }

    /// Its device as the board has it.
    pub fn device(&self) -> &'b Device {
        &self.board.devices[self.op_amp as usize]
    }

    /// Its profile.
    pub fn profile(&self) -> Option<&'b Profile> {
        self.part().profile.map(|at| &self.board.catalogue.profiles[at])
    }

    /// The node of its output.
    pub(super) fn output(&self) -> Node {
        self.model().network.amps[self.member].output.map_or(Node::Ground, Node::Unknown)
    }

    /// The nodes of its inputs.
    pub(super) fn inputs(&self) -> (Node, Node) {
        let amp = self.model().network.amps[self.member];
        (amp.plus, amp.minus)
    }

    /// A block with ideal op amps.
    pub(super) fn twin(&self, values: &Values<f64>) -> Option<Solved<'b, f64>> {
        let model = self.model();
        Solved::new(&model.network, values.twin(|amp| model.op_amps[amp].is_some())).ok()
    }

    /// A transfer out of an adjoint solution.
    pub(super) fn transfer(&self, solved: &Solved<f64>, weights: &Weights<f64>, from: Main) -> f64 {
        match from {
            Main::Port(port) => solved.from_ports(weights)[port],
            Main::Pair(_, positive, negative) => {
                let ports = solved.from_ports(weights);
                (ports[positive] - ports[negative]) / 2.0
            }
            Main::Current(at) => {
                let (into, out_of) = self.current(at);
                weights.current(into) - weights.current(out_of)
            }
        }
    }

    /// The declared source resistance in front of a port, ohm.
    pub(super) fn series_resistance(&self, port: usize) -> Option<f64> {
        self.series(port).map(|series| series.ohms)
    }

    /// The node behind the declared source resistance of a port.
    pub(super) fn behind(&self, port: usize) -> Option<Node> {
        self.model().node(self.series(port)?.loaded)
    }

    fn series(&self, port: usize) -> Option<&'b SourceResistance> {
        let net = self.model().ports[port].net;
        self.board.circuit.series.iter().find(|series| series.open == net)
    }

    /// One unit of an input, the others at 0.
    pub(super) fn unit(&self, from: Main) -> Excitation<f64> {
        let ports = self.model().ports.len();
        match from {
            Main::Port(port) => Excitation::port(ports, port),
            Main::Pair(_, positive, negative) => {
                let mut excitation = Excitation { ports: List::from_elem(0.0, ports), ..Excitation::none() };
                excitation.ports[positive] = 0.5;
                excitation.ports[negative] = -0.5;
                excitation
            }
            Main::Current(at) => {
                let (into, out_of) = self.current(at);
                Excitation { injections: smallvec![(into, 1.0), (out_of, -1.0)], ..Excitation::none() }
            }
        }
    }

    fn current(&self, at: usize) -> (Node, Node) {
        self.board.currents(self.block).nth(at).unwrap_or((Node::Ground, Node::Ground))
    }

    /// Computes everything.
    pub fn review(&self, requirement: &Requirement) -> Review {
        let transfers = self.transfers();
        let main = self.main(&transfers);
        if let Some(fault) = &self.model().fault {
            let reason = explain(self.board.circuit, self.board.layout, fault);
            let figures = Kind::ALL.iter().map(|kind| Figure::unknown(*kind, reason.clone())).collect();
            let reach = Reach::unknown(reason);
            return Review { transfers, main, pins: Vec::new(), span: None, reach, figures };
        }
        let drive = Drive::of(self);
        let figures =
            Kind::ALL.iter().map(|kind| self.figure(*kind, &transfers, main, &drive, requirement)).collect();
        let reach = match main.map(|at| &transfers[at]) {
            Some(port) if !passes(port.ideal) => Reach::unknown("no transfer at DC"),
            port => reach::compute(self, port.map(|port| port.input.from), &drive.rest),
        };
        Review { transfers, main, pins: drive.pins(self), span: drive.span(self), reach, figures }
    }

    fn figure(
        &self,
        kind: Kind,
        transfers: &[Transfer],
        main: Option<usize>,
        drive: &Drive,
        requirement: &Requirement,
    ) -> Figure {
        let port = main.map(|at| &transfers[at]);
        if port.is_some_and(|transfer| !passes(transfer.ideal)) && kind != Kind::LoopGain {
            return Figure::unknown(kind, "no transfer at DC");
        }
        let from = port.map(|transfer| transfer.input.from);
        let intended = port.and_then(|transfer| requirement.intended(&transfer.input.name));
        let legs = || Legs::of(self, transfers, requirement.legs);
        match kind {
            Kind::GainError => gain_error::compute(self, from, intended),
            Kind::LoopGain => loop_gain::compute(self),
            Kind::FeedbackResistance => feedback_resistance::compute(self, from),
            Kind::FeedbackLoading | Kind::OutputCurrent => rated::compute(kind, self, from),
            Kind::BiasError => bias_error::compute(self),
            Kind::OffsetError => offset_error::compute(self, drive),
            Kind::OutputHeadroom => output_headroom::compute(self, drive),
            Kind::InputHeadroom => input_headroom::compute(self, drive),
            Kind::InputResistance => input_resistance::compute(self, transfers),
            Kind::SourceLoading => source_loading::compute(self, transfers),
            Kind::OutputResistance => output_resistance::compute(self),
            Kind::GainSpread => gain_spread::compute(self, from),
            Kind::Rejection => rejection::compute(self, legs()),
            Kind::CommonError => common_error::compute(self, legs()),
            Kind::ResistorPower => resistor_power::compute(self),
        }
    }

    /// Transfers from the inputs of the block to the output: signals first, then references, rails last,
    /// each in netlist order. Rails and references that the twin doesn't pass are left out.
    fn transfers(&self) -> Vec<Transfer> {
        let model = self.model();
        let Some(twin) = self.twin(&model.nominal) else { return Vec::new() };
        let ideal = twin.adjoint(&[(self.output(), 1.0)]);
        let known =
            !matches!(model.fault, Some(Fault::UnknownDevice(_) | Fault::NoGain(_) | Fault::Regenerative));
        let real = Solved::new(&model.network, model.nominal.clone()).ok().filter(|_| known);
        let weights = real.as_ref().map(|real| real.adjoint(&[(self.output(), 1.0)]));
        let make = |input: Input| Transfer {
            adjusts: real.as_ref().and_then(|_| self.adjusts(input.from)),
            ideal: self.transfer(&twin, &ideal, input.from),
            actual: real
                .as_ref()
                .zip(weights.as_ref())
                .map(|(real, weights)| self.transfer(real, weights, input.from)),
            input,
        };
        let transfers = self.all_inputs().into_iter().map(make);
        transfers.filter(|transfer| transfer.input.signal || passes(transfer.ideal)).collect()
    }

    /// Every input of the block: declared pairs, signals and currents, then references and rails.
    fn all_inputs(&self) -> Vec<Input> {
        let (circuit, layout) = (self.board.circuit, self.board.layout);
        let ports = &self.model().ports;
        let find = |net: NetId| ports.iter().position(|port| port.net == net && port.input);
        let mut inputs: Vec<Input> = Vec::new();
        for (at, pair) in circuit.pairs.iter().enumerate() {
            if let (Some(positive), Some(negative)) = (find(pair.positive), find(pair.negative)) {
                let from = Main::Pair(at, positive, negative);
                inputs.push(Input { from, name: pair.name.clone(), signal: true });
            }
        }
        let levels: Vec<u8> = ports.iter().map(|port| self.board.level(port.net)).collect();
        let best = ports.iter().zip(&levels).filter(|(port, _)| port.input).map(|(_, level)| *level).max();
        for wanted in [true, false] {
            for (at, (port, level)) in ports.iter().zip(&levels).enumerate() {
                let signal = 0 < *level && Some(*level) == best;
                if port.input && signal == wanted {
                    inputs.push(Input {
                        from: Main::Port(at),
                        name: circuit.net(port.net).name.clone(),
                        signal,
                    });
                }
            }
            if wanted {
                for (at, current) in layout.blocks[self.block].currents.iter().enumerate() {
                    let name = circuit.currents[*current as usize].name.clone();
                    inputs.push(Input { from: Main::Current(at), name, signal: true });
                }
            }
        }
        inputs
    }

    /// The main port: the declared pair; else the voltage signal with the largest ideal transfer, of equals
    /// the inverting one, then the first; a current only where there is no voltage.
    fn main(&self, transfers: &[Transfer]) -> Option<usize> {
        let signals = || transfers.iter().enumerate().filter(|(_, transfer)| transfer.input.signal);
        let pair = signals().find(|(_, transfer)| matches!(transfer.input.from, Main::Pair(..)));
        if let Some((at, _)) = pair {
            return Some(at);
        }
        let of = |wanted: fn(&Main) -> bool| {
            let most = signals()
                .filter(|(_, transfer)| wanted(&transfer.input.from))
                .fold(0.0f64, |most, (_, transfer)| most.max(transfer.ideal.abs()));
            let near = move |transfer: &Transfer| most * (1.0 - 1e-6) <= transfer.ideal.abs();
            let largest = signals().filter(move |(_, t)| wanted(&t.input.from) && near(t));
            largest.min_by_key(|(at, transfer)| (0.0 < transfer.ideal, *at)).map(|(at, _)| at)
        };
        of(|from| matches!(from, Main::Port(_))).or_else(|| of(|from| matches!(from, Main::Current(_))))
    }
}

/// Why a block has no figures, in words.
pub fn explain(circuit: &Circuit, layout: &Layout, fault: &Fault) -> String {
    let net = |net: &NetId| circuit.net(*net).name.as_str();
    let op_amp = |at: &u32| &circuit.op_amps[*at as usize];
    match fault {
        Fault::NoPath(at) => format!("no DC path to the input on net {}", net(at)),
        Fault::NoValue(at) => format!("{} has no value that can be used", circuit.element(*at).name),
        Fault::ShortLoop(at) => format!(
            "{} closes a loop of voltage sources or inductors, or ties two held voltages together",
            circuit.element(*at).name
        ),
        Fault::UnknownDevice(at) => format!("unknown device {} ({})", op_amp(at).model, op_amp(at).name),
        Fault::NoGain(at) => format!("the profile of {} gives no open-loop gain", op_amp(at).name),
        Fault::TooLarge(size) => {
            format!("its block has {size} unknowns or resistors, too many to solve together")
        }
        Fault::Singular(Some(at)) => format!("its equations have no single solution at net {}", net(at)),
        Fault::Singular(None) => "its equations have no single solution".to_owned(),
        Fault::Inexact(left) => {
            format!("its solution leaves a share of {left:.1e} unexplained: the values are too far apart")
        }
        Fault::NoTwin(Some(at)) if matches!(layout.role(*at), Role::Output(_)) => {
            format!("no transfer at DC: nothing closes the loop from {}", net(at))
        }
        Fault::NoTwin(_) => "no transfer at DC: no feedback path conducts".to_owned(),
        Fault::OutsideLoop(at) => {
            format!("its loop closes through {}, which is not modelled", circuit.element(*at).name)
        }
        Fault::NonLinear(at) => format!("{} makes it non-linear by intent", circuit.element(*at).name),
        Fault::OpenLoop => "no network closes its loop: a comparator, or feedback is missing".to_owned(),
        Fault::Regenerative => {
            "the DC feedback regenerates: the inputs are exchanged, or it is a switching stage".to_owned()
        }
    }
}

/// Whether a transfer counts as one.
fn passes(ideal: f64) -> bool {
    1e-12 < ideal.abs()
}

impl Requirement {
    /// The intended gain from an input of that name, which for a single number is the main one.
    pub fn intended(&self, input: &str) -> Option<f64> {
        let named = self.gains.iter().find(|(name, _)| name.eq_ignore_ascii_case(input));
        named.map(|(_, gain)| *gain).or(self.gain)
    }
}
