//! From a profile's entries to the nominal value and the range of one parameter of one stage.

use crate::device::{Assumed, Derating, Entry, Key, LoadTo, Profile, Rank, Technology};

/// What a stage asks of its device.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Situation {
    /// Ambient range in degree Celsius.
    pub temperature: (f64, f64),
    /// Total supply in volt, where known.
    pub supply: Option<f64>,
    /// Output current in ampere that flows where the swing is wanted: out of the pin at the positive
    /// end, into the pin at the negative one. Below zero the load helps.
    pub current: f64,
}

/// A parameter as a stage sees it, in the unit of its key.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Spread<'p> {
    /// Typical value; the limit where the profile prints no typical one.
    pub nominal: f64,
    /// Least value.
    pub low: f64,
    /// Greatest value.
    pub high: f64,
    /// How far the limit that hurts can be trusted.
    pub rank: Rank,
    /// Whether that limit holds over the whole ambient range.
    pub covered: bool,
    /// Where it comes from.
    pub source: &'p str,
}

/// Which end of a parameter does harm.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Harm {
    Low,
    High,
    Both,
}

fn harm(key: Key) -> Harm {
    match key {
        Key::OpenLoopGain
        | Key::InputResistance
        | Key::CommonModeResistance
        | Key::CommonModeRejection
        | Key::SupplyRejection
        | Key::SlewRate
        | Key::OutputCurrent
        | Key::ShortCircuitCurrent
        | Key::SecondPole
        | Key::PhaseMargin => Harm::Low,
        Key::OutputResistance | Key::GainBandwidth | Key::Supply => Harm::Both,
        Key::InputCapacitance
        | Key::CommonModeCapacitance
        | Key::BiasCurrent
        | Key::OffsetCurrent
        | Key::OffsetVoltage
        | Key::OffsetDrift
        | Key::MinimumStableGain
        | Key::VoltageNoise
        | Key::VoltageNoiseCorner
        | Key::CurrentNoise
        | Key::CurrentNoiseCorner
        | Key::SwingBelowPositive
        | Key::SwingAboveNegative
        | Key::InputBelowPositive
        | Key::InputAboveNegative
        | Key::RatedLoad
        | Key::SupplyMaximum
        | Key::SupplyCurrent => Harm::High,
    }
}

/// The parameter of a profile in a situation; `None` where the profile says nothing of it.
///
/// The limit is that of the entry whose temperature covers the board's, whose load is next heavier than
/// the stage's and whose supply is nearest; the typical value likewise. Beyond the heaviest load a swing
/// distance grows with the current and is assumed. A typical value alone is derated.
pub fn spread<'p>(
    profile: &'p Profile,
    assumed: &Assumed,
    key: Key,
    situation: Situation,
) -> Option<Spread<'p>> {
    let low = pick(profile, |entry| entry.min, true, key, situation);
    let high = pick(profile, |entry| entry.max, true, key, situation);
    let typical = pick(profile, |entry| entry.typ, false, key, situation);
    let limit = match harm(key) {
        Harm::Low => low.as_ref(),
        Harm::High => high.as_ref(),
        Harm::Both => low.as_ref().or(high.as_ref()),
    };
    let nominal = typical.as_ref().or(limit).or(low.as_ref()).or(high.as_ref())?;
    let (least, greatest) = derate(assumed, key, nominal.value);
    let chosen = limit.unwrap_or(nominal);
    let rank = match (limit, harm(key)) {
        (Some(_), Harm::Both) if low.is_none() || high.is_none() => chosen.rank.max(Rank::Typical),
        (Some(limit), _) => limit.rank,
        (None, _) => nominal.rank.max(Rank::Typical),
    };
    let hurts = |end: Harm| harm(key) == end || harm(key) == Harm::Both;
    let low = low.as_ref().map_or(if hurts(Harm::Low) { least } else { nominal.value }, |found| found.value);
    let high =
        high.as_ref().map_or(if hurts(Harm::High) { greatest } else { nominal.value }, |found| found.value);
    Some(Spread {
        nominal: nominal.value,
        low: low.min(nominal.value),
        high: high.max(nominal.value),
        rank,
        covered: chosen.covered,
        source: profile.source_of(chosen.entry),
    })
}

/// Bounds of a technology where a profile says nothing: least and greatest value.
pub fn bounds(assumed: &Assumed, technology: Option<Technology>, key: Key) -> Option<(f64, f64)> {
    let fits = |held: &[Technology]| {
        technology.is_none_or(|technology| held.is_empty() || held.contains(&technology))
    };
    assumed
        .bounds
        .iter()
        .find(|(bound, held, ..)| *bound == key && fits(held))
        .map(|(.., low, high)| (*low, *high))
}

