//! Independent and controlled sources.

use super::show::board;

#[test]
fn independent_sources_in_any_order() {
    let cases = [
        ("V1 a b 15", "V 1.5e1"),
        ("V1 a b 15V", "V 1.5e1"),
        ("V1 a b DC 15", "V 1.5e1"),
        ("V1 a b DC=15", "V 1.5e1"),
        ("V1 a b dc = 15 ac = 1", "V 1.5e1 ac"),
        ("V1 a b", "V -"),
        ("V1 a b AC 1", "V - ac"),
        ("V1 a b AC", "V - ac"),
        ("V1 a b AC 0", "V -"),
        ("V1 a b AC 1 0 DC 2", "V 2e0 ac"),
        ("V1 a b 0.9 AC 1 0", "V 9e-1 ac"),
        ("V1 a b {vcc}", "V {vcc}"),
        ("V1 a b vcc", "V {vcc}"),
        ("V1 a b SIN(0 2 1k)", "V - -2 .. 2"),
        ("V1 a b SIN (1,2,1k)", "V - -1 .. 3"),
        ("V1 a b SINE 1 2 1k", "V - -1 .. 3"),
        ("V1 a b SIN(0 {.5*10} 1k)", "V - -5 .. 5"),
        ("V1 a b SIN(0 {amplitude} 1k)", "V - unknown"),
        ("V1 a b DC 1 SIN(0 1 1k) AC 1", "V 1e0 -1 .. 1 ac"),
        ("V1 a b PULSE(0 5 1u 1n 1n 1m 2m)", "V - 0 .. 5"),
        ("V1 a b PWL(0 0, 1m 5, 2m -1)", "V - -1 .. 5"),
        ("V1 a b PWL file=\"x.txt\"", "V - unknown"),
        ("V1 a b EXP(1 -3 0 1u)", "V - -3 .. 1"),
        ("V1 a b STIMULUS=pulse", "V - unknown"),
        ("V1 a b 5 Rser=0.1 Cpar=1p", "V 5e0"),
        ("I1 a b 10u", "I 1e-5"),
        ("I1 a b DC 80nA", "I 8e-8"),
    ];
    for (line, expected) in cases {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), [format!("{} [a | b] {expected}", &line[..2])], "{line}");
        assert!(read.faults.is_empty(), "{line}");
    }
}

#[test]
fn linear_two_port_sources() {
    let lines = [
        "E1 o 0 p n 100000",
        "E1 o 0 (p,n) 100000",
        "E1 (o,0) (p,n) 100000",
        "E1 o 0 ( p , n ) 1e5",
        "E1 o 0 p n {100000}",
        "E1 o 0 vcvs p n gain=1e5",
    ];
    for line in lines {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), ["E1 [o | 0 | p | n] gain 1e5"], "{line}");
        assert!(read.faults.is_empty(), "{line}");
    }
    assert_eq!(board("E1 o 0 p n {A0}\n").lines(), ["E1 [o | 0 | p | n] gain {A0}"]);
    assert_eq!(board("E1 Net-(U1-Pad1) 0 a b 2\n").lines(), ["E1 [Net-(U1-Pad1) | 0 | a | b] gain 2e0"]);
}

#[test]
fn other_forms_keep_their_nodes() {
    let cases = [
        ("E1 o 0 VALUE={LIMIT(V(p,n)*1E6,-10V,+10V)}", "o | 0 | p | n"),
        ("E1 o 0 VALUE = {V(p)*2}", "o | 0 | p"),
        ("E1 o 0 POLY(1) p n 0 1e5", "o | 0 | p | n"),
        ("E1 o 0 POLY(2) (a,b) (c,d) 0 1 1", "o | 0 | a | b | c | d"),
        ("E1 o 0 TABLE {V(p,n)} = (-1,-10) (1,10)", "o | 0 | p | n"),
        ("E1 o 0 LAPLACE {V(p,n)} = {1/(1+s)}", "o | 0 | p | n"),
    ];
    for (line, nodes) in cases {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), [format!("E1 [{nodes}] unmodelled")], "{line}");
        assert_eq!(read.kinds(), ["not-modelled"], "{line}");
    }
    let read = board("G1 o 0 p n 1m\nF1 a b V1 2\nH1 a b V1 2\nB1 a b V=V(x)*V(y,z)\nB2 a b I={I(V1)*2}\n");
    assert_eq!(
        read.lines(),
        [
            "G1 [o | 0 | p | n] unmodelled",
            "F1 [a | b] unmodelled",
            "H1 [a | b] unmodelled",
            "B1 [a | b | x | y | z] unmodelled",
            "B2 [a | b] unmodelled",
        ]
    );
    assert!(read.faults.is_empty());
}
