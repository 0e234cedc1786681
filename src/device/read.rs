//! Profiles, and what is assumed where they say nothing, out of YAML texts.

use super::{Assumed, Conditions, Derating, Entry, Key, LoadTo, Pin, Profile, Technology};
use crate::diagnostic::Diagnostic;
use crate::quantity::{
    Amps, Celsius, Farads, Ohms, QuantityFault, Unit, Volts, parse, parse_gain, parse_range, parse_share,
};
use crate::source::{FileId, Sources, nearest, quote};
use crate::yaml::{self, Fields, Kind, Node, Reader, choice};
use std::collections::BTreeSet;

mod assumed;

pub use assumed::read_assumed;

/// What reading a part of a file gives: `Err` is a fault of shape.
type Read<T> = Result<T, Diagnostic>;

/// Reads a file of profiles, a list. A fault of shape ends the reading; every fault of value is reported,
/// and a profile that lacks its name, technology or source is left out.
pub fn read_profiles(sources: &Sources, file: FileId) -> (Vec<Profile>, Vec<Diagnostic>) {
    let mut reader = Reader::default();
    let read = yaml::read(sources, file)
        .and_then(|root| root.map_or(Ok(Vec::new()), |root| devices(&mut reader, &root)));
    reader.finish(read)
}

/// Reads the name of a technology.
///
/// # Errors
/// The text names none.
pub fn technology(text: &str) -> Result<Technology, QuantityFault> {
    choice(text, "a technology", &Technology::ALL.map(|technology| (technology.word(), technology)))
}

fn pin(text: &str) -> Result<Pin, QuantityFault> {
    choice(text, "a pin", &Pin::ALL.map(|pin| (pin.word(), pin)))
}

fn devices(reader: &mut Reader, root: &Node) -> Read<Vec<Profile>> {
    let mut profiles = Vec::new();
    let mut names = BTreeSet::new();
    for node in reader.items(root, "a file of devices")? {
        let Some(profile) = profile(reader, node)? else { continue };
        if !names.insert(profile.name.clone()) {
            let span = profile.span.unwrap_or(node.span);
            let message = format!("the device {} stands here a second time", quote(&profile.name));
            reader.fault("bad-name", span, message, None);
            continue;
        }
        profiles.push(profile);
    }
    Ok(profiles)
}

fn profile(reader: &mut Reader, node: &Node) -> Read<Option<Profile>> {
    let keys =
        ["device", "aliases", "technology", "generic", "sections", "pins", "source", "notes", "parameters"];
    let fields = reader.fields(node, "a device", &keys)?;
    for key in ["device", "technology", "source", "parameters"] {
        reader.need(&fields, key);
    }
    let name = reader.name(&fields, "device")?;
    let aliases = reader.names(&fields, "aliases")?.into_iter().map(|alias| alias.text).collect();
    let technology = reader.value(&fields, "technology", technology)?;
    let truth = [("true", true), ("false", false)];
    let generic =
        reader.value(&fields, "generic", |text| choice(text, "a truth value", &truth))?.unwrap_or(false);
    let sections = reader.value(&fields, "sections", sections)?.unwrap_or(1);
    let pins = read_pins(reader, &fields)?.unwrap_or_default();
    let source = reader.text(&fields, "source")?;
    let notes = reader.values(&fields, "notes", |text| Ok(text.to_string()))?;
    let entries = parameters(reader, &fields)?;
    let (Some(name), Some(technology), Some(source)) = (name, technology, source) else { return Ok(None) };
    Ok(Some(Profile {
        name: name.text,
        aliases,
        technology,
        generic,
        sections,
        pins,
        source,
        notes,
        entries,
        span: Some(name.span),
    }))
}

fn sections(text: &str) -> Result<u32, QuantityFault> {
    let count = text.parse().ok().filter(|count| (1..=8).contains(count));
    count.ok_or_else(|| QuantityFault::new(format!("expected 1 to 8 sections, found {}", quote(text))))
}

/// Reads the key `pins`: the order of a call's pins. `None` where it is left out or at fault.
///
/// # Errors
/// The value is a mapping, or an entry isn't a scalar.
pub fn read_pins(reader: &mut Reader, fields: &Fields<'_>) -> Result<Option<Vec<Pin>>, Diagnostic> {
    let Some(node) = fields.get("pins") else { return Ok(None) };
    let before = reader.count();
    let pins = reader.values(fields, "pins", pin)?;
    if before < reader.count() {
        return Ok(None);
    }
    let twice = pins.iter().enumerate().any(|(at, pin)| pins[..at].contains(pin));
    let signals = [Pin::NonInverting, Pin::Inverting, Pin::Output].iter().all(|pin| pins.contains(pin));
    if signals && !twice {
        return Ok(Some(pins));
    }
    let message = if twice { "a pin is named twice" } else { "both inputs and the output must be named" };
    reader.fault("bad-value", node.span, message, None);
    Ok(None)
}

/// All entries, in the order of [`Key::ALL`].
fn parameters(reader: &mut Reader, fields: &Fields<'_>) -> Read<Vec<Vec<Entry>>> {
    let mut entries = vec![Vec::new(); Key::ALL.len()];
    for (name, node) in reader.map(fields, "parameters")? {
        match key(&name.text) {
            Ok(key) => entries[key as usize] = parameter(reader, key, node)?,
            Err(QuantityFault { message, help }) => reader.fault("unknown-key", name.span, message, help),
        }
    }
    Ok(entries)
}

