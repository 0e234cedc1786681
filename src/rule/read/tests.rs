//! Rule packs read whole, and what is wrong in them.

use super::read_pack;
use crate::device::Technology;
use crate::diagnostic::{Diagnostic, Severity};
use crate::quantity::Unit;
use crate::rule::{Limit, Rule};
use crate::source::Sources;

const KNOWN: [(&str, Option<Unit>); 19] = [
    ("lost-zero", None),
    ("gain-error", Some(Unit::One)),
    ("loop-gain", Some(Unit::One)),
    ("feedback-resistance", Some(Unit::Ohm)),
    ("feedback-loading", Some(Unit::One)),
    ("output-current", Some(Unit::One)),
    ("bias-error", Some(Unit::Volt)),
    ("offset-error", Some(Unit::Volt)),
    ("output-headroom", Some(Unit::Volt)),
    ("input-headroom", Some(Unit::Volt)),
    ("source-loading", Some(Unit::One)),
    ("gain-spread", Some(Unit::One)),
    ("rejection", Some(Unit::Decibel)),
    ("common-error", Some(Unit::Volt)),
    ("resistor-power", Some(Unit::One)),
    ("input-resistance", Some(Unit::Ohm)),
    ("output-resistance", Some(Unit::Ohm)),
    ("bandwidth", Some(Unit::Hertz)),
    ("dc-loop", None),
];

fn pack(text: &str) -> (Vec<Rule>, Vec<Diagnostic>) {
    let mut sources = Sources::default();
    let file = sources.add("rules.yaml", text.to_string());
    read_pack(&sources, file, &KNOWN)
}

fn faults(text: &str) -> Vec<String> {
    pack(&format!("- {{ {text}, severity: error, reason: r, source: s }}"))
        .1
        .into_iter()
        .map(|f| f.message)
        .collect()
}

#[test]
fn reads_the_core_pack() {
    let (rules, faults) = pack(include_str!("../../../rules/core.yaml"));
    assert_eq!(faults, []);
    let of = |name: &str| rules.iter().filter(|rule| rule.name == name).collect::<Vec<_>>();
    assert_eq!(of("gain-error")[0].limit, Some(Limit::Value(0.01)));
    assert_eq!(of("bias-error")[0].limit, Some(Limit::ShareOfSpan(0.02)));
    assert_eq!(of("feedback-resistance")[0].limit, Some(Limit::RatedLoad));
    assert_eq!(of("output-headroom")[0].guard, Some(Limit::Value(0.1)));
    assert_eq!(of("loop-gain")[0].severity, Severity::Warning);
    assert_eq!(of("feedback-loading")[1].scope.technology, [Technology::Cmos]);
    assert_eq!(of("feedback-loading")[1].guard, Some(Limit::Value(0.2)));
    let rejection: Vec<_> =
        of("rejection").iter().map(|rule| (rule.scope.topology.clone(), rule.limit)).collect();
    assert_eq!(
        rejection,
        [
            (vec!["difference".to_string()], Some(Limit::Value(30.0))),
            (vec!["instrumentation".to_string()], Some(Limit::Value(50.0)))
        ]
    );
    assert_eq!(of("output-resistance")[0].limit, None);
}

#[test]
fn limits_take_the_unit_of_their_figure() {
    let limit =
        |text: &str| pack(&format!("- {{ {text}, severity: note, reason: r, source: s }}")).0[0].limit;
    assert_eq!(limit("figure: bandwidth, limit: top of band"), Some(Limit::TopOfBand));
    assert_eq!(limit("figure: rejection, limit: 60 dB"), Some(Limit::Value(60.0)));
    assert_eq!(limit("fact: dc-loop"), None);
    assert_eq!(
        faults("figure: rejection, limit: 60 mV"),
        ["expected a level such as `10 dB`, found a voltage, `60 mV`"]
    );
    assert_eq!(
        faults("figure: rejection, limit: 60"),
        ["`60` lacks a unit, expected a level such as `10 dB`"]
    );
    assert_eq!(faults("figure: gain-error, limit: rated load").len(), 1);
    assert_eq!(faults("figure: gain-error, limit: 1 % of span").len(), 1);
}

#[test]
fn names_must_be_known() {
    assert_eq!(faults("figure: gain-eror"), ["there is no figure `gain-eror`"]);
    assert_eq!(faults("figure: dc-loop"), ["`dc-loop` is a fact, found it as a figure"]);
    assert_eq!(faults("fact: dc-loop, limit: 1"), ["a fact has no `limit`"]);
    assert_eq!(
        faults("fact: dc-loop, figure: gain-error"),
        ["a rule is about a figure or about a fact, found both"]
    );
    assert_eq!(faults("limit: 1"), ["a rule lacks the key `figure` or `fact`"]);
    let (rules, faults) = pack("- { figure: gain-eror, severity: error, reason: r, source: s }");
    assert!(rules.is_empty());
    assert_eq!(faults[0].help.as_deref(), Some("did you mean `gain-error`?"));
}
