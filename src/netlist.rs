//! Text to statements: one logical line at a time, positions kept. No I/O of its own.
//!
//! A bad line is a [`Diagnostic`] at its place and the rest is still read. Names stay as written;
//! they match in any case.

use crate::diagnostic::Diagnostic;
use crate::source::{FileId, Sources, Span};
use smallvec::SmallVec;

mod controlled;
mod directive;
mod element;
mod expression;
mod fault;
mod finish;
pub mod limit;
mod line;
mod name;
mod number;
mod passive;
mod phrase;
mod reader;
mod remark;
mod settle;
mod sheet;
mod title;
mod wave;

pub use expression::evaluate;
pub use name::{name_hash, name_order, same_name};
pub use number::{Number, number};
pub use remark::percentage;

/// A word of the text: a name, a value or an expression, by its place.
pub type Word = Span;

/// Everything one netlist and its includes say.
#[derive(Debug, Default)]
pub struct Netlist {
    /// The title line, where the file has one.
    pub title: Option<Span>,
    /// Every definition, nested ones too, in the order of their first lines.
    pub subcircuits: Vec<Subcircuit>,
    /// What stands outside any definition.
    pub top: Scope,
    /// Names that `.global` makes one net in every subcircuit.
    pub globals: Vec<Word>,
    /// Files read after the first, in order, with the line that includes each.
    pub includes: Vec<(FileId, Span)>,
}

/// The statements of one level: the top or one definition's body.
#[derive(Debug, Default)]
pub struct Scope {
    /// Elements in netlist order.
    pub elements: Vec<Statement>,
    /// `.param` assignments, in order.
    pub parameters: Vec<Assignment>,
    /// `.model` lines.
    pub models: Vec<Model>,
    /// Indices into [`Netlist::subcircuits`] of the definitions written at this level.
    pub definitions: Vec<usize>,
}

/// One `.subckt`.
#[derive(Debug)]
pub struct Subcircuit {
    /// Its name.
    pub name: Word,
    /// Its ports in order.
    pub ports: Vec<Word>,
    /// Parameters with defaults, from its own line.
    pub defaults: Vec<Assignment>,
    /// What it holds.
    pub body: Scope,
    /// The definition it is written in.
    pub parent: Option<usize>,
}

/// `name = value`; the value may be an expression with or without braces or quotes.
#[derive(Debug, Clone, Copy)]
pub struct Assignment {
    /// The name on the left.
    pub name: Word,
    /// The text on the right, without braces or quotes.
    pub value: Word,
}

/// A `.model` line.
#[derive(Debug)]
pub struct Model {
    /// Its name.
    pub name: Word,
    /// Its type, such as `D` or `RES`.
    pub kind: Word,
    /// Its parameters.
    pub parameters: Vec<Assignment>,
}

/// One element.
#[derive(Debug)]
pub struct Statement {
    /// The name as written, letter included.
    pub name: Word,
    /// The nets it joins, in order.
    pub nodes: SmallVec<[Word; 4]>,
    /// What it is.
    pub kind: Kind,
    /// From its first to its last character, on its first line.
    pub span: Span,
}

/// A number, or the expression that gives it.
#[derive(Debug, Clone, Copy)]
pub enum Value {
    /// A literal, in SI units, with the place it stands at.
    Number(f64, Word),
    /// The text of an expression, without braces or quotes, evaluated where it is used.
    Expression(Word),
}

/// What an element is.
#[derive(Debug)]
pub enum Kind {
    /// R: resistance in ohm; `None` where the line has no value. A third node is that of a potentiometer, whose
    /// wiper is the second.
    Resistor(Passive),
    /// C: capacitance in farad.
    Capacitor(Passive),
    /// L: inductance in henry.
    Inductor(Passive),
    /// V: an independent voltage source.
    VoltageSource(Waveform),
    /// I: an independent current source; drives its value from the first node through itself to the second.
    CurrentSource(Waveform),
    /// E with two control nodes behind its two output nodes (four in all): output = gain x control.
    VoltageGain(Value),
    /// X: a call; parameters given on the call. The model is the last bare word.
    Call {
        /// The definition or device that is called.
        model: Word,
        /// Parameters on the call.
        parameters: Vec<Assignment>,
    },
    /// D.
    Diode {
        /// Its model, where given.
        model: Option<Word>,
    },
    /// Q, J, M: a transistor with three or four nodes.
    Transistor {
        /// Its model, where given.
        model: Option<Word>,
    },
    /// Anything else that was read and kept: its nodes count, its values do not.
    Unmodelled,
}

/// Value, tolerance and rating of R, C or L.
#[derive(Debug, Clone, Copy, Default)]
pub struct Passive {
    /// Its value; `None` where the line has none. The factor of its `.model` and parts in parallel (`m=`) are in it
    /// already where it is a literal.
    pub value: Option<Value>,
    /// Relative tolerance where the netlist states it, its `.model` included (0.01 for 1 %).
    pub tolerance: Option<f64>,
    /// Rated power (R, watt) or voltage (C, volt) where the netlist states it.
    pub rating: Option<f64>,
    /// The `.model` it names.
    pub model: Option<Word>,
}

/// What an independent source does.
#[derive(Debug, Clone, Copy, Default)]
pub struct Waveform {
    /// The DC value, where given.
    pub dc: Option<Value>,
    /// Lowest and highest value that a transient waveform (SIN, PULSE, PWL, EXP) spans, where one is given.
    pub span: Option<(f64, f64)>,
    /// Whether an AC magnitude is given.
    pub ac: bool,
    /// Whether the waveform is there but its values can't be told (a file, a stimulus, an expression).
    pub unknown: bool,
}

/// How an include line is answered: the file's text, or why there is none.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Include {
    /// The text was added to the sources.
    Found(FileId),
    /// No such file, or it can't be read; the reason in a few words.
    Missing(String),
    /// It lies outside the project folder, or is no plain file.
    Refused(String),
}

/// Reads a netlist. `load` gets the path as written and the file whose line asks for it, and adds the text to the
/// sources; a text that it has added before it may answer with the same id.
///
/// Every fault is a diagnostic and reading goes on; the limits in [`limit`] bound the work.
pub fn read(
    sources: &mut Sources,
    file: FileId,
    load: &mut dyn FnMut(&mut Sources, &str, FileId) -> Include,
) -> (Netlist, Vec<Diagnostic>) {
    let mut reader = reader::Reader::default();
    reader.run(sources, file, load);
    let reader::Reader { mut netlist, mut faults, .. } = reader;
    finish::finish(&mut netlist, sources, file, &mut faults);
    (netlist, faults.list)
}
