//! What is assumed where profiles say nothing, out of its YAML text.

use super::{
    Assumed, Derating, Diagnostic, Farads, Fields, FileId, Key, Node, QuantityFault, Read, Reader, Sources,
    Technology, Unit, key, parse, parse_share, positive, quote, technology, value, yaml,
};

/// A bound as [`Assumed::bounds`] holds it.
type Bound = (Key, Vec<Technology>, f64, f64);

/// Reads the file of assumptions: derating, bounds and default tolerances. Each entry must give its reason
/// and source, for whoever reads the file. A fault of shape leaves nothing assumed.
pub fn read_assumed(sources: &Sources, file: FileId) -> (Assumed, Vec<Diagnostic>) {
    let mut reader = Reader::default();
    let read = yaml::read(sources, file)
        .and_then(|root| root.map_or(Ok(Assumed::default()), |root| assumed(&mut reader, &root)));
    reader.finish(read)
}

fn assumed(reader: &mut Reader, root: &Node) -> Read<Assumed> {
    let fields = reader.fields(root, "a file of assumptions", &["derating", "bounds", "defaults"])?;
    let mut assumed = Assumed { derating: vec![None; Key::ALL.len()], ..Assumed::default() };
    for node in reader.list(&fields, "derating")? {
        if let Some((key, derating)) = derating(reader, node)? {
            assumed.derating[key as usize] = Some(derating);
        }
    }
    for node in reader.list(&fields, "bounds")? {
        assumed.bounds.extend(bound(reader, node)?);
    }
    for node in reader.list(&fields, "defaults")? {
        default(reader, node, &mut assumed)?;
    }
    Ok(assumed)
}

/// Asks an entry for its reason and source.
fn explained(reader: &mut Reader, fields: &Fields<'_>) {
    reader.need(fields, "reason");
    reader.need(fields, "source");
}

fn derating(reader: &mut Reader, node: &Node) -> Read<Option<(Key, Derating)>> {
    let keys = ["parameter", "times", "minus", "between", "reason", "source"];
    let fields = reader.fields(node, "an entry of `derating`", &keys)?;
    explained(reader, &fields);
    reader.need(&fields, "parameter");
    let key = reader.value(&fields, "parameter", key)?;
    let times = reader.value(&fields, "times", factor)?.map(Derating::Times);
    let minus = reader.value(&fields, "minus", |text| parse(text, Unit::Decibel))?.map(Derating::Minus);
    let between = match reader.values(&fields, "between", factor)?.as_slice() {
        [least, greatest] if least <= greatest => Some(Derating::Between(*least, *greatest)),
        _ => None,
    };
    match (key, times.or(minus).or(between)) {
        (Some(key), Some(derating)) => Ok(Some((key, derating))),
        (None, _) => Ok(None),
        (Some(_), None) => {
            let message = "expected `times: 0.5`, `minus: 20 dB` or `between: [0.5, 2]`";
            reader.fault("bad-value", fields.span(), message, None);
            Ok(None)
        }
    }
}

fn factor(text: &str) -> Result<f64, QuantityFault> {
    positive(text, Unit::One)
}

fn bound(reader: &mut Reader, node: &Node) -> Read<Option<Bound>> {
    let keys = ["parameter", "technology", "min", "max", "reason", "source"];
    let fields = reader.fields(node, "an entry of `bounds`", &keys)?;
    explained(reader, &fields);
    reader.need(&fields, "parameter");
    let technologies = reader.values(&fields, "technology", technology)?;
    let Some(key) = reader.value(&fields, "parameter", key)? else { return Ok(None) };
    let least = reader.value(&fields, "min", |text| value(text, key))?.unwrap_or(0.0);
    let greatest = reader.value(&fields, "max", |text| value(text, key))?.unwrap_or(f64::INFINITY);
    if least <= greatest {
        return Ok(Some((key, technologies, least, greatest)));
    }
    reader.fault("bad-value", fields.span(), "expected min <= max", None);
    Ok(None)
}

fn default(reader: &mut Reader, node: &Node, assumed: &mut Assumed) -> Read<()> {
    let keys = ["resistor", "capacitor", "rail", "stray", "reason", "source"];
    let fields = reader.fields(node, "an entry of `defaults`", &keys)?;
    explained(reader, &fields);
    if let Some(share) = reader.value(&fields, "resistor", share)? {
        assumed.resistor = share;
    }
    if let Some(share) = reader.value(&fields, "capacitor", share)? {
        assumed.capacitor = share;
    }
    if let Some(share) = reader.value(&fields, "rail", share)? {
        assumed.rail = share;
    }
    if let Some(stray) = reader.value(&fields, "stray", |text| positive(text, Unit::Farad))? {
        assumed.stray = Farads(stray);
    }
    Ok(())
}

fn share(text: &str) -> Result<f64, QuantityFault> {
    let value = parse_share(text)?;
    let fits = (0.0..1.0).contains(&value);
    let fault = || QuantityFault::new(format!("expected 0 % to below 100 %, found {}", quote(text)));
    fits.then_some(value).ok_or_else(fault)
}
