//! `gainsay explain`: what a slug stands for.

use super::{complain, print, style};
use crate::check::reference;
use crate::report::{topic_text, topics_text};
use crate::source::{nearest, quote};
use std::path::PathBuf;

/// What `explain` takes.
#[derive(Debug, clap::Args)]
pub(super) struct Explain {
    /// Slug of a figure, a fact or a kind of fault, as findings carry it; without one all are listed.
    #[arg(value_name = "SLUG")]
    slug: Option<String>,
    /// Further rule packs, whose limits are shown too.
    #[arg(long, value_name = "FILE")]
    rules: Vec<PathBuf>,
}

pub(super) fn run(asked: &Explain) -> u8 {
    let found = reference(&[], &asked.rules);
    complain(&found.unusable);
    let text = match &asked.slug {
        None => topics_text(&found.topics, style(true)),
        Some(slug) => match found.topics.iter().find(|topic| topic.slug.eq_ignore_ascii_case(slug)) {
            Some(topic) => topic_text(topic, style(true)),
            None => {
                complain(&[unknown(slug, found.topics.iter().map(|topic| topic.slug))]);
                return 2;
            }
        },
    };
    if print(&text) && found.unusable.is_empty() { 0 } else { 2 }
}

fn unknown<'t>(slug: &str, known: impl Iterator<Item = &'t str>) -> String {
    match nearest(slug, known) {
        Some(near) => format!("there is no {}; the nearest is {}", quote(slug), quote(near)),
        None => format!("there is no {}; `gainsay explain` lists what there is", quote(slug)),
    }
}
