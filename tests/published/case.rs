//! One printed value: the circuit, the device, what is asked, and how near it must come.

use super::source::{CLOSED_FORM, Print, Source};
use crate::support;
use serde_json::Value;

/// How near the tool must come.
#[derive(Debug, Clone, Copy)]
pub enum Within {
    /// Half of this, the place of the last printed digit.
    Digit(f64),
    /// This much, because the print is rounded or linearised further than its digits say.
    Loose(f64, &'static str),
}

/// A number of the report. Stages and inputs by name.
#[derive(Debug, Clone, Copy)]
pub enum Ask {
    /// Transfer of the twin from an input: stage, input.
    Ideal(&'static str, &'static str),
    /// Transfer with the real op amp: stage, input.
    Actual(&'static str, &'static str),
    /// Voltage of a pin at the high end of the ranges: stage, pin as the report calls it.
    Pin(&'static str, &'static str),
    /// Nominal value of a figure: stage, slug.
    Nominal(&'static str, &'static str),
    /// Worst case of a figure: stage, slug.
    Worst(&'static str, &'static str),
    /// Root sum square of a figure: stage, slug.
    Rss(&'static str, &'static str),
    /// Magnitude of a ledger line: stage, slug, item.
    Effect(&'static str, &'static str, &'static str),
    /// A number that the example itself gives.
    Given(f64),
    /// So many times another number.
    Times(f64, &'static Ask),
    /// A sum.
    Sum(&'static [Ask]),
    /// A root sum square.
    RootSumSquare(&'static [Ask]),
}

/// One printed value.
#[derive(Debug, Clone, Copy)]
pub struct Case {
    /// Short name.
    pub id: &'static str,
    /// The document.
    pub source: Source,
    /// Where in it.
    pub place: &'static str,
    /// How the value was seen.
    pub print: Print,
    /// The circuit without title and supplies; op amps are `OPX` between VCC and VEE.
    pub netlist: &'static [&'static str],
    /// What the example says of the op amp; all else is ideal.
    pub device: &'static [(&'static str, &'static str)],
    /// The supplies.
    pub rails: &'static str,
    /// Tolerance of every resistor.
    pub tolerance: &'static str,
    /// Further lines of the budget.
    pub budget: &'static str,
    /// What is asked.
    pub ask: Ask,
    /// What is printed.
    pub printed: f64,
    /// How near.
    pub within: Within,
}

/// A row with all that most rows share; each row gives the rest.
pub const BLANK: Case = Case {
    id: "",
    source: CLOSED_FORM,
    place: "",
    print: Print::Companion,
    netlist: &[],
    device: &[],
    rails: "{ VCC: 15 V +/- 0 V, VEE: -15 V +/- 0 V }",
    tolerance: "0 %",
    budget: "",
    ask: Ask::Given(f64::NAN),
    printed: 0.0,
    within: Within::Digit(0.0),
};

/// The op amp of an example that says nothing of it.
const IDEAL: &[(&str, &str)] = &[
    ("open-loop-gain", "1e15"),
    ("input-resistance", "1e15 ohm"),
    ("common-mode-resistance", "1e15 ohm"),
    ("output-resistance", "0.000001 ohm"),
    ("bias-current", "0 A"),
    ("offset-current", "0 A"),
    ("offset-voltage", "0 V"),
    ("offset-drift", "0 V/K"),
    ("common-mode-rejection", "300 dB"),
    ("supply-rejection", "300 dB"),
    ("swing-below-positive", "0 V"),
    ("swing-above-negative", "0 V"),
    ("input-below-positive", "0 V"),
    ("input-above-negative", "0 V"),
    ("output-current", "1 A"),
];

impl Within {
    fn volts(self) -> f64 {
        match self {
            Within::Digit(place) => place / 2.0,
            Within::Loose(most, _) => most,
        }
    }
}

impl Case {
    /// The board in the report.
    fn board(&self) -> Value {
        let netlist = format!("{}\n{}\nVP VCC 0 15\nVN VEE 0 -15\n.end\n", self.id, self.netlist.join("\n"));
        let budget = format!(
            "rails: {}\ntolerance: {{ resistor: {} }}\n{}\n",
            self.rails, self.tolerance, self.budget
        );
        support::check(&netlist, &budget, &self.profile())
    }

    /// A profile in which the typical value of everything is its limit too.
    fn profile(&self) -> String {
        let stated = |name: &str| self.device.iter().any(|(known, _)| *known == name);
        let rest = IDEAL.iter().filter(|(name, _)| !stated(name));
        let parameters: Vec<String> = self
            .device
            .iter()
            .chain(rest)
            .map(|(name, value)| format!("    {name}: {{ min: {value}, typ: {value}, max: {value} }}\n"))
            .collect();
        format!(
            "- device: OPX\n  technology: bipolar\n  sections: 1\n  pins: [non-inverting, inverting, \
             positive-supply, negative-supply, output]\n  source: the example\n  parameters:\n{}",
            parameters.concat()
        )
    }
}

/// What is wrong with a row: its id, the printed value and the tool's; `None` where they agree.
pub fn failure(case: &Case) -> Option<String> {
    let board = case.board();
    let differs = match answer(&board, case.ask) {
        Some(found) if (found - case.printed).abs() <= case.within.volts() * (1.0 + 1e-9) => return None,
        Some(found) => format!("printed {}, gainsay {found}", case.printed),
        None => format!("printed {}, gainsay gives no number: {}", case.printed, messages(&board)),
    };
    let why = match case.within {
        Within::Digit(_) => "",
        Within::Loose(_, why) => why,
    };
    Some(format!(
        "{}: {differs} (within {}{}{why}; {:?}, {}, {}, {})",
        case.id,
        case.within.volts(),
        if why.is_empty() { "" } else { ": " },
        case.print,
        case.source.publisher,
        case.source.title,
        case.place,
    ))
}

/// What the report says in words, where it has no number.
fn messages(board: &Value) -> String {
    let findings = board["findings"].as_array().into_iter().flatten();
    let messages: Vec<&str> = findings.filter_map(|finding| finding["message"].as_str()).collect();
    messages.join("; ")
}

/// What the report answers.
fn answer(board: &Value, ask: Ask) -> Option<f64> {
    let part =
        |stage: &str, slug: &str, part: &str| support::stage(board, stage)["figures"][slug][part].as_f64();
    let transfer = |stage: &str, input: &str, kind: &str| {
        let transfers = support::stage(board, stage)["transfers"].as_array()?;
        transfers.iter().find(|transfer| transfer["input"] == input)?[kind].as_f64()
    };
    match ask {
        Ask::Ideal(stage, input) => transfer(stage, input, "ideal"),
        Ask::Actual(stage, input) => transfer(stage, input, "actual"),
        Ask::Pin(stage, pin) => {
            let pins = support::stage(board, stage)["pins"].as_array()?;
            pins.iter().find(|pins| pins["at"] == "high")?[pin].as_f64()
        }
        Ask::Nominal(stage, slug) => part(stage, slug, "nominal"),
        Ask::Worst(stage, slug) => part(stage, slug, "worst"),
        Ask::Rss(stage, slug) => part(stage, slug, "rss"),
        Ask::Effect(stage, slug, item) => {
            let ledger = support::stage(board, stage)["figures"][slug]["ledger"].as_array()?;
            let line = ledger.iter().find(|line| line["item"] == format!("{stage} {item}"))?;
            line["effect"].as_f64().map(f64::abs)
        }
        Ask::Given(value) => Some(value),
        Ask::Times(factor, ask) => Some(factor * answer(board, *ask)?),
        Ask::Sum(asks) => asks.iter().map(|ask| answer(board, *ask)).sum(),
        Ask::RootSumSquare(asks) => {
            let squares: Option<f64> = asks.iter().map(|ask| Some(answer(board, *ask)?.powi(2))).sum();
            squares.map(f64::sqrt)
        }
    }
}
