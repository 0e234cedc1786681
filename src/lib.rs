//! Checks every op-amp stage of a netlist against its error budget.
//!
//! Data goes one way: text, netlist, circuit, blocks, solution, figures and facts, findings, report.
//! The modules stand in that order and use only those before them.

pub mod source;
pub mod quantity;
pub mod diagnostic;
pub mod yaml;
pub mod netlist;
pub mod device;
pub mod budget;
pub mod circuit;
pub mod block;
pub mod solve;
pub mod figure;
pub mod rule;
pub mod report;
pub mod check;
pub mod cli;
