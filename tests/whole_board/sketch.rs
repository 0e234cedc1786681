//! A board as a list of elements, its netlist, and the profiles of its op amps.

use crate::nodal::{Element, Net, OpAmp};
use gainsay::device::{Catalogue, Entry, Key, Profile, Technology};
use std::fmt::Write;

/// A board while it is drawn. Every op amp has a profile of its own.
#[derive(Debug, Default)]
pub struct Sketch {
    /// Nets, ground not counted.
    pub nets: usize,
    /// Elements in netlist order.
    pub elements: Vec<Element>,
    /// Elements that carry no signal but a fixed voltage.
    pub fixed: Vec<usize>,
}

impl Sketch {
    /// A new net.
    pub fn net(&mut self) -> Net {
        self.nets += 1;
        self.nets
    }

    /// The netlist.
    pub fn netlist(&self) -> String {
        let mut text = String::from("random board\n");
        for (at, element) in self.elements.iter().enumerate() {
            let fixed = self.fixed.contains(&at);
            line(&mut text, at, element, fixed).expect("a string takes every line");
        }
        text + ".end\n"
    }

    /// A catalogue that holds the profile of every op amp.
    pub fn catalogue(&self) -> Catalogue {
        let profiles = self.elements.iter().enumerate().filter_map(|(at, element)| match element {
            Element::OpAmp(.., model) => Some(profile(&format!("part{at}"), *model)),
            _ => None,
        });
        Catalogue { profiles: profiles.collect(), ..Catalogue::default() }
    }
}

/// What a net is called.
pub fn name(net: Net) -> String {
    if net == 0 { "0".to_owned() } else { format!("n{net}") }
}

fn line(text: &mut String, at: usize, element: &Element, fixed: bool) -> std::fmt::Result {
    match *element {
        Element::Resistor(a, b, ohms) => writeln!(text, "R{at} {} {} {ohms:e}", name(a), name(b)),
        Element::OpAmp(plus, minus, output, _) => {
            writeln!(text, "XU{at} {} {} {} part{at}", name(plus), name(minus), name(output))
        }
        Element::Gain(output, plus, minus, gain) => {
            writeln!(text, "E{at} {} 0 {} {} {gain:e}", name(output), name(plus), name(minus))
        }
        Element::Source(plus, minus) if fixed => writeln!(text, "V{at} {} {} DC 1", name(plus), name(minus)),
        Element::Source(plus, minus) => writeln!(text, "V{at} {} {} AC 1", name(plus), name(minus)),
        Element::Current(into, from) => writeln!(text, "I{at} {} {} AC 1", name(from), name(into)),
        Element::Capacitor(a, b) => writeln!(text, "C{at} {} {} 10n", name(a), name(b)),
    }
}

fn profile(name: &str, model: OpAmp) -> Profile {
    let mut entries = vec![Vec::new(); Key::ALL.len()];
    let values = [
        (Key::OpenLoopGain, model.gain),
        (Key::InputResistance, model.differential),
        (Key::CommonModeResistance, model.common),
        (Key::OutputResistance, model.output),
    ];
    for (key, value) in values {
        entries[key as usize].push(Entry { typ: Some(value), ..Entry::default() });
    }
    Profile {
        name: name.to_owned(),
        aliases: Vec::new(),
        technology: Technology::Bipolar,
        generic: false,
        sections: 1,
        pins: Vec::new(),
        source: "invented".to_owned(),
        notes: Vec::new(),
        entries,
        span: None,
    }
}
