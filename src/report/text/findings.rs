//! Findings, the heaviest first; notes are counted unless all are asked for, waived ones stand apart.

use super::paper::{Paper, count};
use super::snippet;
use crate::diagnostic::Severity;
use crate::rule::{Finding, Waived};
use crate::source::Sources;

/// Writes a board's findings.
pub(super) fn write(paper: &mut Paper, findings: &[Finding], sources: &Sources) {
    for severity in [Severity::Error, Severity::Warning, Severity::Note] {
        let open: Vec<&Finding> = findings
            .iter()
            .filter(|finding| finding.waived.is_none() && finding.severity == severity)
            .collect();
        if severity == Severity::Note && !paper.style.all {
            write_folded(paper, &open);
        } else {
            open.into_iter().for_each(|finding| write_one(paper, finding, sources));
        }
    }
    for finding in findings {
        if let Some(waived) = &finding.waived {
            write_waived(paper, finding, waived);
        }
    }
}

/// Headline, the lines that cause it, the cure.
fn write_one(paper: &mut Paper, finding: &Finding, sources: &Sources) {
    paper.blank();
    write_headline(paper, finding, finding.severity.word());
    snippet::write(paper, &finding.labels, sources);
    if let Some(cure) = &finding.cure {
        let first = format!("  {} ", paper.accent("cure:"));
        paper.paragraph(&first, "        ", cure);
    }
}

/// `error: message (slug)`.
fn write_headline(paper: &mut Paper, finding: &Finding, word: &str) {
    let first = format!("{} ", paper.accent(&format!("{word}:")));
    let rest = " ".repeat(word.len() + 2);
    paper.paragraph(&first, &rest, &format!("{} ({})", finding.message, finding.rule));
}

/// Notes by their rules, in the order of the first of each.
fn write_folded(paper: &mut Paper, notes: &[&Finding]) {
    if notes.is_empty() {
        return;
    }
    let mut rules: Vec<(&str, usize)> = Vec::new();
    for note in notes {
        match rules.iter_mut().find(|(rule, _)| *rule == note.rule) {
            Some((_, number)) => *number += 1,
            None => rules.push((&note.rule, 1)),
        }
    }
    let list: Vec<String> = rules
        .into_iter()
        .map(|(rule, number)| if number == 1 { rule.to_owned() } else { format!("{rule} ({number})") })
        .collect();
    paper.blank();
    let first = format!("{} ", paper.accent(&format!("{}:", count(notes.len(), "note"))));
    paper.paragraph(&first, "  ", &format!("{}; --all writes them out", list.join(", ")));
}

/// A finding that someone answers for, with who and why.
fn write_waived(paper: &mut Paper, finding: &Finding, waived: &Waived) {
    paper.blank();
    write_headline(paper, finding, &format!("waived {}", finding.severity.word()));
    let until = waived.until.as_ref().map_or(String::new(), |day| format!(", until {day}"));
    paper.paragraph("  reason: ", "          ", &format!("{} ({}{until})", waived.reason, waived.by));
}
