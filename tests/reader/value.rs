//! Values of passives in all the forms that exporters write.

use super::show::board;

/// Reads one line and gives what stands behind its nets.
fn one(line: &str) -> String {
    let read = board(&format!("{line}\n"));
    assert!(read.faults.is_empty(), "{line}: {:?}", read.faults);
    let lines = read.lines();
    lines[0].split_once("] ").unwrap().1.to_owned()
}

#[test]
fn literals() {
    let cases = [
        ("R1 a b 4k7", "R 4.7e3"),
        ("R1 a b 4R7", "R 4.7e0"),
        ("R1 a b 100R", "R 1e2"),
        ("R1 a b 1Meg", "R 1e6"),
        ("R1 a b 1MEGOhm", "R 1e6"),
        ("R1 a b 1M", "R 1e-3"),
        ("R1 a b 10kOhm", "R 1e4"),
        ("R1 a b .335", "R 3.35e-1"),
        ("R1 a b 1E3", "R 1e3"),
        ("R1 a b 0", "R 0e0"),
        ("R1 a b 10K_1%", "R 1e4 tolerance 0.01"),
        ("R1 a b 1K5_0.5W+", "R 1.5e3 rating 0.5"),
        ("R1 a b 10k 1%", "R 1e4 tolerance 0.01"),
        ("R1 a b 1k TC=0,0", "R 1e3"),
        ("R1 a b 10k tol=5 pwr=0.5", "R 1e4 tolerance 0.05 rating 0.5"),
        ("R1 a b R=2k", "R 2e3"),
        ("R1 a b value={x}", "R {x}"),
        ("R1 a b {x*2}", "R {x*2}"),
        ("R1 a b 'x*2'", "R {x*2}"),
        ("R1 a b {10k}", "R 1e4"),
        ("R1 a b {1/2}", "R {1/2}"),
        ("R1 a b 1k m=2", "R 5e2"),
        ("C1 a b 1F", "C 1e-15"),
        ("C1 a b 2n2", "C 2.2e-9"),
        ("C1 a b 159NFARAD", "C 1.59e-7"),
        ("C1 a b 33000µF/16V", "C 3.3e-2 rating 16"),
        ("C1 a b 22u_<20%", "C 2.2e-5 tolerance 0.2"),
        ("C1 a b 10p ic=0 Rser=1m Cpar=1p", "C 1e-11"),
        ("C1 a b 10p m=3", "C 3e-11"),
        ("C1 a b 10µ V=16", "C 1e-5 rating 16"),
        ("L1 a b 10mH Rser=0.1 Rpar=1k", "L 1e-2"),
    ];
    for (line, expected) in cases {
        assert_eq!(one(line), expected, "{line}");
    }
}

#[test]
fn five_forms_of_the_micro_sign() {
    for sign in ["u", "U", "\u{b5}", "\u{3bc}", "\u{fffd}"] {
        assert_eq!(one(&format!("C1 a b 2.2{sign}F")), "C 2.2e-6", "{sign}");
    }
}

#[test]
fn a_model_multiplies_and_gives_the_tolerance() {
    let read =
        board("R1 a b RMOD 4k TC=0,0\n.model RMOD RES R=2 DEV=0.1%\nR2 a b 4k rmod\nR3 a b Other 4k\n");
    assert_eq!(
        read.lines(),
        [
            "R1 [a | b] R 8e3 tolerance 0.001 model RMOD",
            "R2 [a | b] R 8e3 tolerance 0.001 model rmod",
            "R3 [a | b] R 4e3 model Other",
        ]
    );
    assert!(read.faults.is_empty());
}

#[test]
fn a_model_inside_parentheses_is_the_same() {
    let read = board("C1 a b CMOD 1n\n.model CMOD CAP(C=2, DEV=5%)\n");
    assert_eq!(read.lines(), ["C1 [a | b] C 2e-9 tolerance 0.05 model CMOD"]);
}

#[test]
fn a_bare_parameter_is_an_expression() {
    let read = board("R1 a b rval\n.param rval=10k\n.subckt s a b r2=1k\nR2 a b R2\nR3 a b RVAL\n.ends\n");
    assert_eq!(read.lines(), ["R1 [a | b] R {rval}"]);
    let body = &read.netlist.subcircuits[0].body.elements;
    assert_eq!(read.line(&body[0]), "R2 [a | b] R {R2}");
    assert_eq!(read.line(&body[1]), "R3 [a | b] R {RVAL}");
    assert!(read.faults.is_empty());
}

#[test]
fn a_blank_in_a_value_is_read_and_said() {
    let read = board("C1 a b 100 nF\nR1 a b 4.7 k\n");
    assert_eq!(read.lines(), ["C1 [a | b] C 1.0000000000000001e-7", "R1 [a | b] R 4.7e3"]);
    assert_eq!(read.kinds(), ["blank-in-value", "blank-in-value"]);
}

#[test]
fn a_potentiometer_has_three_nodes() {
    let read = board("RV1 a w b 10k\nR2 b c 1k\nR6 a w c 1k\n");
    assert_eq!(read.lines()[0], "RV1 [a | w | b] R 1e4");
    assert_eq!(read.lines()[2], "R6 [a | w | c] R 1e3");
    assert!(read.faults.is_empty());
}

#[test]
fn parameters_are_split() {
    let read = board(".param a=1 b = {2*a} c='a + b' d = 2 * a e=1,f=2\n.PARAMS g = 5k\n");
    let pairs: Vec<(&str, &str)> = (read.netlist.top.parameters.iter())
        .map(|assignment| (read.text(assignment.name), read.text(assignment.value)))
        .collect();
    assert_eq!(
        pairs,
        [("a", "1"), ("b", "2*a"), ("c", "a + b"), ("d", "2 * a"), ("e", "1"), ("f", "2"), ("g", "5k")]
    );
}

#[test]
fn missing_and_impossible_values() {
    let read =
        board("R1 a b\nC1 a b DNP\nL1 a b 10x5\nR2 a b -5\nR3 a\nC2 a b -1n\nR4 a b Rmod\n.model Rmod RES\n");
    assert_eq!(
        read.lines(),
        [
            "R1 [a | b] R -",
            "C1 [a | b] C - model DNP",
            "L1 [a | b] L -",
            "R2 [a | b] R -5e0",
            "C2 [a | b] C -1e-9",
            "R4 [a | b] R - model Rmod",
        ]
    );
    let mut kinds = read.kinds();
    kinds.sort_unstable();
    assert_eq!(
        kinds,
        [
            "missing-node",
            "missing-value",
            "missing-value",
            "missing-value",
            "not-positive-value",
            "not-positive-value",
            "unreadable-number",
        ]
    );
}
