//! The whole road on one screen: netlist, circuit, blocks, board, figures, findings, report. With `main`
//! and `cli` the only place that reads and writes files.

mod board;
mod cover;
mod embedded;
mod files;
mod names;
mod reference;
mod stages;

pub use reference::{Reference, reference};

use crate::device::Technology;
use crate::diagnostic::Severity;
use crate::report::{BoardReport, Report, Verdict};
use crate::source::Sources;
use std::path::{Path, PathBuf};

/// What a run is asked to do.
#[derive(Debug, Clone, Default)]
pub struct Options {
    /// Netlists or folders of netlists.
    pub paths: Vec<PathBuf>,
    /// The budget of the one netlist; else each board's own is found beside it.
    pub budget: Option<PathBuf>,
    /// Files or folders of further profiles.
    pub devices: Vec<PathBuf>,
    /// Further rule packs.
    pub rules: Vec<PathBuf>,
    /// What op amps of unknown devices are taken to be built of.
    pub assume_technology: Option<Technology>,
    /// Unwaived findings of this severity or above fail; an error where left out.
    pub fail_on: Option<Severity>,
    /// Whether every value's origin and formula is told.
    pub detail: bool,
    /// Random trials of each figure.
    pub trials: u32,
    /// Values that stand for the netlist's own: element and value as written.
    pub with: Vec<(String, f64)>,
    /// Whether an incomplete run fails.
    pub complete: bool,
}

/// A finished run.
#[derive(Debug)]
pub struct Outcome {
    /// Every text that was read.
    pub sources: Sources,
    /// What was found.
    pub report: Report,
    /// Files that were named, or belong to one that was, and can't be read or used.
    pub unusable: Vec<String>,
    complete: bool,
}

impl Outcome {
    /// 1 for fail; 2 when a file can't be read or used, or no op amp of the run could be analysed;
    /// 1 for incomplete where completeness is asked for; else 0.
    pub fn status(&self) -> u8 {
        let analysed: usize =
            self.report.boards.iter().map(|board| board.coverage.analysed + board.coverage.non_linear).sum();
        if !self.unusable.is_empty() || analysed == 0 {
            2
        } else if self.report.verdict == Verdict::Fail
            || (self.complete && self.report.verdict == Verdict::Incomplete)
        {
            1
        } else {
            0
        }
    }
}

/// Checks every board that the options name.
pub fn run(options: &Options) -> Outcome {
    let mut sources = Sources::default();
    let packs = files::packs(&mut sources, &options.devices, &options.rules);
    let mut unusable = packs.unusable.clone();
    let mut boards: Vec<BoardReport> = Vec::new();
    for path in &options.paths {
        for netlist in found(path, &mut unusable) {
            let checked = board::check(&mut sources, &packs, options, &netlist);
            unusable.extend(checked.unusable);
            boards.push(checked.report);
        }
    }
    if let Some(first) = boards.first_mut() {
        let faults = packs.faults.iter().cloned().map(Into::into);
        first.findings.splice(0..0, faults);
    }
    let verdict = boards.iter().map(|board| board.verdict).max().unwrap_or(Verdict::Incomplete);
    Outcome { sources, report: Report { verdict, boards }, unusable, complete: options.complete }
}

/// The embedded profiles and what is assumed beside them.
pub fn catalogue() -> crate::device::Catalogue {
    files::packs(&mut Sources::default(), &[], &[]).catalogue
}

fn found(path: &Path, unusable: &mut Vec<String>) -> Vec<PathBuf> {
    let netlists = files::netlists(path);
    if netlists.is_empty() {
        unusable.push(format!("{}: no netlist in it", path.display()));
    }
    netlists
}
