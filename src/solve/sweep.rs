//! The rows of all outputs: swept forward until they stand still, and where they don't, solved together.

use crate::block::{AmpId, Role};
use crate::solve::board::{Board, Row};
use crate::solve::model::Fault;
use crate::solve::{List, Node, Solved};
use nalgebra::{DMatrix, DVector, LU};
use petgraph::algo::tarjan_scc;
use petgraph::graph::{DiGraph, NodeIndex};
use petgraph::visit::EdgeRef;
use rustc_hash::FxHashMap;

/// Rows are swept forward until none moves by more than this share of its largest entry.
const STILL: f64 = 1e-13;
/// Random boards took 6 sweeps at most; where low resistances tie the outputs of weak op amps together
/// sweeps close in slowly or not at all, and these outputs are solved together.
const MOST_SWEEPS: usize = 40;
/// More outputs than this aren't solved together: a dense solution would take minutes.
const MOST_TOGETHER: usize = 400;

/// Transfers of a block's outputs from its ports, and what each has of the block's own.
struct Step {
    outputs: Vec<(List<f64>, Row)>,
    looks_ahead: bool,
}

impl Board<'_> {
    /// Fills in the rows; returns the blocks that have none, for the loads between them regenerate.
    pub(super) fn sweep(&mut self) -> Vec<(usize, Fault)> {
        let steps: Vec<Option<Step>> = (0..self.models.len()).map(|at| self.step(at)).collect();
        let looks_ahead = steps.iter().flatten().any(|step| step.looks_ahead);
        self.rows.iter_mut().for_each(Vec::clear);
        let mut moved: Vec<AmpId> = Vec::new();
        for _ in 0..MOST_SWEEPS {
            moved.clear();
            for (at, step) in steps.iter().enumerate() {
                let Some(step) = step else { continue };
                for ((ports, own), amp) in step.outputs.iter().zip(&self.layout.blocks[at].members) {
                    let row = self.compose(at, ports, own);
                    if looks_ahead && differs(&self.rows[amp.0 as usize], &row) {
                        moved.push(*amp);
                    }
                    self.rows[amp.0 as usize] = row;
                }
            }
            if moved.is_empty() {
                return Vec::new();
            }
        }
        self.solve_together(&steps, &moved)
    }

    fn step(&self, at: usize) -> Option<Step> {
        let model = &self.models[at];
        if model.fault.is_some() {
            return None;
        }
        let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
        let outputs = (0..model.network.members).map(|member| {
            let output = model.network.amps[member].output.map_or(Node::Ground, Node::Unknown);
            let weights = solved.adjoint(&[(output, 1.0)]);
            let own = self.own(at, |node| weights.current(node), solved.from_shorts(&weights));
            (solved.from_ports(&weights), own)
        });
        let looks_ahead = model.ports.iter().any(|port| match port.role {
            Role::Output(amp) => at < self.place[amp.0 as usize].0,
            _ => false,
        });
        Some(Step { outputs: outputs.collect(), looks_ahead })
    }

    /// Solves the outputs that sweeps didn't settle, group by group of those that depend on each other.
    fn solve_together(&mut self, steps: &[Option<Step>], moved: &[AmpId]) -> Vec<(usize, Fault)> {
        let mut graph: DiGraph<AmpId, f64> = DiGraph::new();
        let mut node: Vec<Option<NodeIndex>> = vec![None; self.rows.len()];
        for amp in moved {
            node[amp.0 as usize] = Some(graph.add_node(*amp));
        }
        for (amp, to) in moved.iter().zip(graph.node_indices().collect::<Vec<_>>()) {
            let (block, member) = self.place[amp.0 as usize];
            let Some((ports, _)) = steps[block].as_ref().map(|step| &step.outputs[member]) else { continue };
            for (port, transfer) in self.models[block].ports.iter().zip(ports) {
                if let (Role::Output(from), true) = (port.role, *transfer != 0.0)
                    && let Some(from) = node[from.0 as usize]
                {
                    graph.add_edge(from, to, *transfer);
                }
            }
        }
        let mut faults = Vec::new();
        // Those that feed others come last out of the components.
        for group in tarjan_scc(&graph).into_iter().rev() {
            if let Some(fault) = self.solve_group(steps, &graph, &group) {
                let blocks = group.iter().map(|at| self.place[graph[*at].0 as usize].0);
                faults.extend(blocks.map(|block| (block, fault.clone())));
            }
        }
        faults
    }

    /// Solves `rows = transfers * rows + rest` for one group.
    fn solve_group(
        &mut self,
        steps: &[Option<Step>],
        graph: &DiGraph<AmpId, f64>,
        group: &[NodeIndex],
    ) -> Option<Fault> {
        if MOST_TOGETHER < group.len() {
            return Some(Fault::TooLarge(group.len()));
        }
        let amps: Vec<usize> = group.iter().map(|at| graph[*at].0 as usize).collect();
        amps.iter().for_each(|amp| self.rows[*amp].clear());
        let rest: Vec<Row> = amps
            .iter()
            .map(|amp| {
                let (block, member) = self.place[*amp];
                let output = steps[block].as_ref().map(|step| &step.outputs[member]);
                output.map_or_else(Row::new, |(ports, own)| self.compose(block, ports, own))
            })
            .collect();
        let mut matrix = DMatrix::<f64>::identity(group.len(), group.len());
        let place: FxHashMap<NodeIndex, usize> =
            group.iter().enumerate().map(|(at, node)| (*node, at)).collect();
        for (from, node) in group.iter().enumerate() {
            for edge in graph.edges(*node) {
                if let Some(to) = place.get(&edge.target()) {
                    matrix[(*to, from)] -= edge.weight();
                }
            }
        }
        let lu = LU::new(matrix);
        // As with a block: with dead amplifiers the determinant is above 0; below, a real pole is to the right.
        let stable = 0.0 < lu.determinant();
        if !stable {
            return Some(Fault::Regenerative);
        }
        let mut primaries: Vec<u32> = rest.iter().flatten().map(|(at, _)| *at).collect();
        primaries.sort_unstable();
        primaries.dedup();
        for primary in primaries {
            let entry =
                |row: &Row| row.iter().find(|(at, _)| *at == primary).map_or(0.0, |(_, entry)| *entry);
            let right = DVector::from_iterator(rest.len(), rest.iter().map(entry));
            let solution = lu.solve(&right)?;
            for (amp, value) in amps.iter().zip(&solution) {
                if *value != 0.0 {
                    self.rows[*amp].push((primary, *value));
                }
            }
        }
        None
    }
}

fn differs(old: &Row, new: &Row) -> bool {
    let most = new.iter().fold(0.0f64, |most, (_, entry)| most.max(entry.abs()));
    let still = |x: f64, y: f64| (x - y).abs() <= STILL * most;
    old.len() != new.len() || !old.iter().zip(new).all(|((a, x), (b, y))| a == b && still(*x, *y))
}
