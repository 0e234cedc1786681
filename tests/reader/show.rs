//! Reads a text and shows what was understood, one line a statement.

use gainsay::diagnostic::Diagnostic;
use gainsay::netlist::{Include, Kind, Netlist, Passive, Value, Waveform, read};
use gainsay::source::{FileId, Sources, Span};

/// A text that was read.
pub struct Read {
    pub sources: Sources,
    pub netlist: Netlist,
    pub faults: Vec<Diagnostic>,
}

/// Reads a board: the text behind a title line, with no files around it.
pub fn board(text: &str) -> Read {
    file("board.cir", &format!("title\n{text}"))
}

/// Reads a file as it stands.
pub fn file(path: &str, text: &str) -> Read {
    let none = |_: &mut Sources, _: &str, _: FileId| Include::Missing("no such file".to_owned());
    with(path, text, &mut { none })
}

/// Reads a file with what an include line gets.
pub fn with(path: &str, text: &str, load: &mut dyn FnMut(&mut Sources, &str, FileId) -> Include) -> Read {
    let mut sources = Sources::default();
    let file = sources.add(path, text.to_owned());
    let (netlist, faults) = read(&mut sources, file, load);
    Read { sources, netlist, faults }
}

impl Read {
    /// The elements outside any definition: name, nets in brackets, what it is.
    pub fn lines(&self) -> Vec<String> {
        self.netlist.top.elements.iter().map(|element| self.line(element)).collect()
    }

    /// One element.
    pub fn line(&self, element: &gainsay::netlist::Statement) -> String {
        let nodes: Vec<&str> = element.nodes.iter().map(|node| self.text(*node)).collect();
        format!("{} [{}] {}", self.text(element.name), nodes.join(" | "), self.kind(&element.kind))
    }

    /// The kinds of all faults, in order.
    pub fn kinds(&self) -> Vec<&'static str> {
        self.faults.iter().map(|fault| fault.kind).collect()
    }

    pub fn text(&self, span: Span) -> &str {
        self.sources.text(span)
    }

    pub fn value(&self, value: Option<Value>) -> String {
        match value {
            None => "-".to_owned(),
            Some(Value::Number(value, _)) => format!("{value:e}"),
            Some(Value::Expression(word)) => format!("{{{}}}", self.text(word)),
        }
    }

    fn kind(&self, kind: &Kind) -> String {
        match kind {
            Kind::Resistor(passive) => format!("R {}", self.passive(passive)),
            Kind::Capacitor(passive) => format!("C {}", self.passive(passive)),
            Kind::Inductor(passive) => format!("L {}", self.passive(passive)),
            Kind::VoltageSource(wave) => format!("V {}", self.wave(wave)),
            Kind::CurrentSource(wave) => format!("I {}", self.wave(wave)),
            Kind::VoltageGain(gain) => format!("gain {}", self.value(Some(*gain))),
            Kind::Call { model, parameters } => {
                let pair = |pair: &gainsay::netlist::Assignment| {
                    format!(" {}={}", self.text(pair.name), self.text(pair.value))
                };
                format!("call {}{}", self.text(*model), parameters.iter().map(pair).collect::<String>())
            }
            Kind::Diode { model } => format!("diode {}", model.map_or("-", |model| self.text(model))),
            Kind::Transistor { model } => {
                format!("transistor {}", model.map_or("-", |model| self.text(model)))
            }
            Kind::Unmodelled => "unmodelled".to_owned(),
        }
    }

    fn passive(&self, passive: &Passive) -> String {
        let mut out = self.value(passive.value);
        for (name, value) in [("tolerance", passive.tolerance), ("rating", passive.rating)] {
            if let Some(value) = value {
                out += &format!(" {name} {value}");
            }
        }
        if let Some(model) = passive.model {
            out += &format!(" model {}", self.text(model));
        }
        out
    }

    fn wave(&self, wave: &Waveform) -> String {
        let mut out = self.value(wave.dc);
        if let Some((low, high)) = wave.span {
            out += &format!(" {low} .. {high}");
        }
        out += if wave.ac { " ac" } else { "" };
        out + if wave.unknown { " unknown" } else { "" }
    }
}
