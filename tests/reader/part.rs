//! Calls, transistors, and letters that lie.

use super::show::board;

#[test]
fn calls() {
    let cases = [
        ("XU1 a b c d e TL072", "XU1 [a | b | c | d | e] call TL072"),
        ("X_U1A a b c LM324/301", "X_U1A [a | b | c] call LM324/301"),
        (
            "X1 a b c level.2 Avol=1Meg GBW=10Meg Vos=0",
            "X1 [a | b | c] call level.2 Avol=1Meg GBW=10Meg Vos=0",
        ),
        ("X1 0 b POT PARAMS: SET=0.5 VALUE = 1K", "X1 [0 | b] call POT SET=0.5 VALUE=1K"),
        ("X1 a b / CELL", "X1 [a | b] call CELL"),
        ("X1 a ? ? b UA741 x={2*y}", "X1 [a | ? | ? | b] call UA741 x=2*y"),
        ("X1 1 2 3 4 5 6 7 8 LM358", "X1 [1 | 2 | 3 | 4 | 5 | 6 | 7 | 8] call LM358"),
    ];
    for (line, expected) in cases {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), [expected], "{line}");
        assert!(read.faults.is_empty(), "{line}");
    }
}

#[test]
fn semiconductors() {
    let cases = [
        ("D1 a k 1N4148", "D1 [a | k] diode 1N4148"),
        ("D1 a k DMOD 2.5 off", "D1 [a | k] diode DMOD"),
        ("D1 a k", "D1 [a | k] diode -"),
        ("Q1 c b e 2N3904", "Q1 [c | b | e] transistor 2N3904"),
        ("Q1 1 2 3 0 QMOD 2.0", "Q1 [1 | 2 | 3 | 0] transistor QMOD"),
        ("M1 d g s b NMOS L=1u W=2u", "M1 [d | g | s | b] transistor NMOS"),
        ("J1 d g s J201", "J1 [d | g | s] transistor J201"),
    ];
    for (line, expected) in cases {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), [expected], "{line}");
        assert!(read.faults.is_empty(), "{line}");
    }
}

#[test]
fn letters_that_lie() {
    let cases = [
        ("U1 o n p v- p2 n2 o2 TL074", "U1 [o | n | p | v- | p2 | n2 | o2] call TL074"),
        ("A1 a b c INA128", "A1 [a | b | c] call INA128"),
        ("IC1 1 2 3 4 5 6 7 8 TL072", "IC1 [1 | 2 | 3 | 4 | 5 | 6 | 7 | 8] call TL072"),
        ("R6 c b e BC547", "R6 [c | b | e] call BC547"),
        ("R6 c b e 2N3904", "R6 [c | b | e] call 2N3904"),
        ("D5 a b c BAV99", "D5 [a | b | c] call BAV99"),
        ("J1 a b c d Conn_01x04", "J1 [a | b | c | d] unmodelled"),
        ("J1 a b c Conn_01x03", "J1 [a | b | c] unmodelled"),
        ("P2 a b CONN_2", "P2 [a | b] unmodelled"),
        ("U2 output plot_v1", "U2 [output | plot_v1] unmodelled"),
        ("A2 n1 0 0 0 0 0 n2 0 OTA g=1", "A2 [n1 | 0 | 0 | 0 | 0 | 0 | n2 | 0 | OTA] unmodelled"),
    ];
    for (line, expected) in cases {
        let read = board(&format!("{line}\n"));
        assert_eq!(read.lines(), [expected], "{line}");
        assert!(read.faults.is_empty(), "{line}: {:?}", read.faults);
    }
}

#[test]
fn elements_kept_for_their_nodes() {
    let read = board("S1 a b c d SMOD\nW1 a b V1 WMOD\nT1 a b c d Z0=50 TD=1n\nK1 L1 L2 0.99\nTP1 net\n");
    assert_eq!(
        read.lines(),
        [
            "S1 [a | b | c | d] unmodelled",
            "W1 [a | b] unmodelled",
            "T1 [a | b | c | d] unmodelled",
            "K1 [] unmodelled",
            "TP1 [net] unmodelled",
        ]
    );
    assert!(read.faults.is_empty());
}

#[test]
fn blanks_in_sheet_names_never_shift_a_line() {
    let cases = [
        ("R1 /Low EQ/Filter/Out GND 10k", "R1 [/Low EQ/Filter/Out | GND] R 1e4"),
        ("R1 GND /Low EQ/Filter/Out 10k", "R1 [GND | /Low EQ/Filter/Out] R 1e4"),
        ("R1 /Low EQ/Out /Low EQ/In 10k", "R1 [/Low EQ/Out | /Low EQ/In] R 1e4"),
        ("R1 /Low EQ/Filter/Out 0 10k", "R1 [/Low EQ/Filter/Out | 0] R 1e4"),
        ("C1 /My Own Sheet/a 0 33u/16V", "C1 [/My Own Sheet/a | 0] C 3.3e-5 rating 16"),
        (
            "XU1 /Low EQ/p /n VCC VEE /Low EQ/o TL072",
            "XU1 [/Low EQ/p | /n | VCC | VEE | /Low EQ/o] call TL072",
        ),
        ("XU1 /a b c LM324/XY", "XU1 [/a | b | c] call LM324/XY"),
        ("D1 /Low EQ/a k 1N4148", "D1 [/Low EQ/a | k] diode 1N4148"),
        ("R1 /a /b 10k/0.5W", "R1 [/a | /b] R 1e4 rating 0.5"),
    ];
    for (line, expected) in cases {
        assert_eq!(board(&format!("{line}\n")).lines(), [expected], "{line}");
    }
    let refused = board("R1 /a b c d e 10k\nR2 x y z /w 10k\n");
    assert_eq!(refused.lines(), ["R1 [/a b c d | e] R 1e4"]);
    assert_eq!(refused.kinds(), ["blank-in-name"]);
}
