//! A stage alone: the other outputs of its block held.

use crate::figure::stage::{Input, Main, Stage, Transfer};
use crate::solve::{Model, Node, Solved};

impl Stage<'_> {
    /// Transfers of the stage from its own ports with the block's other outputs held; `None` in a block of
    /// one.
    pub fn local(&self) -> Option<Vec<Transfer>> {
        let block = self.board.layout.local(self.cut().members[self.member])?;
        let model = Model::new(self.board.circuit, self.board.layout, block, &self.board.devices);
        let output = Node::Unknown(model.network.amps.first()?.output?);
        let solve = |values| {
            let solved = Solved::new(&model.network, values).ok()?;
            Some(solved.from_ports(&solved.adjoint(&[(output, 1.0)])))
        };
        let ideal = solve(model.nominal.twin(|amp| model.op_amps[amp].is_some()))?;
        let actual = solve(model.nominal.clone());
        let ports = block.ports.iter().enumerate().filter(|(_, port)| port.input);
        let transfers = ports.map(|(at, port)| Transfer {
            input: Input {
                from: Main::Port(at),
                name: self.board.circuit.net(port.net).name.clone(),
                signal: 0 < self.board.level(port.net),
            },
            adjusts: None,
            ideal: ideal[at],
            actual: actual.as_ref().map(|actual| actual[at]),
        });
        Some(transfers.filter(|transfer| transfer.ideal != 0.0).collect())
    }
}
