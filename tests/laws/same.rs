//! Changes of a netlist that change no number, and one that scales them.

use super::board::{BUDGET, device, lines, netlist};
use super::snapshot::{Numbers, numbers, same, scaled};

fn original() -> Numbers {
    numbers(&netlist(&lines()), BUDGET, &device(1.0))
}

/// Replaces a whole word of every line.
fn reword(lines: &[String], from: &str, to: &str) -> Vec<String> {
    let word = |word: &str| if word == from { to.to_owned() } else { word.to_owned() };
    lines.iter().map(|line| line.split(' ').map(word).collect::<Vec<_>>().join(" ")).collect()
}

#[test]
fn the_order_of_elements_does_not_matter() {
    let expected = original();
    let mut lines = lines();
    // A multiplicative generator (D. H. Lehmer, 1951) with the multiplier 48271 is good enough to shuffle.
    let mut state = 12_345u64;
    for round in 0..12 {
        for at in (1..lines.len()).rev() {
            state = state * 48_271 % 2_147_483_647;
            lines.swap(at, state as usize % (at + 1));
        }
        same(&format!("shuffle {round}"), &expected, &numbers(&netlist(&lines), BUDGET, &device(1.0)));
    }
}

#[test]
fn impedances_scale() {
    // Ratios and voltages stay, resistances scale with all resistances, currents inversely. Bias currents
    // stay, so voltages that they make scale: here the op amp has none.
    let no_bias = |text: String| {
        text.lines()
            .filter(|line| !line.contains("-current: { typ"))
            .map(|line| format!("{line}\n"))
            .collect::<String>()
            + "    bias-current: { typ: 0 A, max: 0 A }\n    offset-current: { typ: 0 A, max: 0 A }\n"
    };
    let lines = lines();
    let voltages: Vec<String> =
        lines.iter().filter(|line| !line.starts_with("R21") && !line.starts_with("XU7")).cloned().collect();
    let budget = BUDGET.replace("  diode: { net: m7, range: 0 uA .. 5 uA }\n", "");
    let expected = numbers(&netlist(&voltages), &budget, &no_bias(device(1.0)));
    for scale in [0.1, 3.7, 100.0] {
        let times = |line: &String| match (line.starts_with('R'), line.rsplit_once(' ')) {
            (true, Some((head, ohms))) => format!("{head} {:e}", kilo(ohms) * scale),
            _ => line.clone(),
        };
        let lines: Vec<String> = voltages.iter().map(times).collect();
        let found = numbers(&netlist(&lines), &budget, &no_bias(device(scale)));
        let factor = |name: &str| {
            let of = |slug: &str| name.contains(&format!(" {slug} "));
            if ["feedback-resistance", "input-resistance", "output-resistance"].into_iter().any(of) {
                scale
            } else if ["feedback-loading", "output-current", "resistor-power"].into_iter().any(of) {
                1.0 / scale
            } else {
                1.0
            }
        };
        scaled(&format!("times {scale}"), &expected, &found, factor);
    }
}

/// A value such as `4.7k`, ohm.
fn kilo(text: &str) -> f64 {
    let digits = text.strip_suffix('k').expect("all values are in kilohm");
    digits.parse::<f64>().expect("a number stands before it") * 1e3
}

#[test]
fn names_of_nets_change_names_alone() {
    let expected = original();
    let mut lines = lines();
    for (from, to) in [("m3", "node-17"), ("o5", "OFFSET"), ("t", "Net-(R9-Pad2)"), ("d", "/sheet/d")] {
        lines = reword(&lines, from, to);
    }
    let found = numbers(&netlist(&lines), BUDGET, &device(1.0));
    let renamed: Numbers = found
        .into_iter()
        .map(|(name, value)| {
            (name.replace("\"OFFSET\"", "\"o5\"").replace("error of OFFSET", "error of o5"), value)
        })
        .collect();
    same("renamed", &expected, &renamed);
}

#[test]
fn names_match_in_any_case() {
    let expected = original();
    let mut lines = lines();
    for (at, line) in lines.iter_mut().enumerate() {
        // The first mention of a net gives its name, an element's letter case is its own.
        if at % 3 == 2 && !line.starts_with("VS") {
            let mut words: Vec<String> = line.split(' ').map(str::to_owned).collect();
            let last = words.len() - 1;
            words[1..last].iter_mut().for_each(|word| *word = word.to_ascii_uppercase());
            *line = words.join(" ");
        }
    }
    // First mentions as they were.
    let lower = |numbers: &Numbers| -> Numbers {
        numbers.iter().map(|(name, value)| (name.to_ascii_lowercase(), *value)).collect()
    };
    let found = numbers(&netlist(&lines), &BUDGET.replace("VCC", "vcc"), &device(1.0));
    same("in other case", &lower(&expected), &lower(&found));
}

#[test]
fn a_stage_in_a_subcircuit_is_the_same() {
    let expected = original();
    let (inside, outside): (Vec<String>, Vec<String>) = lines()
        .into_iter()
        .partition(|line| ["R8", "R9", "R10", "R11", "XU4"].contains(&line.split(' ').next().unwrap_or("")));
    let mut lines = outside;
    lines.push("X1 s o4 VCC VEE CELL".to_owned());
    lines.push(".subckt CELL s o4 VCC VEE".to_owned());
    lines.extend(inside);
    lines.push(".ends".to_owned());
    let found = numbers(&netlist(&lines), BUDGET, &device(1.0));
    let flat: Numbers = found.into_iter().map(|(name, value)| (name.replace("X1.", ""), value)).collect();
    same("in a subcircuit", &expected, &flat);
}

#[test]
fn links_join() {
    let expected = original();
    let mut lines = lines();
    // The feedback of XU6 and the non-inverting input of XU5 through links, one of them a chain.
    for line in &mut lines {
        if line.starts_with("R18") {
            *line = "R18 o6x m6 56k".to_owned();
        } else if line.starts_with("XU5") {
            *line = "XU5 dxx m5 VCC VEE o5 PART".to_owned();
        }
    }
    lines.extend(["RL1 o6 o6x 0", "RL2 d dx 0", "RL3 dx dxx 0"].map(str::to_owned));
    same("with links", &expected, &numbers(&netlist(&lines), BUDGET, &device(1.0)));
}

#[test]
fn a_resistor_split_in_two_leaves_nominal_figures() {
    let nominal = |numbers: Numbers| -> Numbers {
        let kept = |name: &String| {
            let resting = [" worst", " rss", " ledger "].iter().all(|field| !name.contains(field));
            resting && !name.contains("resistor-power")
        };
        numbers.into_iter().filter(|(name, _)| kept(name)).collect()
    };
    let expected = nominal(original());
    for (split, parts) in [
        ("R5 o3 m3 22k", ["R5 o3 x 20k", "R99 x m3 2k"]),
        ("R9 m4 t 47k", ["R9 m4 x 7k", "R99 x t 40k"]),
        ("R12 s d 91k", ["R12 s x 1k", "R99 x d 90k"]),
        ("R19 o6 0 4.7k", ["R19 o6 x 4k", "R99 x 0 0.7k"]),
        ("R20 o5 o4 100k", ["R20 o5 x 50k", "R99 x o4 50k"]),
    ] {
        let mut lines: Vec<String> = lines().into_iter().filter(|line| line != split).collect();
        assert_eq!(lines.len(), 30, "{split} is on the board");
        lines.extend(parts.map(str::to_owned));
        same(split, &expected, &nominal(numbers(&netlist(&lines), BUDGET, &device(1.0))));
    }
}
