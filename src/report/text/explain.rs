//! What a slug stands for, and the list of all slugs.

use super::Style;
use super::number::value;
use super::paper::Paper;
use crate::figure::Bad;
use crate::quantity::{Unit, percent};
use crate::report::{Sort, Topic, TopicRule};
use crate::rule::Limit;

/// Columns that headings take.
const MARGIN: usize = 10;

/// What slugs are listed under.
const GROUPS: [&str; 3] =
    ["figures of a stage", "facts about a circuit", "faults of files and of the analysis"];

/// One slug explained, ending in a newline.
pub fn topic_text(topic: &Topic, style: Style) -> String {
    let mut paper = Paper::new(style);
    let first = format!("{}: ", paper.accent(topic.slug));
    paper.paragraph(&first, "  ", &format!("{} ({})", topic.title, sort(topic.sort)));
    for (heading, text) in &topic.sections {
        paper.blank();
        write_section(&mut paper, heading, text);
    }
    if !topic.rules.is_empty() {
        paper.blank();
        paper.line("judged by, the last that applies counting:");
    }
    for rule in &topic.rules {
        write_rule(&mut paper, topic.sort, rule);
    }
    paper.done()
}

/// All slugs with their titles by sort, ending in a newline.
pub fn topics_text(topics: &[Topic], style: Style) -> String {
    let mut paper = Paper::new(style);
    let widest = topics.iter().map(|topic| topic.slug.len()).max().unwrap_or(0);
    for (group, title) in GROUPS.iter().enumerate() {
        paper.blank();
        paper.title(title);
        for topic in topics.iter().filter(|topic| self::group(topic.sort) == group) {
            let space = " ".repeat(widest + 2 - topic.slug.len());
            let first = format!("{}{space}", paper.accent(topic.slug));
            paper.paragraph(&first, &" ".repeat(widest + 2), topic.title);
        }
    }
    paper.done()
}

/// Place of a sort among the groups.
fn group(sort: Sort) -> usize {
    match sort {
        Sort::Figure(..) => 0,
        Sort::Fact => 1,
        Sort::Fault => 2,
    }
}

fn sort(sort: Sort) -> String {
    match sort {
        Sort::Figure(unit, bad) => {
            let way = match bad {
                Bad::Either => "whose magnitude counts",
                Bad::Low => "that turns bad as it falls",
                Bad::High => "that turns bad as it rises",
            };
            format!("a figure: {} {way}", unit.noun())
        }
        Sort::Fact => "a fact".to_owned(),
        Sort::Fault => "a fault".to_owned(),
    }
}

fn write_section(paper: &mut Paper, heading: &str, text: &str) {
    let first = format!("{}{}", paper.accent(heading), " ".repeat(MARGIN - heading.len()));
    paper.paragraph(&first, &" ".repeat(MARGIN), text.trim_end_matches('.'));
}

fn write_rule(paper: &mut Paper, sort: Sort, rule: &TopicRule) {
    let mut words = match (rule.limit, sort) {
        (Some(limit), Sort::Figure(unit, bad)) => bound(limit, unit, bad),
        (None, Sort::Figure(..)) => "no limit".to_owned(),
        _ => "wherever it is so".to_owned(),
    };
    if let (Some(guard), Sort::Figure(unit, bad)) = (rule.guard, sort) {
        words += &format!(", guard {}", bound(guard, unit, bad));
    }
    words += &format!("; {} at most; {}", rule.severity.word(), scope(rule));
    paper.paragraph("  - ", "    ", &words);
    paper.paragraph("    ", "    ", rule.reason.trim_end_matches('.'));
    paper.paragraph("    ", "    ", &format!("source: {}; written in {}", rule.source, rule.written));
}

/// `at least 10`: a limit has no sign of its own.
fn bound(limit: Limit, unit: Unit, bad: Bad) -> String {
    let words = match limit {
        Limit::Value(number) => value(number, unit, bad),
        Limit::ShareOfSpan(share) => format!("{} of the output span", percent(share)),
        Limit::RatedLoad => "the device's rated load".to_owned(),
        Limit::TopOfBand => "the top of the declared band".to_owned(),
    };
    match bad {
        Bad::Either => format!("+/- {words}"),
        Bad::Low => format!("at least {words}"),
        Bad::High => format!("at most {words}"),
    }
}

/// Where a rule applies, in words.
fn scope(rule: &TopicRule) -> String {
    let scope = &rule.scope;
    let technologies = scope.technology.iter().map(|technology| technology.word().to_owned()).collect();
    let lists = [
        ("topology", &scope.topology),
        ("technology", &technologies),
        ("device", &scope.device),
        ("designator", &scope.designator),
    ];
    let stated: Vec<String> = lists
        .into_iter()
        .filter(|(_, names)| !names.is_empty())
        .map(|(word, names)| format!("{word} {}", names.join(" or ")))
        .collect();
    if stated.is_empty() { "every stage".to_owned() } else { stated.join(", ") }
}
