//! A budget out of its YAML text.

use super::{
    Budget, DeviceChoice, Gain, Load, Name, Pair, Part, Signal, StageBudget, StatedLimit, Tolerance,
    Toleranced, Waiver,
};
use crate::device::{read_pins, technology};
use crate::diagnostic::Diagnostic;
use crate::quantity::{Unit, parse, parse_range, parse_range_of, parse_toleranced};
use crate::source::{FileId, Sources};
use crate::yaml::{self, Fields, Kind, Node, Reader, choice};
use values::{band, capacitance, date, deviation, magnitude, resistance, stated, temperature, travel};

mod values;

const KEYS: [&str; 13] = [
    "board",
    "temperature",
    "rails",
    "grounds",
    "tolerance",
    "parts",
    "absent",
    "signals",
    "pairs",
    "loads",
    "devices",
    "stages",
    "waivers",
];

/// Reads a budget. A fault of shape ends the reading and leaves an empty budget; every fault of value is
/// reported and its declaration left out. An empty text is an empty budget.
pub fn read(sources: &Sources, file: FileId) -> (Budget, Vec<Diagnostic>) {
    let mut reader = Reader::default();
    let read = yaml::read(sources, file)
        .and_then(|root| root.map_or(Ok(Budget::default()), |root| budget(&mut reader, &root)));
    reader.finish(read)
}

/// What reading a part of a budget gives: `Err` is a fault of shape.
type Read<T> = Result<T, Diagnostic>;

fn budget(reader: &mut Reader, root: &Node) -> Read<Budget> {
    let fields = reader.fields(root, "a budget", &KEYS)?;
    Ok(Budget {
        board: reader.text(&fields, "board")?,
        temperature: reader.value(&fields, "temperature", temperature)?,
        rails: rails(reader, &fields)?,
        grounds: reader.names(&fields, "grounds")?,
        tolerance: tolerance(reader, &fields)?,
        parts: each(reader, &fields, "parts", part)?,
        absent: reader.names(&fields, "absent")?,
        signals: named(reader, &fields, "signals", signal)?,
        pairs: named(reader, &fields, "pairs", pair)?,
        loads: named(reader, &fields, "loads", load)?,
        devices: named(reader, &fields, "devices", device)?,
        stages: each(reader, &fields, "stages", stage)?,
        waivers: each(reader, &fields, "waivers", waiver)?,
        assumed_technology: None,
    })
}

/// Reads the entries of a list; those with a fault of value that leaves nothing to use are left out.
fn each<T>(
    reader: &mut Reader,
    fields: &Fields<'_>,
    key: &str,
    read: impl Fn(&mut Reader, &Node) -> Read<Option<T>>,
) -> Read<Vec<T>> {
    let mut entries = Vec::new();
    for node in reader.list(fields, key)? {
        entries.extend(read(reader, node)?);
    }
    Ok(entries)
}

/// Reads the entries of a mapping whose keys are the user's names.
fn named<T>(
    reader: &mut Reader,
    fields: &Fields<'_>,
    key: &'static str,
    read: impl Fn(&mut Reader, &Name, &Node) -> Read<Option<T>>,
) -> Read<Vec<T>> {
    let mut entries = Vec::new();
    for (name, node) in reader.map(fields, key)? {
        entries.extend(read(reader, name, node)?);
    }
    Ok(entries)
}

fn rails(reader: &mut Reader, fields: &Fields<'_>) -> Read<Vec<(Name, Toleranced)>> {
    named(reader, fields, "rails", |reader, name, node| {
        let value = reader.scalar(node, |text| parse_toleranced(text, Unit::Volt))?;
        Ok(value.map(|(nominal, deviation)| (name.clone(), Toleranced { nominal, deviation })))
    })
}

fn tolerance(reader: &mut Reader, fields: &Fields<'_>) -> Read<Tolerance> {
    let Some(node) = fields.get("tolerance") else { return Ok(Tolerance::default()) };
    let keys = ["resistor", "capacitor", "inductor", "resistor-drift"];
    let fields = reader.fields(node, "`tolerance`", &keys)?;
    Ok(Tolerance {
        resistor: reader.value(&fields, "resistor", deviation)?,
        capacitor: reader.value(&fields, "capacitor", deviation)?,
        inductor: reader.value(&fields, "inductor", deviation)?,
        resistor_drift: reader.value(&fields, "resistor-drift", |text| magnitude(text, Unit::PerKelvin))?,
    })
}

fn part(reader: &mut Reader, node: &Node) -> Read<Option<Part>> {
    let keys = ["match", "tolerance", "ratio", "drift", "power", "travel"];
    let fields = reader.fields(node, "an entry of `parts`", &keys)?;
    reader.need(&fields, "match");
    let part = Part {
        matches: reader.names(&fields, "match")?,
        tolerance: reader.value(&fields, "tolerance", deviation)?,
        ratio: reader.value(&fields, "ratio", deviation)?,
        drift: reader.value(&fields, "drift", |text| magnitude(text, Unit::PerKelvin))?,
        power: reader.value(&fields, "power", |text| magnitude(text, Unit::Watt))?,
        travel: reader.value(&fields, "travel", travel)?,
    };
    Ok(Some(part).filter(|part| !part.matches.is_empty()))
}

