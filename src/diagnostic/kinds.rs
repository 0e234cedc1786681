//! What each kind of fault means and what to do about it, in the words that `explain` uses.

mod analysis;
mod netlist;
mod yaml;

/// One kind of fault of reading or analysis.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct KindDoc {
    /// Its name in reports.
    pub slug: &'static str,
    /// Its name in a list.
    pub title: &'static str,
    /// What it says, in a sentence or two.
    pub meaning: &'static str,
    /// Where the expectation comes from that isn't met.
    pub source: &'static str,
    /// What to do.
    pub cure: &'static str,
}

impl KindDoc {
    /// Every kind of fault: of netlists, of YAML files, of the analysis.
    pub fn all() -> impl Iterator<Item = &'static KindDoc> {
        netlist::KINDS.iter().chain(yaml::KINDS).chain(analysis::KINDS)
    }
}