fn key(text: &str) -> Result<Key, QuantityFault> {
    if let Some(key) = Key::ALL.iter().find(|key| key.name() == text) {
        return Ok(*key);
    }
    let fault = QuantityFault::new(format!("there is no parameter {}", quote(text)));
    Err(match nearest(text, Key::ALL.iter().map(|key| key.name())) {
        Some(key) => fault.help(format!("did you mean `{key}`?")),
        None => fault,
    })
}

fn parameter(reader: &mut Reader, key: Key, node: &Node) -> Read<Vec<Entry>> {
    let nodes = match &node.kind {
        Kind::List(items) => items.as_slice(),
        Kind::Empty => &[],
        _ => std::slice::from_ref(node),
    };
    let mut entries = Vec::new();
    for node in nodes {
        entries.extend(entry(reader, key, node)?);
    }
    Ok(entries)
}

/// One entry: a mapping, a typical value alone, or a range from `min` to `max`.
fn entry(reader: &mut Reader, key: Key, node: &Node) -> Read<Option<Entry>> {
    if !matches!(node.kind, Kind::Map(_)) {
        return reader.scalar(node, |text| bare_entry(text, key));
    }
    let fields = reader.fields(node, "a parameter", &["min", "typ", "max", "at", "source"])?;
    let entry = Entry {
        min: reader.value(&fields, "min", |text| value(text, key))?,
        typ: reader.value(&fields, "typ", |text| value(text, key))?,
        max: reader.value(&fields, "max", |text| value(text, key))?,
        at: conditions(reader, &fields)?,
        source: reader.text(&fields, "source")?,
    };
    let present: Vec<f64> = [entry.min, entry.typ, entry.max].into_iter().flatten().collect();
    let fault = match present.as_slice() {
        [] if ["min", "typ", "max"].iter().all(|key| fields.get(key).is_none()) => {
            "expected `min`, `typ` or `max`, found none of them"
        }
        // Then each value is at fault already.
        [] => return Ok(None),
        values if values.is_sorted() => return Ok(Some(entry)),
        _ => "expected min <= typ <= max",
    };
    reader.fault("bad-value", fields.span(), fault, None);
    Ok(None)
}

fn bare_entry(text: &str, key: Key) -> Result<Entry, QuantityFault> {
    if let Some((least, greatest)) = text.split_once("..") {
        let (min, max) = (value(least, key)?, value(greatest, key)?);
        let sorted = min <= max;
        let fault = || QuantityFault::new(format!("expected the lower end first, found {}", quote(text)));
        let entry = Entry { min: Some(min), max: Some(max), ..Entry::default() };
        return sorted.then_some(entry).ok_or_else(fault);
    }
    let value = Some(value(text, key)?);
    // An absolute maximum has no typical value.
    Ok(match key {
        Key::SupplyMaximum => Entry { max: value, ..Entry::default() },
        _ => Entry { typ: value, ..Entry::default() },
    })
}

/// A value of a parameter, checked for its sign.
fn value(text: &str, key: Key) -> Result<f64, QuantityFault> {
    let value = match key {
        Key::OpenLoopGain => parse_gain(text)?,
        _ => parse(text, key.unit())?,
    };
    let signed = matches!(key, Key::InputBelowPositive | Key::InputAboveNegative);
    // Resistances and gains are divided by.
    let zero = !matches!(
        key,
        Key::OpenLoopGain
            | Key::GainBandwidth
            | Key::SecondPole
            | Key::InputResistance
            | Key::CommonModeResistance
            | Key::RatedLoad
            | Key::SlewRate
    );
    match () {
        () if signed || 0.0 < value || (zero && value == 0.0) => Ok(value),
        () => {
            let least = if zero { "a magnitude, 0 or more" } else { "a value above 0" };
            Err(QuantityFault::new(format!("expected {least}, found {}", quote(text))))
        }
    }
}

fn conditions(reader: &mut Reader, fields: &Fields<'_>) -> Read<Conditions> {
    let Some(node) = fields.get("at") else { return Ok(Conditions::default()) };
    let keys = ["load", "load-to", "sourcing", "sinking", "supply", "temperature"];
    let fields = reader.fields(node, "`at`", &keys)?;
    let ends = LoadTo::ALL.map(|end| (end.word(), end));
    Ok(Conditions {
        load: reader.value(&fields, "load", |text| positive(text, Unit::Ohm))?.map(Ohms),
        load_to: reader.value(&fields, "load-to", |text| choice(text, "where the load returns to", &ends))?,
        sourcing: reader.value(&fields, "sourcing", |text| positive(text, Unit::Ampere))?.map(Amps),
        sinking: reader.value(&fields, "sinking", |text| positive(text, Unit::Ampere))?.map(Amps),
        supply: reader.value(&fields, "supply", total_supply)?.map(Volts),
        temperature: reader
            .value(&fields, "temperature", |text| parse_range(text, Unit::Celsius))?
            .map(|(least, greatest)| (Celsius(least), Celsius(greatest))),
    })
}

fn positive(text: &str, unit: Unit) -> Result<f64, QuantityFault> {
    let value = parse(text, unit)?;
    if 0.0 < value {
        return Ok(value);
    }
    Err(QuantityFault::new(format!("expected a value above 0, found {}", quote(text))))
}

fn total_supply(text: &str) -> Result<f64, QuantityFault> {
    positive(text, Unit::Volt).map_err(|fault| {
        let split = text.contains("+/-") || text.contains('\u{b1}');
        if split {
            fault.help("write the total between the two supply pins: `30 V` for +/- 15 V")
        } else {
            fault
        }
    })
}

#[cfg(test)]
mod tests;
