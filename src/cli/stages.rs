//! `gainsay stages`: what was found, and what each stage can do.

use super::{Board, complain, print, style};
use crate::check::{self, Options};
use crate::report::stages_text;
use std::path::PathBuf;

/// What `stages` takes.
#[derive(Debug, clap::Args)]
pub(super) struct Stages {
    /// Netlists, or folders to look for netlists in.
    #[arg(required = true, value_name = "NETLIST")]
    paths: Vec<PathBuf>,
    #[command(flatten)]
    board: Board,
}

pub(super) fn run(asked: Stages) -> u8 {
    let outcome = check::run(&Options { paths: asked.paths, ..asked.board.options() });
    complain(&outcome.unusable);
    let found = outcome.report.boards.iter().any(|board| 0 < board.coverage.op_amps);
    if print(&stages_text(&outcome.report, style(true))) && outcome.unusable.is_empty() && found {
        0
    } else {
        2
    }
}
