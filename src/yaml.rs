//! YAML texts as trees of nodes, each with its place; the only module that knows the YAML crate.
//!
//! Plain scalars keep the source's characters, so that a net may be called `1e3` or `no`. Anchors,
//! aliases and tags are refused: nothing here needs them, and a name that begins like one wants quotes.
//! Size, number of nodes and depth are bounded, so hostile texts end early.

mod fields;
mod fault;
mod load;

pub use fields::{Fields, Reader, choice};
pub use load::read;

use crate::source::Span;

/// A word with its place: a key, or a name that the text gives.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Name {
    /// The text.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// One node of a YAML text.
#[derive(Debug, Clone, PartialEq)]
pub struct Node {
    /// What it is.
    pub kind: Kind,
    /// Where it stands; of a collection, its first entry's line.
    pub span: Span,
}

/// What a node is.
#[derive(Debug, Clone, PartialEq)]
pub enum Kind {
    /// Nothing at all behind a key or dash; taken as left out.
    Empty,
    /// A scalar, as written.
    Scalar(String),
    /// A list.
    List(Vec<Node>),
    /// A mapping; keys are unique.
    Map(Vec<(Name, Node)>),
}

impl Node {
    /// What the node is, for messages.
    pub fn noun(&self) -> &'static str {
        match self.kind {
            Kind::Empty => "nothing",
            Kind::Scalar(_) => "a single value",
            Kind::List(_) => "a list",
            Kind::Map(_) => "a mapping",
        }
    }
}
