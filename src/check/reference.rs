//! What can be looked up without a board: topics and devices, out of the same packs that boards are judged by.

use crate::check::files::{self, Packs};
use crate::device::Catalogue;
use crate::report::Topic;
use crate::source::Sources;
use std::path::PathBuf;

/// Everything that can be looked up.
#[derive(Debug)]
pub struct Reference {
    /// Every slug explained.
    pub topics: Vec<Topic>,
    /// Profiles, embedded ones first.
    pub catalogue: Catalogue,
    /// Files that were named and can't be read or used, with their faults.
    pub unusable: Vec<String>,
}

/// Reads the embedded packs and those named.
pub fn reference(devices: &[PathBuf], rules: &[PathBuf]) -> Reference {
    let mut sources = Sources::default();
    let packs = files::packs(&mut sources, devices, rules);
    let topics = Topic::all(&sources, &packs.rules);
    let unusable = complaints(&sources, &packs);
    Reference { topics, catalogue: packs.catalogue, unusable }
}

/// `devices.yaml:3:5: there is no parameter ...` for each fault, then the files.
fn complaints(sources: &Sources, packs: &Packs) -> Vec<String> {
    let fault = |fault: &crate::diagnostic::Diagnostic| match fault.labels.first() {
        Some(label) => {
            let place = sources.place(label.span);
            let path = &sources.file(label.span.file).path;
            format!("{path}:{}:{}: {}", place.line, place.column, fault.message)
        }
        None => fault.message.clone(),
    };
    packs.faults.iter().map(fault).chain(packs.unusable.iter().cloned()).collect()
}
