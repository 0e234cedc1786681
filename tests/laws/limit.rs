//! The ideal op amp as a limit.

use super::board::{BUDGET, device, lines, netlist};
use super::snapshot::{Numbers, numbers};

/// The profile with every op-amp parameter of the linear model at its ideal value, as near as `far` is to
/// infinity.
fn near_ideal(far: f64) -> String {
    let own = device(1.0);
    let model = ["open-loop-gain", "input-resistance", "common-mode-resistance", "output-resistance"];
    let kept = own.lines().filter(|line| !model.iter().any(|key| line.trim_start().starts_with(key)));
    let mut text: String = kept.map(|line| format!("{line}\n")).collect();
    for (key, value, unit) in [
        (model[0], far, ""),
        (model[1], 1e6 * far, " ohm"),
        (model[2], 1e6 * far, " ohm"),
        (model[3], 1.0 / far, " ohm"),
    ] {
        text +=
            &format!("    {key}: {{ min: {value:e}{unit}, typ: {value:e}{unit}, max: {value:e}{unit} }}\n");
    }
    text
}

/// The largest relative distance of a real transfer from the twin's.
fn distance(numbers: &Numbers) -> f64 {
    let pairs = numbers.iter().filter_map(|(name, ideal)| {
        let actual = numbers.get(&format!("{}actual", name.strip_suffix("ideal")?))?;
        Some((actual / ideal - 1.0).abs())
    });
    pairs.fold(0.0, f64::max)
}

#[test]
fn the_twin_is_the_limit_of_the_real_op_amp() {
    let netlist = netlist(&lines());
    let at = |far: f64| distance(&numbers(&netlist, BUDGET, &near_ideal(far)));
    let (weak, strong, far) = (at(1e4), at(1e7), at(1e13));
    assert!(1e-4 < weak, "a weak op amp errs: {weak}");
    // The error falls as the gain rises.
    assert!((weak / strong / 1e3 - 1.0).abs() < 0.2, "{weak} at a gain of 1e4, {strong} at 1e7");
    assert!(far < 1e-9, "{far} is left at a gain of 1e13");
}
