//! Profiles and what is assumed, read whole, and what is wrong in them.

use super::{read_assumed, read_profiles};
use crate::device::{Assumed, Derating, Entry, Key, LoadTo, Pin, Profile, Technology};
use crate::diagnostic::Diagnostic;
use crate::quantity::{Amps, Celsius, Farads, Ohms, Volts};
use crate::source::Sources;

const PROFILE: &str = r#"
- device: precision-bipolar
  aliases: [OPX21, "OPX21A*"]
  technology: bipolar
  sections: 2
  pins: [non-inverting, inverting, positive-supply, negative-supply, output]
  source: invented sheet, revision 3, table 5
  notes: [Outputs share a heat path]
  parameters:
    open-loop-gain: { min: 106 dB, typ: 1000 V/mV }
    input-resistance: { min: 10 Mohm, typ: 50 Mohm }
    common-mode-resistance: 100 Gohm
    bias-current:
      - { typ: 1 nA, max: 4 nA }
      - { max: 6 nA, at: { temperature: 0 degC .. 70 degC, supply: 30 V }, source: table 6 }
    swing-above-negative:
      - { typ: 5 mV, max: 20 mV, at: { load: 10 kohm, load-to: ground } }
      - { max: 1 V, at: { sinking: 5 mA } }
    input-above-negative: -0.3 V
    supply: 6 V .. 36 V
    supply-maximum: 40 V
    slew-rate: { min: 0.1 V/us, typ: 0.3 V/us }
"#;

fn profiles(text: &str) -> (Vec<Profile>, Vec<Diagnostic>) {
    let mut sources = Sources::default();
    let file = sources.add("devices.yaml", text.to_string());
    read_profiles(&sources, file)
}

fn assumed() -> Assumed {
    let mut sources = Sources::default();
    let file = sources.add("assumed.yaml", include_str!("../../../rules/devices/assumed.yaml").to_string());
    let (assumed, faults) = read_assumed(&sources, file);
    assert_eq!(faults, []);
    assumed
}

#[test]
fn reads_a_profile() {
    let (profiles, faults) = profiles(PROFILE);
    assert_eq!(faults, []);
    let [profile] = profiles.as_slice() else { panic!("one profile") };
    assert_eq!(profile.aliases, ["OPX21", "OPX21A*"]);
    assert_eq!((profile.technology, profile.sections), (Technology::Bipolar, 2));
    assert_eq!(profile.pins[4], Pin::Output);
    assert_eq!(profile.notes, ["Outputs share a heat path"]);
    let gain = &profile.entries(Key::OpenLoopGain)[0];
    assert!((gain.min.unwrap() - 199_526.231).abs() < 1e-2);
    assert_eq!(gain.typ, Some(1e6));
    assert_eq!(profile.entries(Key::CommonModeResistance)[0].typ, Some(100e9));
    assert_eq!(profile.entries(Key::InputAboveNegative)[0].typ, Some(-0.3));
    assert_eq!(profile.entries(Key::SlewRate)[0].min, Some(0.1e6));
    let supply = Entry { min: Some(6.0), max: Some(36.0), ..Entry::default() };
    assert_eq!(profile.entries(Key::Supply), [supply]);
    assert_eq!(profile.entries(Key::SupplyMaximum)[0].max, Some(40.0));
    assert_eq!(profile.entries(Key::VoltageNoise), []);
}

#[test]
fn reads_conditions() {
    let (profiles, _) = profiles(PROFILE);
    let bias = &profiles[0].entries(Key::BiasCurrent)[1];
    assert_eq!(bias.at.temperature, Some((Celsius(0.0), Celsius(70.0))));
    assert_eq!(bias.at.supply, Some(Volts(30.0)));
    assert_eq!(bias.source.as_deref(), Some("table 6"));
    let swing = profiles[0].entries(Key::SwingAboveNegative);
    assert_eq!(swing[0].at.load, Some(Ohms(10e3)));
    assert_eq!(swing[0].at.load_to, Some(LoadTo::Ground));
    assert_eq!(swing[1].at.sinking, Some(Amps(5e-3)));
    assert_eq!(swing[1].typ, None);
}

