//! Embedded profiles: units and orders of magnitude, limits in order, sources that say something.

use gainsay::device::{Entry, Key};

/// Least and greatest value that any op amp of the trade has of a parameter, in its SI unit (common knowledge of
/// the trade; wide enough for power and electrometer parts, narrow enough to catch a wrong prefix).
fn bounds(key: Key) -> (f64, f64) {
    match key {
        Key::OpenLoopGain => (100.0, 1e9),
        Key::InputResistance => (1e3, 1e14),
        Key::CommonModeResistance => (1e6, 1e16),
        Key::InputCapacitance | Key::CommonModeCapacitance => (0.1e-12, 200e-12),
        Key::OutputResistance => (0.5, 20e3),
        Key::BiasCurrent | Key::OffsetCurrent => (1e-15, 20e-6),
        Key::OffsetVoltage => (0.1e-6, 0.1),
        Key::OffsetDrift => (1e-9, 200e-6),
        Key::CommonModeRejection | Key::SupplyRejection => (40.0, 180.0),
        Key::GainBandwidth => (1e3, 2e9),
        Key::SecondPole => (1e3, 1e10),
        Key::PhaseMargin => (10.0, 120.0),
        Key::MinimumStableGain => (1.0, 100.0),
        Key::SlewRate => (1e3, 1e10),
        Key::VoltageNoise => (0.5e-9, 1e-6),
        // Chopped inputs have no corner at all.
        Key::VoltageNoiseCorner | Key::CurrentNoiseCorner => (0.0, 1e6),
        Key::CurrentNoise => (1e-16, 1e-10),
        Key::SwingBelowPositive | Key::SwingAboveNegative => (-0.5, 12.0),
        Key::InputBelowPositive | Key::InputAboveNegative => (-1.0, 8.0),
        Key::OutputCurrent | Key::ShortCircuitCurrent => (1e-6, 10.0),
        Key::RatedLoad => (4.0, 1e6),
        Key::Supply | Key::SupplyMaximum => (1.0, 100.0),
        Key::SupplyCurrent => (1e-7, 0.1),
    }
}

#[test]
fn figures_have_their_order_of_magnitude() {
    let catalogue = gainsay::check::catalogue();
    assert!(40 <= catalogue.profiles.len());
    let mut wrong = Vec::new();
    for profile in &catalogue.profiles {
        for key in Key::ALL {
            let (low, high) = bounds(*key);
            for entry in profile.entries(*key) {
                let Entry { min, typ, max, .. } = entry;
                for value in [min, typ, max].into_iter().flatten() {
                    if !(low..=high).contains(value) {
                        wrong.push(format!("{} {}: {value:e}", profile.name, key.name()));
                    }
                }
                if min.zip(*max).is_some_and(|(min, max)| max < min)
                    || min.zip(*typ).is_some_and(|(min, typ)| typ < min)
                    || typ.zip(*max).is_some_and(|(typ, max)| max < typ)
                {
                    wrong.push(format!(
                        "{} {}: {min:?} {typ:?} {max:?} aren't in order",
                        profile.name,
                        key.name()
                    ));
                }
            }
        }
    }
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn every_source_says_something() {
    let catalogue = gainsay::check::catalogue();
    let vague = |source: &str| source.len() < 6 || source.contains("http");
    let mut wrong = Vec::new();
    for profile in &catalogue.profiles {
        let entries = Key::ALL.iter().flat_map(|key| profile.entries(*key));
        let sources = entries.filter_map(|entry| entry.source.as_deref()).chain([profile.source.as_str()]);
        wrong.extend(
            sources.filter(|source| vague(source)).map(|source| format!("{}: {source}", profile.name)),
        );
    }
    assert!(wrong.is_empty(), "{wrong:#?}");
}

#[test]
fn names_and_aliases_mean_one_profile() {
    let catalogue = gainsay::check::catalogue();
    let plain = |name: &&String| !name.contains('*');
    for (at, profile) in catalogue.profiles.iter().enumerate() {
        for name in std::iter::once(&profile.name).chain(&profile.aliases).filter(plain) {
            assert_eq!(catalogue.find(name), Some(at), "{name} of {} finds another profile", profile.name);
        }
    }
}
