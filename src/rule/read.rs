//! A rule pack out of its YAML text.

use super::{Limit, Rule, RuleScope};
use crate::device::technology;
use crate::diagnostic::{Diagnostic, Severity};
use crate::quantity::{QuantityFault, Unit, parse, parse_share};
use crate::source::{FileId, Sources, nearest, quote};
use crate::yaml::{self, Fields, Name, Node, Reader, choice};

/// What reading a part of a pack gives: `Err` is a fault of shape.
type Read<T> = Result<T, Diagnostic>;

/// Reads a rule pack, a list of rules.
///
/// `known` holds every figure with its unit, and every fact with `None`. A fault of shape ends the reading;
/// every fault of value is reported, and a rule without a known name or a severity is left out.
pub fn read_pack(
    sources: &Sources,
    file: FileId,
    known: &[(&str, Option<Unit>)],
) -> (Vec<Rule>, Vec<Diagnostic>) {
    let mut reader = Reader::default();
    let read = yaml::read(sources, file)
        .and_then(|root| root.map_or(Ok(Vec::new()), |root| pack(&mut reader, &root, known)));
    reader.finish(read)
}

fn pack(reader: &mut Reader, root: &Node, known: &[(&str, Option<Unit>)]) -> Read<Vec<Rule>> {
    let mut rules = Vec::new();
    for node in reader.items(root, "a rule pack")? {
        rules.extend(rule(reader, node, known)?);
    }
    Ok(rules)
}

fn rule(reader: &mut Reader, node: &Node, known: &[(&str, Option<Unit>)]) -> Read<Option<Rule>> {
    let keys = ["figure", "fact", "limit", "guard", "severity", "scope", "reason", "source"];
    let fields = reader.fields(node, "a rule", &keys)?;
    for key in ["severity", "reason", "source"] {
        reader.need(&fields, key);
    }
    let subject = subject(reader, &fields, known)?;
    let unit = subject.as_ref().and_then(|(_, unit)| *unit);
    let severity = reader.value(&fields, "severity", severity)?;
    let scope = scope(reader, &fields)?;
    let reason = reader.text(&fields, "reason")?;
    let source = reader.text(&fields, "source")?;
    let (limit, guard) = match (&subject, unit) {
        (Some(_), Some(unit)) => (
            reader.value(&fields, "limit", |text| limit(text, unit))?,
            reader.value(&fields, "guard", |text| limit(text, unit))?,
        ),
        _ => (None, None),
    };
    let (Some((name, _)), Some(severity), Some(reason), Some(source)) = (subject, severity, reason, source)
    else {
        return Ok(None);
    };
    Ok(Some(Rule { name: name.text, limit, guard, severity, scope, reason, source, span: Some(name.span) }))
}

/// The figure or fact that a rule is about, with a figure's unit.
fn subject(
    reader: &mut Reader,
    fields: &Fields<'_>,
    known: &[(&str, Option<Unit>)],
) -> Read<Option<(Name, Option<Unit>)>> {
    let figure = reader.name(fields, "figure")?;
    let fact = reader.name(fields, "fact")?;
    let (name, is_figure) = match (figure, fact) {
        (Some(name), None) => (name, true),
        (None, Some(name)) => (name, false),
        (None, None) => {
            reader.fault("missing-key", fields.span(), "a rule lacks the key `figure` or `fact`", None);
            return Ok(None);
        }
        (Some(_), Some(fact)) => {
            let message = "a rule is about a figure or about a fact, found both";
            reader.fault("bad-value", fact.span, message, None);
            return Ok(None);
        }
    };
    let noun = |figure: bool| if figure { "figure" } else { "fact" };
    match known.iter().find(|(known, _)| *known == name.text) {
        Some((_, unit)) if unit.is_some() == is_figure => {
            limits_on_facts(reader, fields, is_figure);
            return Ok(Some((name, *unit)));
        }
        Some(_) => {
            let message =
                format!("{} is a {}, found it as a {}", quote(&name.text), noun(!is_figure), noun(is_figure));
            let help = format!("write `{}: {}`", noun(!is_figure), name.text);
            reader.fault("bad-name", name.span, message, Some(help));
        }
        None => {
            let same = known.iter().filter(|(_, unit)| unit.is_some() == is_figure);
            let help = nearest(&name.text, same.map(|(known, _)| *known));
            let message = format!("there is no {} {}", noun(is_figure), quote(&name.text));
            reader.fault("bad-name", name.span, message, help.map(|near| format!("did you mean `{near}`?")));
        }
    }
    Ok(None)
}

/// A fact is there or not; a limit on one would never be looked at.
fn limits_on_facts(reader: &mut Reader, fields: &Fields<'_>, is_figure: bool) {
    for key in ["limit", "guard"] {
        if let (Some(node), false) = (fields.get(key), is_figure) {
            reader.fault("bad-value", node.span, format!("a fact has no `{key}`"), None);
        }
    }
}

/// Reads a limit of a figure with the given unit.
fn limit(text: &str, unit: Unit) -> Result<Limit, QuantityFault> {
    match (text.trim(), unit) {
        ("rated load", Unit::Ohm) => Ok(Limit::RatedLoad),
        ("top of band", Unit::Hertz) => Ok(Limit::TopOfBand),
        (text, Unit::Volt) if text.ends_with("of span") => {
            parse_share(text.trim_end_matches("of span")).map(Limit::ShareOfSpan)
        }
        (text, unit) => parse(text, unit).map(Limit::Value),
    }
}

fn severity(text: &str) -> Result<Severity, QuantityFault> {
    let all = [Severity::Error, Severity::Warning, Severity::Note];
    choice(text, "a severity", &all.map(|severity| (severity.word(), severity)))
}

fn scope(reader: &mut Reader, fields: &Fields<'_>) -> Read<RuleScope> {
    let Some(node) = fields.get("scope") else { return Ok(RuleScope::default()) };
    let fields = reader.fields(node, "`scope`", &["topology", "technology", "device", "designator"])?;
    let texts = |reader: &mut Reader, key: &str| -> Read<Vec<String>> {
        Ok(reader.names(&fields, key)?.into_iter().map(|name| name.text).collect())
    };
    Ok(RuleScope {
        topology: texts(reader, "topology")?,
        technology: reader.values(&fields, "technology", technology)?,
        device: texts(reader, "device")?,
        designator: texts(reader, "designator")?,
    })
}

#[cfg(test)]
mod tests;
