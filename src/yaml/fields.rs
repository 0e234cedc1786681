//! Nodes as typed fields. A fault of shape ends the reading; faults of value are collected.

use super::{Kind, Name, Node};
use crate::diagnostic::{Diagnostic, Severity};
use crate::quantity::QuantityFault;
use crate::source::{Span, nearest, quote};

/// Reads nodes and collects what is wrong with their values.
///
/// Methods return `Err` for a fault of shape alone; a value that can't be read is `None`, its fault kept.
#[derive(Debug, Default)]
pub struct Reader {
    /// Faults of value so far, in the order of reading.
    faults: Vec<Diagnostic>,
}

/// A mapping with a fixed set of keys.
#[derive(Debug)]
pub struct Fields<'a> {
    entries: &'a [(Name, Node)],
    span: Span,
    what: &'static str,
}

impl<'a> Fields<'a> {
    /// The node of a key; `None` where it is left out or has no value.
    pub fn get(&self, key: &str) -> Option<&'a Node> {
        let entry = self.entries.iter().find(|(name, _)| name.text == key);
        entry.map(|(_, node)| node).filter(|node| node.kind != Kind::Empty)
    }

    /// Where the mapping begins: its first key, which names it better than a bracket does.
    pub fn span(&self) -> Span {
        self.entries.first().map_or(self.span, |(name, _)| name.span)
    }
}

impl Reader {
    /// Ends the reading: what was read, or nothing after a fault of shape, and all faults in the order of the text.
    pub fn finish<T: Default>(mut self, read: Result<T, Diagnostic>) -> (T, Vec<Diagnostic>) {
        let read = read.unwrap_or_else(|shape| {
            self.faults.push(shape);
            T::default()
        });
        self.faults.sort_by_key(|fault| fault.labels.first().map(|label| label.span));
        (read, self.faults)
    }

    /// A mapping with known keys; unknown ones are faults with the nearest known key.
    ///
    /// # Errors
    /// The node isn't a mapping.
    pub fn fields<'a>(
        &mut self,
        node: &'a Node,
        what: &'static str,
        known: &[&str],
    ) -> Result<Fields<'a>, Diagnostic> {
        let entries = entries(node, what)?;
        for (name, _) in entries.iter().filter(|(name, _)| !known.contains(&name.text.as_str())) {
            let message = format!("{what} has no key {}", quote(&name.text));
            let help = match nearest(&name.text, known.iter().copied()) {
                Some(key) => format!("did you mean `{key}`?"),
                None => format!("known keys: {}", known.join(", ")),
            };
            self.fault("unknown-key", name.span, message, Some(help));
        }
        Ok(Fields { entries, span: node.span, what })
    }

    /// The node of a key that may not be left out.
    pub fn need<'a>(&mut self, fields: &Fields<'a>, key: &str) -> Option<&'a Node> {
        let found = fields.get(key);
        if found.is_none() {
            let message = format!("{} lacks the key `{key}`", fields.what);
            self.fault("missing-key", fields.span(), message, None);
        }
        found
    }

    /// The value of a key, where it is there and can be read.
    ///
    /// # Errors
    /// The value is a list or mapping.
    pub fn value<T>(
        &mut self,
        fields: &Fields<'_>,
        key: &str,
        read: impl FnOnce(&str) -> Result<T, QuantityFault>,
    ) -> Result<Option<T>, Diagnostic> {
        fields.get(key).map_or(Ok(None), |node| self.scalar(node, read))
    }

    /// The value of a single node.
    ///
    /// # Errors
    /// The node isn't a scalar.
    pub fn scalar<T>(
        &mut self,
        node: &Node,
        read: impl FnOnce(&str) -> Result<T, QuantityFault>,
    ) -> Result<Option<T>, Diagnostic> {
        match read(text(node)?) {
            Ok(value) => Ok(Some(value)),
            Err(QuantityFault { message, help }) => {
                self.fault("bad-value", node.span, message, help);
                Ok(None)
            }
        }
    }

    /// The text of a key as it stands.
    ///
    /// # Errors
    /// The value is a list or mapping.
    pub fn text(&mut self, fields: &Fields<'_>, key: &str) -> Result<Option<String>, Diagnostic> {
        fields.get(key).map(|node| text(node).map(str::to_string)).transpose()
    }

    /// The name behind a key, with its place.
    ///
    /// # Errors
    /// The value is a list or mapping.
    pub fn name(&mut self, fields: &Fields<'_>, key: &str) -> Result<Option<Name>, Diagnostic> {
        match fields.get(key) {
            Some(node) => self.one_name(node),
            None => Ok(None),
        }
    }

    /// The names behind a key: one, or a list. Empty where the key is left out.
    ///
    /// # Errors
    /// The value is a mapping, or an entry isn't a scalar.
    pub fn names(&mut self, fields: &Fields<'_>, key: &str) -> Result<Vec<Name>, Diagnostic> {
        let mut names = Vec::new();
        for node in fields.get(key).map_or(&[][..], one_or_more) {
            names.extend(self.one_name(node)?);
        }
        Ok(names)
    }

    /// Each of the values behind a key, one or a list; what can't be read is left out.
    ///
    /// # Errors
    /// The value is a mapping, or an entry isn't a scalar.
    pub fn values<T>(
        &mut self,
        fields: &Fields<'_>,
        key: &str,
        read: impl Fn(&str) -> Result<T, QuantityFault>,
    ) -> Result<Vec<T>, Diagnostic> {
        let mut values = Vec::new();
        for node in fields.get(key).map_or(&[][..], one_or_more) {
            values.extend(self.scalar(node, &read)?);
        }
        Ok(values)
    }

    /// The entries of a list; none where the key is left out.
    ///
    /// # Errors
    /// The value isn't a list.
    pub fn list<'a>(&mut self, fields: &Fields<'a>, key: &str) -> Result<&'a [Node], Diagnostic> {
        match fields.get(key) {
            Some(node) => list(node, &format!("`{key}`")),
            None => Ok(&[]),
        }
    }

    /// The entries of a text that is one list.
    ///
    /// # Errors
    /// The node isn't a list.
    pub fn items<'a>(&mut self, node: &'a Node, what: &str) -> Result<&'a [Node], Diagnostic> {
        list(node, what)
    }

    /// The entries of a mapping whose keys are the user's names; none where the key is left out.
    ///
    /// # Errors
    /// The value isn't a mapping.
    pub fn map<'a>(
        &mut self,
        fields: &Fields<'a>,
        key: &'static str,
    ) -> Result<&'a [(Name, Node)], Diagnostic> {
        match fields.get(key) {
            Some(node) => entries(node, &format!("`{key}`")),
            None => Ok(&[]),
        }
    }

    /// How many faults of value there are so far.
    pub fn count(&self) -> usize {
        self.faults.len()
    }

    /// Keeps a fault of value.
    pub fn fault(
        &mut self,
        kind: &'static str,
        span: Span,
        message: impl Into<String>,
        help: Option<String>,
    ) {
        let fault = Diagnostic::at(kind, Severity::Error, span, message);
        self.faults.push(Diagnostic { help, ..fault });
    }

    fn one_name(&mut self, node: &Node) -> Result<Option<Name>, Diagnostic> {
        let text = text(node)?;
        let fits = !text.is_empty() && !text.contains([' ', '\t', '\n', '\r', ',']);
        if fits {
            return Ok(Some(Name { text: text.to_string(), span: node.span }));
        }
        let help = text.contains([',', ' ']).then(|| {
            let words: Vec<&str> = text.split([',', ' ']).filter(|word| !word.is_empty()).take(3).collect();
            format!("for several names write a list: {}", quote(&format!("[{}]", words.join(", "))))
        });
        self.fault("bad-name", node.span, format!("expected a name, found {}", quote(text)), help);
        Ok(None)
    }
}

