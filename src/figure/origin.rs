//! Where the value behind a line of a ledger comes from.

use crate::circuit::ElementKind;
use crate::device::Rank;
use crate::figure::ledger::{Item, Line};
use crate::figure::stage::Stage;
use crate::quantity::{Unit, percent, show};
use crate::source::Sources;

impl Stage<'_> {
    /// The origin of a line's value: netlist line, profile entry with its source, budget, or assumed.
    pub fn origin(&self, line: &Line, sources: &Sources) -> Option<String> {
        let circuit = self.board.circuit;
        let place = |span: crate::source::Span| {
            format!("{}:{}", sources.file(span.file).path, sources.place(span).line)
        };
        match line.item {
            Item::OpAmp(at, quality) => {
                let stage = Stage { op_amp: at, ..*self };
                let profile = stage.profile().map_or("no profile", |profile| profile.name.as_str());
                let found = stage.spread(quality.key(), 0.0).map(|spread| spread.source.to_owned());
                let source = found.unwrap_or_else(|| "nothing stated, bounds of its class".to_owned());
                Some(format!("{profile}: {source}{}", rank(line.rank)))
            }
            Item::Resistor(id) | Item::Group(id) => {
                let element = circuit.element(id);
                let ElementKind::Resistor(part) = element.kind else { return None };
                let spread = match (line.item, part.group) {
                    (Item::Resistor(_), Some((_, ratio))) => format!("half of ratio {}", percent(ratio)),
                    _ => percent(part.tolerance),
                };
                let from = element.span.map_or_else(|| "budget".to_owned(), place);
                Some(format!("{from}, tolerance {spread}{}", rank(line.rank)))
            }
            Item::Rail(net) => {
                let volts = circuit.potential(net).map(|potential| show(potential.nominal, Unit::Volt));
                Some(format!("rail {}{}", volts.unwrap_or_default(), rank(line.rank)))
            }
            Item::Upstream(_) => Some(format!("the stage before{}", rank(line.rank))),
            Item::Nominal | Item::Values | Item::HigherOrder => None,
        }
    }
}

fn rank(rank: Rank) -> &'static str {
    match rank {
        Rank::Guaranteed => "",
        Rank::Typical => " (typical, derated)",
        Rank::Assumed => " (assumed)",
    }
}
