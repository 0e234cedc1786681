//! Device profiles: a table of all, and one in full.

use super::Style;
use super::paper::Paper;
use super::table::Table;
use crate::device::{Conditions, Entry, Key, Profile, Standing};
use crate::quantity::{Unit, show};

/// Columns that headings take.
const MARGIN: usize = 14;

/// Columns that names of parameters take.
const NAMES: usize = 25;

/// A line for each profile, classes of devices apart, ending in a newline. The last profile of a name is the one
/// that counts.
pub fn devices_text(profiles: &[Profile], style: Style) -> String {
    let mut paper = Paper::new(style);
    let counts = |at: &usize| {
        let name = &profiles[*at].name;
        !profiles[at + 1..].iter().any(|later| later.name.eq_ignore_ascii_case(name))
    };
    let (classes, parts): (Vec<&Profile>, Vec<&Profile>) =
        (0..profiles.len()).filter(counts).map(|at| &profiles[at]).partition(|profile| profile.generic);
    write_parts(&mut paper, &parts);
    write_classes(&mut paper, &classes);
    paper.blank();
    paper.paragraph(
        "",
        "",
        "Figures are counted by what they rest on. Check the current datasheet of the part and maker that you fit",
    );
    paper.done()
}

fn write_parts(paper: &mut Paper, parts: &[&Profile]) {
    let mut table = Table::new([
        "device",
        "technology",
        ">sections",
        "also called",
        ">guaranteed",
        ">typical",
        ">memory",
        ">assumed",
    ]);
    for profile in parts {
        let count = |standing: Standing| {
            let entries = profile.entries.iter().flatten();
            match entries.filter(|entry| profile.standing(entry) == standing).count() {
                0 => "-".to_owned(),
                number => number.to_string(),
            }
        };
        let [guaranteed, typical, memory, assumed] = Standing::ALL.map(count);
        table.row([
            profile.name.clone(),
            profile.technology.word().to_owned(),
            profile.sections.to_string(),
            also_called(profile),
            guaranteed,
            typical,
            memory,
            assumed,
        ]);
    }
    table.write(paper, 0);
}

/// Classes of devices; all their figures are assumed.
fn write_classes(paper: &mut Paper, classes: &[&Profile]) {
    if classes.is_empty() {
        return;
    }
    let mut table = Table::new(["class of devices", "technology", ">assumed"]);
    for profile in classes {
        let entries = profile.entries.iter().flatten().count();
        table.row([profile.name.clone(), profile.technology.word().to_owned(), entries.to_string()]);
    }
    paper.blank();
    table.write(paper, 0);
}

/// The first aliases, and how many more there are.
fn also_called(profile: &Profile) -> String {
    const SHOWN: usize = 2;
    let first: Vec<&str> = profile.aliases.iter().take(SHOWN).map(String::as_str).collect();
    match profile.aliases.len().saturating_sub(SHOWN) {
        0 => first.join(", "),
        more => format!("{} and {more} more", first.join(", ")),
    }
}

/// One profile with every figure, ending in a newline; `asked` is the name by which it was found.
pub fn device_text(profile: &Profile, asked: &str, style: Style) -> String {
    let mut paper = Paper::new(style);
    let first = format!("{}: ", paper.accent("device"));
    let alias = if profile.name.eq_ignore_ascii_case(asked) {
        String::new()
    } else {
        format!(", which {asked} stands for")
    };
    paper.paragraph(&first, "  ", &format!("{}{alias}", profile.name));
    paper.blank();
    let mut technology = profile.technology.word().to_owned();
    if profile.generic {
        technology += ", a class of devices: every figure is assumed";
    }
    write_heading(&mut paper, "technology", &technology);
    write_heading(&mut paper, "sections", &profile.sections.to_string());
    let pins: Vec<&str> = profile.pins.iter().map(|pin| pin.word()).collect();
    let pins = if pins.is_empty() { "order not given".to_owned() } else { pins.join(", ") };
    write_heading(&mut paper, "pins", &pins);
    if !profile.aliases.is_empty() {
        write_heading(&mut paper, "also called", &profile.aliases.join(", "));
    }
    for note in &profile.notes {
        write_heading(&mut paper, "note", note);
    }
    write_parameters(&mut paper, profile);
    paper.done()
}

