//! Definitions, directives, and what is passed over.

use super::show::{Read, board};

fn ports(read: &Read, index: usize) -> Vec<&str> {
    read.netlist.subcircuits[index].ports.iter().map(|port| read.text(*port)).collect()
}

#[test]
fn definitions_nest() {
    let read = board(
        ".subckt outer a b params: gain=10 off = {2*x}\nR1 a b 1k\n.subckt inner x y\nR1 x y 2k\n.param p=1\n.ends inner\nX1 a b inner\n.ends outer\nX1 in out outer gain=5\n",
    );
    assert_eq!(ports(&read, 0), ["a", "b"]);
    assert_eq!(ports(&read, 1), ["x", "y"]);
    let outer = &read.netlist.subcircuits[0];
    let defaults: Vec<_> =
        outer.defaults.iter().map(|pair| (read.text(pair.name), read.text(pair.value))).collect();
    assert_eq!(defaults, [("gain", "10"), ("off", "2*x")]);
    assert_eq!((outer.parent, read.netlist.subcircuits[1].parent), (None, Some(0)));
    assert_eq!((&read.netlist.top.definitions, &outer.body.definitions), (&vec![0], &vec![1]));
    assert_eq!(read.netlist.subcircuits[1].body.parameters.len(), 1);
    assert_eq!(outer.body.elements.len(), 2);
    assert!(read.faults.is_empty(), "{:?}", read.faults);
}

#[test]
fn ports_in_every_form() {
    let read = board(
        ".subckt one (a b c)\n.ends\n.SUBCKT two Net-(U1-Pad2) in+ optional: vcc=$G_DPWR text: x=1\n.ENDS\n.subckt three a\n+ b g=1\n.ends\n",
    );
    assert_eq!(ports(&read, 0), ["a", "b", "c"]);
    assert_eq!(ports(&read, 1), ["Net-(U1-Pad2)", "in+"]);
    assert_eq!(ports(&read, 2), ["a", "b"]);
    assert_eq!(read.netlist.subcircuits[1].defaults.len(), 2);
    assert!(read.faults.is_empty(), "{:?}", read.faults);
}

#[test]
fn globals_and_models() {
    let read = board(".global VCC VEE\n.model QX NPN(Is=1f Bf=200, Vaf=70 )\n.model DX D\n");
    assert_eq!(read.netlist.globals.iter().map(|name| read.text(*name)).collect::<Vec<_>>(), ["VCC", "VEE"]);
    let model = &read.netlist.top.models[0];
    let pairs: Vec<_> =
        model.parameters.iter().map(|pair| (read.text(pair.name), read.text(pair.value))).collect();
    assert_eq!((read.text(model.name), read.text(model.kind)), ("QX", "NPN"));
    assert_eq!(pairs, [("Is", "1f"), ("Bf", "200"), ("Vaf", "70")]);
    assert_eq!(read.text(read.netlist.top.models[1].kind), "D");
}

#[test]
fn blocks_and_analyses_are_passed_over() {
    let read = board(
        ".control\nrun\nR9 a b 1k\nplot v(out) {\n.endc\n.ac dec 10 1 1Meg\n.OPTIONS reltol=1e-4\n+ abstol=1e-12\n.meas tran x max v(a)\n.probe\n.backanno\n.ALIASES\nR_R1 R1(1=a 2=b)\n.ENDALIASES\n.aliase\nR1 a b 1k\n",
    );
    assert_eq!(read.lines(), ["R1 [a | b] R 1e3"]);
    assert_eq!(read.kinds(), ["unknown-directive"]);
}
