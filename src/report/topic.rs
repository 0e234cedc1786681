//! What `explain` tells: figures, facts and kinds of fault, each with the rules that judge it.

use crate::diagnostic::{KindDoc, Severity};
use crate::figure::{Bad, Kind};
use crate::quantity::Unit;
use crate::rule::{FACTS, FactDoc, Limit, Rule, RuleScope};
use crate::source::{Sources, Span};

/// What sort of thing a slug stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sort {
    /// A computed quantity, with its unit and the way it turns bad.
    Figure(Unit, Bad),
    /// Something that is so or not.
    Fact,
    /// A fault of a text, or a limit of the analysis.
    Fault,
}

/// One rule as a pack has it.
#[derive(Debug, Clone, PartialEq)]
pub struct TopicRule {
    /// What is to be kept.
    pub limit: Option<Limit>,
    /// Past it the nominal warns.
    pub guard: Option<Limit>,
    /// Ceiling of the severity.
    pub severity: Severity,
    /// Where it applies.
    pub scope: RuleScope,
    /// Why the limit is what it is.
    pub reason: String,
    /// Where it comes from.
    pub source: String,
    /// File and line.
    pub written: String,
}

/// One slug explained.
#[derive(Debug, Clone, PartialEq)]
pub struct Topic {
    /// The slug.
    pub slug: &'static str,
    /// What it is called.
    pub title: &'static str,
    /// What sort of thing it is.
    pub sort: Sort,
    /// Headings and texts, in reading order.
    pub sections: Vec<(&'static str, &'static str)>,
    /// Rules about it, the one that counts last.
    pub rules: Vec<TopicRule>,
}

impl Topic {
    /// Every slug that a finding can carry: figures, facts, kinds of fault, each in the order of its list.
    pub fn all(sources: &Sources, rules: &[Rule]) -> Vec<Topic> {
        let figures = Kind::ALL.iter().map(|kind| figure(*kind));
        let mut topics: Vec<Topic> =
            figures.chain(FACTS.iter().map(fact)).chain(KindDoc::all().map(fault)).collect();
        for topic in &mut topics {
            let own = rules.iter().filter(|rule| rule.name == topic.slug);
            topic.rules = own.map(|rule| of_rule(sources, rule)).collect();
        }
        topics
    }
}

fn figure(kind: Kind) -> Topic {
    let doc = kind.doc();
    Topic {
        slug: doc.slug,
        title: doc.title,
        sort: Sort::Figure(doc.unit, doc.bad),
        sections: vec![
            ("physics", doc.physics),
            ("formula", doc.formula),
            ("worse by", doc.worse),
            ("cure", doc.cure),
            ("source", doc.source),
        ],
        rules: Vec::new(),
    }
}

fn fact(doc: &FactDoc) -> Topic {
    Topic {
        slug: doc.slug,
        title: doc.title,
        sort: Sort::Fact,
        sections: vec![
            ("physics", doc.physics),
            ("told by", doc.test),
            ("worse by", doc.worse),
            ("cure", doc.cure),
            ("source", doc.source),
        ],
        rules: Vec::new(),
    }
}

fn fault(doc: &KindDoc) -> Topic {
    Topic {
        slug: doc.slug,
        title: doc.title,
        sort: Sort::Fault,
        sections: vec![("meaning", doc.meaning), ("cure", doc.cure), ("source", doc.source)],
        rules: Vec::new(),
    }
}

fn of_rule(sources: &Sources, rule: &Rule) -> TopicRule {
    let place = |span: Span| format!("{}:{}", sources.file(span.file).path, sources.place(span).line);
    TopicRule {
        limit: rule.limit,
        guard: rule.guard,
        severity: rule.severity,
        scope: rule.scope.clone(),
        reason: rule.reason.clone(),
        source: rule.source.clone(),
        written: rule.span.map(place).unwrap_or_default(),
    }
}