/// The worst cases, low and high, of a typical value that stands alone.
fn derate(assumed: &Assumed, key: Key, typical: f64) -> (f64, f64) {
    // A distance below zero reaches beyond the rail; making it longer would make it better.
    let scaled = |factor: f64| if typical < 0.0 { typical } else { typical * factor };
    match assumed.derating.get(key as usize).copied().flatten() {
        Some(Derating::Times(factor)) => (scaled(factor).min(typical), scaled(factor).max(typical)),
        Some(Derating::Minus(decibel)) => (typical - decibel, typical),
        Some(Derating::Between(low, high)) => (scaled(low), scaled(high)),
        None => (typical, typical),
    }
}

/// An entry that was chosen for one of its three fields.
struct Found<'p> {
    entry: &'p Entry,
    value: f64,
    rank: Rank,
    covered: bool,
}

fn pick<'p>(
    profile: &'p Profile,
    field: impl Fn(&Entry) -> Option<f64>,
    limit: bool,
    key: Key,
    situation: Situation,
) -> Option<Found<'p>> {
    let candidates = profile.entries(key).iter().filter_map(|entry| Some((entry, field(entry)?)));
    let worse = |value: f64| if harm(key) == Harm::Low { value } else { -value };
    let (entry, value) = candidates.min_by(|(a, x), (b, y)| {
        fit(a, limit, key, situation)
            .iter()
            .zip(fit(b, limit, key, situation))
            .map(|(a, b)| a.total_cmp(&b))
            .find(|order| order.is_ne())
            .unwrap_or_else(|| worse(*x).total_cmp(&worse(*y)))
    })?;
    let covered = misses_temperature(entry, situation) == 0.0;
    let over = overload(entry, key, situation);
    let rank = if profile.standing(entry).is_unsure() || over.is_some() {
        Rank::Assumed
    } else if covered {
        Rank::Guaranteed
    } else {
        Rank::Typical
    };
    Some(Found { entry, value: value * over.unwrap_or(1.0), rank, covered })
}

/// How badly an entry fits, most weighty first; nought is a fit.
fn fit(entry: &Entry, limit: bool, key: Key, situation: Situation) -> [f64; 5] {
    let (lighter, distance) = match entry_current(entry, key, situation) {
        None => (0.0, 0.0),
        Some(current) if situation.current <= current => (0.0, current - situation.current.max(0.0)),
        Some(current) => (1.0, situation.current - current),
    };
    let supply = entry.at.supply.zip(situation.supply).map_or(0.0, |(at, own)| (at.0 - own).abs());
    let width = entry.at.temperature.map_or(0.0, |(low, high)| high.0 - low.0);
    let temperature = misses_temperature(entry, situation);
    if limit {
        [temperature, lighter, distance, supply, width]
    } else {
        // Typical values are printed for one temperature; what the load is weighs more.
        [lighter, distance, supply, temperature, width]
    }
}

fn misses_temperature(entry: &Entry, situation: Situation) -> f64 {
    let (low, high) = entry.at.temperature.map_or((25.0, 25.0), |(low, high)| (low.0, high.0));
    (low - situation.temperature.0).max(0.0) + (situation.temperature.1 - high).max(0.0)
}

/// The output current at which a swing entry holds; `None` for other keys and where it states no load.
fn entry_current(entry: &Entry, key: Key, situation: Situation) -> Option<f64> {
    let top = match key {
        Key::SwingBelowPositive => true,
        Key::SwingAboveNegative => false,
        _ => return None,
    };
    let stated = if top { entry.at.sourcing } else { entry.at.sinking };
    if let Some(current) = stated.or(entry.at.sourcing).or(entry.at.sinking) {
        return Some(current.0);
    }
    let load = entry.at.load?.0;
    let supply = entry.at.supply.map(|volts| volts.0).or(situation.supply)?;
    // The load's own end takes no current; the other end takes the whole supply, the middle takes half.
    let share = match (entry.at.load_to.unwrap_or(LoadTo::Middle), top) {
        (LoadTo::Middle, _) => 0.5,
        (LoadTo::Ground | LoadTo::Negative, true) | (LoadTo::Positive, false) => 1.0,
        (LoadTo::Ground | LoadTo::Negative, false) | (LoadTo::Positive, true) => 0.0,
    };
    Some(share * supply / load)
}

/// By how much the distance of an entry grows where the stage draws more than it states.
fn overload(entry: &Entry, key: Key, situation: Situation) -> Option<f64> {
    let current = entry_current(entry, key, situation)?;
    // Within a part in a thousand the currents are the same datasheet condition.
    (current * 1.001 < situation.current)
        .then(|| if 0.0 < current { situation.current / current } else { 1.0 })
}