fn write_heading(paper: &mut Paper, heading: &str, text: &str) {
    let first = format!("{heading}{}", " ".repeat(MARGIN - heading.len()));
    paper.paragraph(&first, &" ".repeat(MARGIN), text);
}

/// Every entry in the order of parameters, its source by a letter that is told below.
fn write_parameters(paper: &mut Paper, profile: &Profile) {
    let mut sources: Vec<&str> = Vec::new();
    paper.blank();
    for key in Key::ALL {
        let mut name = key.name();
        for entry in profile.entries(*key) {
            let source = profile.source_of(entry);
            let at = sources.iter().position(|known| *known == source).unwrap_or_else(|| {
                sources.push(source);
                sources.len() - 1
            });
            let standing = profile.standing(entry).word();
            let text = format!("{}, {standing} ({})", values(*key, entry), letter(at));
            let first = format!("{name:NAMES$}");
            paper.paragraph(&first, &" ".repeat(NAMES + 2), &text);
            name = "";
        }
    }
    paper.blank();
    for (at, source) in sources.iter().enumerate() {
        write_heading(paper, &format!("source {}", letter(at)), source);
    }
    let missing: Vec<&str> =
        Key::ALL.iter().filter(|key| profile.entries(**key).is_empty()).map(|key| key.name()).collect();
    if !missing.is_empty() {
        write_heading(paper, "not given", &missing.join(", "));
    }
}

/// `min 120 V/mV, typ 400 V/mV at 2 kohm to middle, 30 V supply`.
fn values(key: Key, entry: &Entry) -> String {
    let stated = [("min", entry.min), ("typ", entry.typ), ("max", entry.max)];
    let values: Vec<String> = stated
        .into_iter()
        .filter_map(|(word, value)| Some(format!("{word} {}", shown(key, value?))))
        .collect();
    match conditions(entry) {
        words if words.is_empty() => values.join(", "),
        words => format!("{} at {words}", values.join(", ")),
    }
}

/// `a` to `z`, then `a2` and so on.
fn letter(at: usize) -> String {
    let letter = char::from(b'a' + (at % 26) as u8);
    if at < 26 { letter.to_string() } else { format!("{letter}{}", at / 26 + 1) }
}

/// A value as datasheets write it: large gains in volt per millivolt.
fn shown(key: Key, value: f64) -> String {
    match key {
        Key::OpenLoopGain if 1_000.0 <= value => format!("{} V/mV", show(value / 1_000.0, Unit::One)),
        Key::OpenLoopGain => format!("{} V/V", show(value, Unit::One)),
        _ => show(value, key.unit()),
    }
}

/// Under what an entry holds, in words.
fn conditions(entry: &Entry) -> String {
    let Conditions { load, load_to, sourcing, sinking, supply, temperature } = entry.at;
    let mut words: Vec<String> = Vec::new();
    match (load, load_to) {
        (Some(load), Some(to)) => words.push(format!("{load} to {}", to.word())),
        (Some(load), None) => words.push(format!("{load} load")),
        (None, Some(to)) => words.push(format!("load to {}", to.word())),
        (None, None) => {}
    }
    words.extend(sourcing.map(|amps| format!("{amps} sourced")));
    words.extend(sinking.map(|amps| format!("{amps} sunk")));
    words.extend(supply.map(|volts| format!("{volts} supply")));
    words.extend(temperature.map(|(low, high)| match low == high {
        true => low.to_string(),
        false => format!("{low} .. {high}"),
    }));
    words.join(", ")
}
