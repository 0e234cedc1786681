//! Boards of any size for the benches: the usual stages in turn, each chain with a signal of its own.

use std::fmt::Write;

/// A netlist of `stages` op amps in seven topologies, five stages to a chain.
pub fn netlist(stages: usize) -> String {
    let mut text = String::from("* generated board\nVP VCC 0 15\nVN 0 VEE 15\n");
    let mut from = String::new();
    for at in 0..stages {
        if at % 5 == 0 {
            let _ = writeln!(text, "VS{at} SIG{at} 0 SIN(0 0.2 1k)");
            from = format!("SIG{at}");
        }
        let out = format!("OUT{at}");
        let _ = match at % 7 {
            0 => writeln!(
                text,
                "XU{at} {from} N{at}A VCC VEE {out} OP07C\nRA{at} N{at}A 0 10k 1%\nRB{at} {out} N{at}A 20k 1%"
            ),
            1 => writeln!(
                text,
                "RA{at} {from} N{at}A 10k 1%\nRB{at} N{at}A {out} 22k 1%\nXU{at} 0 N{at}A VCC VEE {out} TL072"
            ),
            2 => writeln!(text, "XU{at} {from} {out} VCC VEE {out} NE5532\nRL{at} {out} 0 10k"),
            3 => writeln!(
                text,
                "RA{at} {from} N{at}A 10k 1%\nRB{at} N{at}A {out} 10k 1%\nRC{at} 0 N{at}B 10k 1%\n\
                 RD{at} N{at}B 0 10k 1%\nXU{at} N{at}B N{at}A VCC VEE {out} OP07C"
            ),
            4 => writeln!(
                text,
                "RA{at} {from} N{at}A 47k 1%\nRB{at} N{at}A N{at}T 47k 1%\nRT{at} N{at}T 0 22k 1%\n\
                 RD{at} N{at}T {out} 22k 1%\nXU{at} 0 N{at}A VCC VEE {out} TL072"
            ),
            5 => writeln!(
                text,
                "RA{at} {from} N{at}P 10k 1%\nRB{at} N{at}P 0 10k 1%\nXU{at} N{at}P N{at}A VCC VEE {out} OP07C\n\
                 RC{at} N{at}A 0 10k 1%\nRD{at} {out} N{at}A 10k 1%"
            ),
            _ => writeln!(text, "XU{at} {from} {out} VCC VEE {out} OP07C"),
        };
        from = out;
    }
    text.push_str(".end\n");
    text
}
