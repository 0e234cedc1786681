//! Rule packs, limits, judging, findings, waivers.

use crate::device::Technology;
use crate::diagnostic::Severity;
use crate::source::Span;

mod fact;
mod finding;
mod judge;
mod read;

pub use fact::{FACTS, FactDoc};
pub use finding::{Finding, Waived};
pub use judge::{Judged, Subject, judge, shown};
pub use read::read_pack;

/// One entry of a rule pack: a figure or fact with its limit, severity, scope, reason and source.
#[derive(Debug, Clone, PartialEq)]
pub struct Rule {
    /// Slug of the figure or fact.
    pub name: String,
    /// What the figure must keep; `None` for facts and for figures that are only reported.
    pub limit: Option<Limit>,
    /// Nominal past it, though inside the limit, warns.
    pub guard: Option<Limit>,
    /// Ceiling of the severity.
    pub severity: Severity,
    /// Where the rule applies; of several entries for one figure the last that applies counts.
    pub scope: RuleScope,
    /// Why the limit is what it is.
    pub reason: String,
    /// Where it comes from; `common practice` where it has no document.
    pub source: String,
    /// Where it is written.
    pub span: Option<Span>,
}

/// A limit as a pack states it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Limit {
    /// A value in the figure's unit.
    Value(f64),
    /// A share of the declared output span, else of the guaranteed swing: `2 % of span`.
    ShareOfSpan(f64),
    /// The device's rated load: `rated load`.
    RatedLoad,
    /// The highest frequency of the declared band: `top of band`.
    TopOfBand,
}

/// Where a rule applies; an empty list means everywhere.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct RuleScope {
    /// Topology names.
    pub topology: Vec<String>,
    /// Technologies.
    pub technology: Vec<Technology>,
    /// Profile names, `*` allowed.
    pub device: Vec<String>,
    /// Stage ids, `*` allowed.
    pub designator: Vec<String>,
}

/// The verdict over one figure.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Status {
    /// Inside its limit, or without one.
    Within,
    /// It couldn't be computed or judged.
    Unknown,
    /// A warning.
    Marginal,
    /// An error.
    Broken,
}

impl Status {
    /// The word in reports.
    pub fn word(self) -> &'static str {
        match self {
            Status::Within => "within",
            Status::Unknown => "unknown",
            Status::Marginal => "marginal",
            Status::Broken => "broken",
        }
    }
}
