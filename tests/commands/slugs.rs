//! Every slug that a finding can carry has a doc, and every doc a finding.

use gainsay::check::reference;
use gainsay::report::{Sort, Topic};
use std::collections::BTreeSet;
use std::path::Path;

/// What stands before a slug where a fault or finding is made.
const BEFORE: [&str; 8] =
    ["Diagnostic::at(", ".fault(", ".error(", ".warning(", ".note(", "plain(", "kind:", "rule:"];

/// Words that mark a source: a document, a standard or what everyone does.
const MARKS: [&str; 11] = [
    "common practice",
    "datasheet",
    "nodal analysis",
    "Franco",
    "Bode",
    "Analog Devices",
    "YAML 1.2",
    "CWE",
    "IEC",
    "worst corner",
    "worst case",
];

/// Slugs in a source file: short words in quotes where a fault or finding is made.
fn slugs(text: &str, tuples: bool) -> Vec<String> {
    let code = text.split("#[cfg(test)]").next().unwrap_or("");
    let mut found = Vec::new();
    let mut rest = 0;
    while let Some(at) = code[rest..].find('"').map(|at| rest + at) {
        let Some(end) = code[at + 1..].find('"').map(|end| at + 1 + end) else { break };
        let word = &code[at + 1..end];
        let is_slug = word.starts_with(|letter: char| letter.is_ascii_lowercase())
            && word.bytes().all(|byte| byte.is_ascii_lowercase() || byte == b'-');
        if !is_slug {
            // A quote that closes one text may open the next: go on behind the first alone.
            rest = at + 1;
            continue;
        }
        let (before, after) = (code[..at].trim_end(), code[end + 1..].trim_start());
        let first_of_tuple =
            tuples && after.starts_with(',') && (before.ends_with("=> (") || before.ends_with("{ ("));
        let first_of_block = tuples && code[..at].ends_with("            (");
        if BEFORE.iter().any(|call| before.ends_with(call))
            || after.starts_with(", Severity::")
            || first_of_tuple
            || first_of_block
        {
            found.push(word.to_owned());
        }
        rest = end + 1;
    }
    found
}

fn visit(folder: &Path, found: &mut BTreeSet<String>) {
    for entry in std::fs::read_dir(folder).expect("the sources are there").flatten() {
        let path = entry.path();
        let name = entry.file_name().into_string().expect("sources have plain names");
        // The docs themselves would prove nothing.
        if path.is_dir() && name != "kinds" {
            visit(&path, found);
        } else if name.ends_with(".rs") && name != "tests.rs" {
            let text = std::fs::read_to_string(&path).expect("a source is text");
            found.extend(slugs(&text, name == "cover.rs"));
        }
    }
}

fn topics() -> Vec<Topic> {
    reference(&[], &[]).topics
}

#[test]
fn every_slug_has_a_doc_and_every_doc_a_slug() {
    let mut used = BTreeSet::new();
    visit(Path::new("src"), &mut used);
    let documented: BTreeSet<String> = topics().iter().map(|topic| topic.slug.to_owned()).collect();
    let bare: Vec<&String> = used.difference(&documented).collect();
    assert!(bare.is_empty(), "no doc for {bare:?}");
    let of_figures: BTreeSet<String> = topics()
        .iter()
        .filter(|topic| matches!(topic.sort, Sort::Figure(..)))
        .map(|topic| topic.slug.to_owned())
        .collect();
    let stale: Vec<&String> =
        documented.difference(&used).filter(|slug| !of_figures.contains(*slug)).collect();
    assert!(stale.is_empty(), "a doc, but no finding for {stale:?}");
}

#[test]
fn slugs_are_found_where_faults_are_made() {
    let code = "Diagnostic::at(\"one-fault\", Severity::Error, span, \"a text\");\n\
        faults.note(\n    \"other-fault\", span, format!(\"{x} \\\"quoted\\\"\"));\n\
        let key = map.get(\"no-fault\");\n Finding { rule: \"third\".to_owned() }\n\
        _ => (\"fourth-fault\", text)\n#[cfg(test)] Diagnostic::at(\"in-tests\", x)";
    assert_eq!(slugs(code, true), ["one-fault", "other-fault", "third", "fourth-fault"]);
}

#[test]
fn slugs_differ() {
    let topics = topics();
    let different: BTreeSet<&str> = topics.iter().map(|topic| topic.slug).collect();
    assert_eq!(different.len(), topics.len());
}

#[test]
fn every_doc_is_whole_and_names_a_source() {
    for topic in topics() {
        for (heading, text) in &topic.sections {
            assert!(10 < text.len(), "{}: {heading}", topic.slug);
        }
        let source = topic.sections.iter().find(|(heading, _)| *heading == "source");
        let source = source.expect("every topic has a source").1;
        let lower = source.to_lowercase();
        assert!(
            MARKS.iter().any(|mark| lower.contains(&mark.to_lowercase())),
            "{} names no source: {source}",
            topic.slug
        );
    }
}
