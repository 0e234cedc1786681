//! Values, tolerances and names as the circuit keeps them.

use crate::budget::Budget;
use crate::circuit::{Drive, ElementKind, Part};
use crate::device::{Assumed, Rank};
use crate::source::matches;

/// Which passive a part is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Passive {
    Resistor,
    Capacitor,
    Inductor,
}

/// Value and tolerance of a passive: what `parts` says, else the netlist, else the budget's default,
/// else what is assumed. Resistor drift adds over the farther end of the temperature range from 25 degC.
pub(super) fn part(
    budget: &Budget,
    assumed: &Assumed,
    name: &str,
    passive: Passive,
    value: Option<f64>,
    (stated, rating): (Option<f64>, Option<f64>),
) -> Part {
    let exceptions = || {
        budget
            .parts
            .iter()
            .enumerate()
            .rev()
            .filter(|(_, part)| part.matches.iter().any(|pattern| matches(&pattern.text, name)))
    };
    let default = match passive {
        Passive::Resistor => (budget.tolerance.resistor, assumed.resistor),
        Passive::Capacitor => (budget.tolerance.capacitor, assumed.capacitor),
        Passive::Inductor => (budget.tolerance.inductor, assumed.capacitor),
    };
    let declared = exceptions().find_map(|(_, part)| part.tolerance).or(stated).or(default.0);
    let drift = exceptions().find_map(|(_, part)| part.drift).or(budget.tolerance.resistor_drift);
    let heat = budget.temperature.map_or(0.0, |(low, high)| (25.0 - low.0).abs().max((high.0 - 25.0).abs()));
    let warm = if passive == Passive::Resistor { drift.unwrap_or(0.0) * heat } else { 0.0 };
    if let Some((from, to)) = exceptions().find_map(|(_, part)| part.travel) {
        // An adjusted part has no tolerance: it is set, somewhere on its travel.
        let whole = value.unwrap_or(f64::NAN);
        return Part {
            value: value.map(|ohms| ohms * (from + to) / 2.0),
            tolerance: 0.0,
            rank: Rank::Guaranteed,
            rating: exceptions().find_map(|(_, part)| part.power).or(rating),
            travel: Some((whole * from, whole * to)).filter(|_| value.is_some()),
            group: None,
        };
    }
    Part {
        value,
        travel: None,
        tolerance: declared.unwrap_or(default.1) + warm,
        rank: if declared.is_some() { Rank::Guaranteed } else { Rank::Assumed },
        rating: exceptions().find_map(|(_, part)| part.power).or(rating),
        group: exceptions().find_map(|(at, part)| Some((at as u32, part.ratio?))),
    }
}

/// A resistor of zero ohm joins its nets; a value that can't be is kept as none.
pub(super) fn resistor(part: Part) -> ElementKind {
    match part.value {
        Some(0.0) => ElementKind::Link,
        Some(ohms) if 0.0 < ohms && ohms.is_finite() && (1.0 / ohms).is_finite() => {
            ElementKind::Resistor(part)
        }
        _ => ElementKind::Resistor(Part { value: None, ..part }),
    }
}

/// DC value and range of a source whose DC value is `dc`.
pub(super) fn drive(dc: Option<f64>, span: Option<(f64, f64)>, moves: bool, unknown: bool) -> Drive {
    let unknown = unknown || dc.is_some_and(|value| !value.is_finite());
    Drive { dc: dc.filter(|_| !unknown), span: span.filter(|(low, high)| low <= high), moves, unknown }
}

/// Whether a person named a net, as far as its form tells: exporters number nets or build names from
/// the pins that they join.
pub(super) fn labelled(name: &str) -> bool {
    let lower = name.to_ascii_lowercase();
    let numbered = |prefix: &str| {
        lower.strip_prefix(prefix).is_some_and(|rest| {
            !rest.is_empty() && rest.bytes().all(|byte| byte.is_ascii_digit() || byte == b'_')
        })
    };
    let built = lower.starts_with("net-") || lower.starts_with("unconnected-") || lower.starts_with("$n_");
    !built && !["", "n", "n$", "net", "net#", "_net", "node", "$n"].into_iter().any(numbered)
}

/// Whether the exporter marks a net as unconnected.
pub(super) fn unconnected(name: &str) -> bool {
    let lower = name.to_ascii_lowercase();
    name == "?" || lower.starts_with("nc_") || lower.starts_with("unconnected-")
}

/// The voltage that a net's name states: `+12V`, `-15VA`, `3V3`, `P5V0`, `N12V`, `+3V3`.
pub(super) fn stated_voltage(name: &str) -> Option<f64> {
    let name = name.rsplit(['.', '/']).next().unwrap_or(name);
    let (sign, rest) = match name.as_bytes().first()? {
        b'+' | b'P' | b'p' => (1.0, &name[1..]),
        b'-' | b'N' | b'n' => (-1.0, &name[1..]),
        _ => (1.0, name),
    };
    let at = rest.find(['V', 'v'])?;
    let (whole, tail) = (&rest[..at], &rest[at + 1..]);
    let whole: f64 =
        whole.parse().ok().filter(|_| whole.bytes().all(|byte| byte.is_ascii_digit() || byte == b'.'))?;
    let digits = tail.bytes().take_while(u8::is_ascii_digit).count();
    let suffix = &tail[digits..];
    let decimals: f64 = if digits == 0 { 0.0 } else { format!("0.{}", &tail[..digits]).parse().ok()? };
    let plain = suffix.len() <= 2 && suffix.bytes().all(|byte| byte.is_ascii_alphabetic());
    (plain && 0.0 < whole + decimals).then_some(sign * (whole + decimals))
}

/// Whether a name is a usual one for a supply net (common practice).
pub fn supply_like(name: &str) -> bool {
    let lower = name.rsplit(['.', '/']).next().unwrap_or(name).to_ascii_lowercase();
    let stem = lower.trim_start_matches(['+', '-']);
    ["vcc", "vdd", "vee", "vss", "v+", "v-", "avdd", "avcc", "avss", "avee"]
        .iter()
        .any(|usual| stem.strip_prefix(usual).is_some_and(|rest| rest.len() <= 2) || lower == *usual)
}
