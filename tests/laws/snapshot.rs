//! The numbers of a report by name, and how two reports are compared.

use crate::support::check;
use serde_json::Value;
use std::collections::BTreeMap;

/// Every number of a board's stages by a name such as `XU1 gain-error worst`.
pub type Numbers = BTreeMap<String, f64>;

/// Checks a board and takes its numbers; every stage must have been analysed.
#[track_caller]
pub fn numbers(netlist: &str, budget: &str, device: &str) -> Numbers {
    let board = check(netlist, budget, device);
    let coverage = &board["coverage"];
    assert_eq!(coverage["op_amps"], coverage["analysed"], "{}", coverage["skipped"]);
    let mut numbers = Numbers::new();
    for stage in board["stages"].as_array().expect("a board has stages") {
        let id = stage["id"].as_str().expect("a stage has an id");
        transfers(&mut numbers, id, &stage["transfers"]);
        transfers(&mut numbers, &format!("{id} local"), &stage["local"]);
        for pins in stage["pins"].as_array().expect("a stage has pins") {
            for pin in ["in+", "in-", "out", "twin_out"] {
                put(&mut numbers, format!("{id} {} {pin}", pins["at"]), &pins[pin]);
            }
        }
        for (slug, figure) in stage["figures"].as_object().expect("a stage has figures") {
            for field in ["nominal", "worst", "rss"] {
                put(&mut numbers, format!("{id} {slug} {field}"), &figure[field]);
            }
            for line in figure["ledger"].as_array().expect("a figure has a ledger") {
                let item = line["item"].as_str().expect("a line has an item");
                put(&mut numbers, format!("{id} {slug} ledger {item}"), &line["effect"]);
            }
        }
    }
    assert!(numbers.keys().any(|name| name.ends_with("gain-error worst")), "nothing was computed");
    numbers
}

fn transfers(numbers: &mut Numbers, id: &str, transfers: &Value) {
    for transfer in transfers.as_array().into_iter().flatten() {
        for field in ["ideal", "actual"] {
            put(numbers, format!("{id} from {} {field}", transfer["input"]), &transfer[field]);
        }
    }
}

fn put(numbers: &mut Numbers, name: String, value: &Value) {
    if let Some(number) = value.as_f64() {
        numbers.insert(name, number);
    }
}

/// Asserts that both have the same names, and that each number of `found` is that of `expected` times what
/// `factor` gives for its name. A line that a ledger lacks is one of effect 0.
#[track_caller]
pub fn scaled(what: &str, expected: &Numbers, found: &Numbers, factor: impl Fn(&str) -> f64) {
    let number = |numbers: &Numbers, name: &str| match numbers.get(name) {
        None if name.contains(" ledger ") => 0.0,
        None => panic!("{what}: one of both has no {name}"),
        Some(number) => *number,
    };
    for name in expected.keys().chain(found.keys()) {
        let (wanted, found) = (number(expected, name) * factor(name), number(found, name));
        // Errors are differences of numbers near one, so that a share of 1e-16 of those is left in them; a
        // line of a ledger has the rounding of its figure.
        let figure = name
            .split_once(" ledger ")
            .map_or(wanted, |(figure, _)| number(expected, &format!("{figure} worst")) * factor(name));
        let close = (found - wanted).abs() <= 1e-8 * wanted.abs() + 1e-12 * (1.0 + figure.abs());
        assert!(close, "{what}: {name} is {found}, expected {wanted}");
    }
}

/// Asserts that both have the same numbers.
#[track_caller]
pub fn same(what: &str, expected: &Numbers, found: &Numbers) {
    scaled(what, expected, found, |_| 1.0);
}