fn signal(reader: &mut Reader, name: &Name, node: &Node) -> Read<Option<Signal>> {
    let keys = ["net", "range", "source", "capacitance", "band"];
    let fields = reader.fields(node, "a signal", &keys)?;
    Ok(Some(Signal {
        name: name.clone(),
        net: reader.name(&fields, "net")?,
        range: reader.value(&fields, "range", |text| parse_range_of(text, &[Unit::Volt, Unit::Ampere]))?,
        source: reader.value(&fields, "source", resistance)?,
        capacitance: reader.value(&fields, "capacitance", capacitance)?,
        band: reader.value(&fields, "band", band)?,
    }))
}

fn pair(reader: &mut Reader, name: &Name, node: &Node) -> Read<Option<Pair>> {
    let keys = ["positive", "negative", "difference", "common", "source", "band"];
    let fields = reader.fields(node, "a pair", &keys)?;
    reader.need(&fields, "positive");
    reader.need(&fields, "negative");
    let positive = reader.name(&fields, "positive")?;
    let negative = reader.name(&fields, "negative")?;
    let difference = reader.value(&fields, "difference", |text| parse_range(text, Unit::Volt))?;
    let common = reader.value(&fields, "common", |text| parse_range(text, Unit::Volt))?;
    let source = reader.value(&fields, "source", resistance)?;
    let band = reader.value(&fields, "band", band)?;
    let (Some(positive), Some(negative)) = (positive, negative) else { return Ok(None) };
    Ok(Some(Pair { name: name.clone(), positive, negative, difference, common, source, band }))
}

fn load(reader: &mut Reader, name: &Name, node: &Node) -> Read<Option<Load>> {
    let fields = reader.fields(node, "a load", &["resistance", "capacitance", "to"])?;
    Ok(Some(Load {
        net: name.clone(),
        resistance: reader.value(&fields, "resistance", resistance)?,
        capacitance: reader.value(&fields, "capacitance", capacitance)?,
        to: reader.name(&fields, "to")?,
    }))
}

fn device(reader: &mut Reader, name: &Name, node: &Node) -> Read<Option<DeviceChoice>> {
    let fields = reader.fields(node, "a device", &["profile", "technology", "pins"])?;
    Ok(Some(DeviceChoice {
        name: name.clone(),
        profile: reader.name(&fields, "profile")?,
        technology: reader.value(&fields, "technology", technology)?,
        pins: read_pins(reader, &fields)?,
    }))
}

fn stage(reader: &mut Reader, node: &Node) -> Read<Option<StageBudget>> {
    let keys = ["match", "gain", "limits", "supply", "zero"];
    let fields = reader.fields(node, "an entry of `stages`", &keys)?;
    reader.need(&fields, "match");
    let unused = |text: &str| choice(text, "a word for the zero end", &[("unused", true)]);
    let stage = StageBudget {
        matches: reader.names(&fields, "match")?,
        gain: fields.get("gain").map_or(Ok(None), |node| gain(reader, node))?,
        limits: named(reader, &fields, "limits", limit)?,
        supply: supply(reader, &fields)?,
        zero_unused: reader.value(&fields, "zero", unused)?.unwrap_or(false),
    };
    Ok(Some(stage).filter(|stage| !stage.matches.is_empty()))
}

fn gain(reader: &mut Reader, node: &Node) -> Read<Option<Gain>> {
    let ratio = |text: &str| parse(text, Unit::One);
    let Kind::Map(entries) = &node.kind else {
        return Ok(reader.scalar(node, ratio)?.map(Gain::Main));
    };
    let mut gains = Vec::new();
    for (name, node) in entries {
        gains.extend(reader.scalar(node, ratio)?.map(|gain| (name.clone(), gain)));
    }
    Ok(Some(Gain::ByInput(gains)))
}

fn limit(reader: &mut Reader, name: &Name, node: &Node) -> Read<Option<StatedLimit>> {
    let read = reader.scalar(node, |text| stated(text, &name.text))?;
    Ok(read.map(|(value, unit, of_span)| StatedLimit {
        figure: name.clone(),
        value,
        unit,
        of_span,
        span: node.span,
    }))
}

fn supply(reader: &mut Reader, fields: &Fields<'_>) -> Read<Option<(Name, Name)>> {
    let Some(node) = fields.get("supply") else { return Ok(None) };
    let nets = reader.names(fields, "supply")?;
    match <[Name; 2]>::try_from(nets) {
        Ok([positive, negative]) => Ok(Some((positive, negative))),
        Err(nets) => {
            let message =
                format!("expected the positive and the negative supply net, found {} name(s)", nets.len());
            reader.fault("bad-value", node.span, message, Some("write `[VCC, VEE]`".to_string()));
            Ok(None)
        }
    }
}

fn waiver(reader: &mut Reader, node: &Node) -> Read<Option<Waiver>> {
    let keys = ["rule", "match", "reason", "by", "until"];
    let fields = reader.fields(node, "a waiver", &keys)?;
    for key in &keys[..4] {
        reader.need(&fields, key);
    }
    let rule = reader.name(&fields, "rule")?;
    let matches = reader.names(&fields, "match")?;
    let reason = reader.text(&fields, "reason")?;
    let by = reader.text(&fields, "by")?;
    let until = reader.value(&fields, "until", date)?;
    let (Some(rule), Some(reason), Some(by)) = (rule, reason, by) else { return Ok(None) };
    // A date that can't be read must not turn into a waiver without end.
    let dated = until.is_some() || fields.get("until").is_none();
    Ok(Some(Waiver { rule, matches, reason, by, until }).filter(|waiver| dated && !waiver.matches.is_empty()))
}

#[cfg(test)]
mod tests;
