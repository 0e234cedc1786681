//! Stages in the JSON report: transfers, voltages and figures.

use super::{not_finite, unit};
use crate::device::Rank;
use crate::figure::Bad;
use crate::report::{Coverage, FigureReport, LedgerLine, PinReport, StageReport, TransferReport};
use serde::{Serialize, Serializer};

/// One stage.
#[derive(Serialize)]
pub(super) struct Stage<'a> {
    id: &'a str,
    device: &'a str,
    topology: &'a str,
    group: Option<&'a str>,
    output: &'a str,
    transfers: Vec<Transfer<'a>>,
    local: Option<Vec<Transfer<'a>>>,
    pins: Vec<Pins>,
    figures: Figures<'a>,
}

#[derive(Serialize)]
struct Transfer<'a> {
    input: &'a str,
    unit: &'static str,
    frequency: f64,
    ideal: f64,
    actual: Option<f64>,
    error: Option<f64>,
    /// Least and greatest over the travel of adjustable parts.
    #[serde(skip_serializing_if = "Option::is_none")]
    adjusts: Option<[f64; 2]>,
    #[serde(skip_serializing_if = "Option::is_none")]
    reason: Option<String>,
}

#[derive(Serialize)]
struct Pins {
    at: &'static str,
    #[serde(rename = "in+")]
    plus: f64,
    #[serde(rename = "in-")]
    minus: f64,
    out: f64,
    difference: f64,
    twin_out: f64,
    #[serde(skip_serializing_if = "Option::is_none")]
    reason: Option<String>,
}

/// Figures by their slugs, in the order of the report.
struct Figures<'a>(&'a [FigureReport]);

#[derive(Serialize)]
struct Figure<'a> {
    unit: &'static str,
    bad: &'static str,
    nominal: Option<f64>,
    worst: Option<f64>,
    rss: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    sign: Option<f64>,
    limit: Option<f64>,
    stated: bool,
    status: &'static str,
    reason: Option<String>,
    data: Rank,
    /// Unit of the ledger's effects, where it isn't the figure's.
    #[serde(skip_serializing_if = "Option::is_none")]
    ledger_unit: Option<&'static str>,
    ledger: Vec<Line<'a>>,
}

#[derive(Serialize)]
struct Line<'a> {
    item: &'a str,
    effect: f64,
    share: Option<f64>,
    #[serde(skip_serializing_if = "std::ops::Not::not")]
    against: bool,
}

impl<'a> Stage<'a> {
    pub(super) fn new(stage: &'a StageReport, coverage: &'a Coverage) -> Stage<'a> {
        let skipped = coverage.skipped.iter().find(|(element, _)| *element == stage.id);
        let skipped = skipped.map(|(_, reason)| reason.as_str());
        let transfers = |list: &'a [TransferReport]| -> Vec<Transfer<'a>> {
            list.iter().map(|transfer| Transfer::new(transfer, skipped)).collect()
        };
        Stage {
            id: &stage.id,
            device: &stage.device,
            topology: &stage.topology,
            group: stage.group.as_deref(),
            output: &stage.output,
            transfers: transfers(&stage.transfers),
            local: stage.local.as_deref().map(transfers),
            pins: stage.pins.iter().map(Pins::new).collect(),
            figures: Figures(&stage.figures),
        }
    }
}

impl<'a> Transfer<'a> {
    /// `skipped` is why the op amp wasn't analysed, where it wasn't.
    fn new(transfer: &'a TransferReport, skipped: Option<&str>) -> Transfer<'a> {
        let TransferReport { input, unit, frequency, ideal, actual, error, adjusts } = transfer;
        let reason = match (actual, error) {
            (None, _) => skipped.map(str::to_owned),
            (Some(_), None) if *ideal == 0.0 => Some("the ideal transfer is 0".to_owned()),
            _ => not_finite(&[("ideal", Some(*ideal)), ("actual", *actual), ("error", *error)]),
        };
        Transfer {
            input,
            unit,
            frequency: *frequency,
            ideal: *ideal,
            actual: *actual,
            error: *error,
            adjusts: adjusts.map(|(low, high)| [low, high]),
            reason,
        }
    }
}

impl Pins {
    fn new(pins: &PinReport) -> Pins {
        let PinReport { at, plus, minus, out, difference, twin_out } = *pins;
        let named = [("in+", plus), ("in-", minus), ("out", out), ("twin_out", twin_out)];
        let reason = not_finite(&named.map(|(name, value)| (name, Some(value))));
        Pins { at, plus, minus, out, difference, twin_out, reason }
    }
}

impl Serialize for Figures<'_> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_map(self.0.iter().map(|figure| (figure.slug, Figure::new(figure))))
    }
}

impl<'a> Figure<'a> {
    fn new(figure: &'a FigureReport) -> Figure<'a> {
        let numbers = [
            ("nominal", figure.nominal),
            ("worst", figure.worst),
            ("rss", figure.rss),
            ("limit", figure.limit),
        ];
        Figure {
            unit: unit(figure.unit),
            bad: bad(figure.bad),
            nominal: figure.nominal,
            worst: figure.worst,
            rss: figure.rss,
            sign: figure.sign,
            limit: figure.limit,
            stated: figure.stated,
            status: figure.status.word(),
            reason: figure.reason.clone().or_else(|| not_finite(&numbers)),
            data: figure.data,
            ledger_unit: (figure.ledger_unit != figure.unit).then(|| unit(figure.ledger_unit)),
            ledger: figure.ledger.iter().map(Line::new).collect(),
        }
    }
}

impl<'a> Line<'a> {
    fn new(line: &'a LedgerLine) -> Line<'a> {
        Line { item: &line.item, effect: line.effect, share: line.share, against: line.against }
    }
}

/// The word for the side on which a figure turns bad.
fn bad(bad: Bad) -> &'static str {
    match bad {
        Bad::Either => "either",
        Bad::Low => "low",
        Bad::High => "high",
    }
}