#[test]
fn leaves_out_what_cannot_be_used() {
    let head = "- { device: a, technology: bipolar, source: memory, parameters: { ";
    let cases = [
        ("bias-current: { min: 5 nA, max: 1 nA } } }", "expected min <= typ <= max"),
        ("bias-current: -5 nA } }", "expected a magnitude, 0 or more, found `-5 nA`"),
        ("input-resistance: 0 ohm } }", "expected a value above 0, found `0 ohm`"),
        ("bias-current: { at: { supply: 5 V } } } }", "expected `min`, `typ` or `max`, found none of them"),
        ("bias-curent: 5 nA } }", "there is no parameter `bias-curent`"),
    ];
    for (tail, message) in cases {
        let (profiles, faults) = profiles(&format!("{head}{tail}"));
        assert_eq!(faults.iter().map(|fault| fault.message.as_str()).collect::<Vec<_>>(), [message]);
        assert_eq!(profiles[0].entries(Key::BiasCurrent), []);
        assert_eq!(profiles[0].entries(Key::InputResistance), []);
    }
}

#[test]
fn a_profile_needs_its_head() {
    let (read, faults) = profiles("- { device: a, parameters: { bias-current: 1 nA } }");
    assert!(read.is_empty());
    let messages: Vec<_> = faults.iter().map(|fault| fault.message.as_str()).collect();
    assert_eq!(messages, ["a device lacks the key `technology`", "a device lacks the key `source`"]);
    let one = "- { device: a, technology: cmos, source: memory, parameters: { slew-rate: 1 V/us } }\n";
    let (_, faults) = profiles(&one.repeat(2));
    assert_eq!(faults[0].message, "the device `a` stands here a second time");
}

#[test]
fn pins_must_fit() {
    let with = |pins: &str| {
        profiles(&format!(
            "- {{ device: a, technology: cmos, source: memory, pins: [{pins}], parameters: {{ slew-rate: 1 V/us }} }}"
        ))
    };
    assert_eq!(with("output, inverting, non-inverting").1, []);
    assert_eq!(with("output, inverting").1[0].message, "both inputs and the output must be named");
    assert_eq!(with("output, inverting, non-inverting, output").1[0].message, "a pin is named twice");
}

#[test]
fn assumptions_are_complete() {
    let assumed = assumed();
    let derating = |key: Key| assumed.derating[key as usize];
    assert_eq!(derating(Key::OpenLoopGain), Some(Derating::Times(0.25)));
    assert_eq!(derating(Key::GainBandwidth), Some(Derating::Between(0.65, 1.5)));
    assert_eq!(derating(Key::SupplyRejection), Some(Derating::Minus(20.0)));
    assert_eq!(derating(Key::OutputResistance), Some(Derating::Between(0.5, 2.0)));
    assert_eq!((assumed.resistor, assumed.capacitor, assumed.rail), (0.01, 0.1, 0.05));
    assert_eq!(assumed.stray, Farads(3e-12));
}

#[test]
fn every_technology_has_its_bounds() {
    let assumed = assumed();
    let keys = [
        Key::OutputResistance,
        Key::InputResistance,
        Key::CommonModeResistance,
        Key::InputCapacitance,
        Key::CommonModeCapacitance,
    ];
    for technology in [Technology::Bipolar, Technology::Jfet, Technology::Cmos] {
        for key in keys {
            let fits =
                assumed.bounds.iter().filter(|(bounded, of, ..)| *bounded == key && of.contains(&technology));
            assert_eq!(fits.count(), 1, "{} {technology:?}", key.name());
        }
    }
    let unlimited = assumed.bounds.iter().find(|(key, ..)| *key == Key::InputResistance).unwrap();
    assert_eq!((unlimited.2, unlimited.3), (100e3, f64::INFINITY));
}
