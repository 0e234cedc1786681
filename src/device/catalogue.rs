//! Finding the profile that a model name means.

use crate::device::{Catalogue, Profile, Technology};
use crate::source::matches;

impl Catalogue {
    /// The profile that a model name in a netlist means, by name or alias, in any case; a vendor's tail
    /// behind a slash doesn't count. A profile added later wins, and an exact name before a pattern.
    pub fn find(&self, model: &str) -> Option<usize> {
        let bare = model.split_once('/').map_or(model, |(head, _)| head);
        let by = |test: &dyn Fn(&Profile) -> bool| self.profiles.iter().rposition(test);
        by(&|profile| names(profile).any(|name| name.eq_ignore_ascii_case(bare)))
            .or_else(|| by(&|profile| names(profile).any(|name| matches(name, bare))))
    }

    /// The profile that stands for all devices of a technology of which nothing else is known.
    pub fn generic(&self, technology: Technology) -> Option<usize> {
        self.named(&format!("generic-{}", technology.word())).filter(|at| self.profiles[*at].generic)
    }

    /// The profile of that very name.
    pub fn named(&self, name: &str) -> Option<usize> {
        self.profiles.iter().rposition(|profile| profile.name.eq_ignore_ascii_case(name))
    }
}

fn names(profile: &Profile) -> impl Iterator<Item = &str> {
    std::iter::once(&profile.name).chain(&profile.aliases).map(String::as_str)
}