/// Reads one of several words.
///
/// # Errors
/// The text is none of them; the fault names the nearest, or all.
pub fn choice<T: Copy>(text: &str, what: &str, words: &[(&str, T)]) -> Result<T, QuantityFault> {
    if let Some((_, value)) = words.iter().find(|(word, _)| *word == text) {
        return Ok(*value);
    }
    let names = || words.iter().map(|(word, _)| *word);
    let all = names().collect::<Vec<_>>().join(", ");
    let fault = QuantityFault::new(format!("expected {what} ({all}), found {}", quote(text)));
    Err(match nearest(text, names()) {
        Some(word) => fault.help(format!("did you mean `{word}`?")),
        None => fault,
    })
}

/// The text of a scalar.
fn text(node: &Node) -> Result<&str, Diagnostic> {
    match &node.kind {
        Kind::Scalar(text) => Ok(text),
        _ => Err(wrong(node, "a single value")),
    }
}

/// The entries of a list.
fn list<'a>(node: &'a Node, what: &str) -> Result<&'a [Node], Diagnostic> {
    match &node.kind {
        Kind::List(items) => Ok(items),
        _ => Err(wrong(node, &format!("a list for {what}"))),
    }
}

/// The entries of a mapping; nothing at all counts as a mapping without entries.
fn entries<'a>(node: &'a Node, what: &str) -> Result<&'a [(Name, Node)], Diagnostic> {
    match &node.kind {
        Kind::Map(entries) => Ok(entries),
        Kind::Empty => Ok(&[]),
        _ => Err(wrong(node, &format!("a mapping for {what}"))),
    }
}

/// The items of a list, or the node itself as the only one.
fn one_or_more(node: &Node) -> &[Node] {
    match &node.kind {
        Kind::List(items) => items,
        _ => std::slice::from_ref(node),
    }
}

fn wrong(node: &Node, expected: &str) -> Diagnostic {
    let found = match &node.kind {
        Kind::Scalar(text) => quote(text),
        _ => node.noun().to_string(),
    };
    let fault = Diagnostic::at(
        "yaml-shape",
        Severity::Error,
        node.span,
        format!("expected {expected}, found {found}"),
    );
    // Of the collections only those in brackets have a mark, and may have been meant as text.
    let bracket = matches!(node.kind, Kind::List(_) | Kind::Map(_)) && node.span.start < node.span.end;
    if bracket { fault.help("text that begins with `[` or `{` wants quotes") } else { fault }
}
