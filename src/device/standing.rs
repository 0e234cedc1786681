//! What an entry of a profile rests on.

use crate::device::{Entry, Profile};

/// What an entry rests on, best first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Standing {
    /// A document prints a limit.
    Guaranteed,
    /// A document prints a typical value alone.
    Typical,
    /// Nobody looked it up.
    Memory,
    /// Judgement, or the bound of a whole class of devices.
    Assumed,
}

impl Standing {
    /// Every standing.
    pub const ALL: [Standing; 4] =
        [Standing::Guaranteed, Standing::Typical, Standing::Memory, Standing::Assumed];

    /// The word in reports.
    pub fn word(self) -> &'static str {
        match self {
            Standing::Guaranteed => "guaranteed",
            Standing::Typical => "typical",
            Standing::Memory => "memory",
            Standing::Assumed => "assumed",
        }
    }

    /// Whether no document stands behind it.
    pub fn is_unsure(self) -> bool {
        matches!(self, Standing::Memory | Standing::Assumed)
    }
}

impl Profile {
    /// Where an entry of this profile comes from: its own source, else the profile's.
    pub fn source_of<'p>(&'p self, entry: &'p Entry) -> &'p str {
        entry.source.as_deref().unwrap_or(&self.source)
    }

    /// What an entry of this profile rests on.
    pub fn standing(&self, entry: &Entry) -> Standing {
        match self.source_of(entry) {
            _ if self.generic => Standing::Assumed,
            "assumed" => Standing::Assumed,
            "memory" => Standing::Memory,
            _ if entry.min.is_some() || entry.max.is_some() => Standing::Guaranteed,
            _ => Standing::Typical,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Standing;
    use crate::device::read_profiles;
    use crate::source::Sources;

    #[test]
    fn entries_stand_by_their_source_and_by_what_is_printed() {
        let text = "- device: OPX\n  technology: bipolar\n  source: a document\n  parameters:\n    bias-current: \
            [{ typ: 1 nA, max: 2 nA }, { typ: 1 nA }, { max: 2 nA, source: memory }, { max: 3 nA, source: assumed }]\n\
            - device: OPY\n  technology: bipolar\n  source: memory\n  parameters: { bias-current: { max: 2 nA } }\n\
            - device: OPZ\n  technology: bipolar\n  generic: true\n  source: three documents\n  \
            parameters: { bias-current: { max: 2 nA } }\n";
        let mut sources = Sources::default();
        let file = sources.add("devices.yaml", text.to_owned());
        let (profiles, faults) = read_profiles(&sources, file);
        assert_eq!(faults, []);
        let standings: Vec<Standing> = profiles
            .iter()
            .flat_map(|profile| profile.entries.iter().flatten().map(|entry| profile.standing(entry)))
            .collect();
        use Standing::{Assumed, Guaranteed, Memory, Typical};
        assert_eq!(standings, [Guaranteed, Typical, Memory, Assumed, Memory, Assumed]);
    }
}
