//! Faults of budgets, profiles and rule packs.

use super::KindDoc;

/// Where the notation is laid down.
const NOTATION: &str = "YAML 1.2, the notation of these files.";

/// Where the words are laid down.
const WORDS: &str = "The keys and units that this program's budgets, profiles and rule packs have; a misspelt one is never passed over (common practice).";

const fn fault(
    slug: &'static str,
    title: &'static str,
    meaning: &'static str,
    source: &'static str,
    cure: &'static str,
) -> KindDoc {
    KindDoc { slug, title, meaning, source, cure }
}

/// Faults of YAML files.
pub(super) const KINDS: &[KindDoc] = &[
    fault(
        "yaml-syntax",
        "the file is no YAML",
        "The notation breaks at the place shown; nothing of the file is used.",
        NOTATION,
        "mend the line: indent with blanks, quote texts that hold `:`, `#` or `*`",
    ),
    fault(
        "yaml-shape",
        "a list, a mapping or a value stands where another is expected",
        "The file is YAML, but not of the form that is asked for; nothing of it is used.",
        NOTATION,
        "write the form that the message names",
    ),
    fault(
        "yaml-size",
        "the file is larger or deeper than is read",
        "A bound of this program stops texts that would exhaust time or memory.",
        "A bound of this program, common practice with texts from outside.",
        "split the file",
    ),
    fault(
        "duplicate-key",
        "a key stands twice",
        "Two entries of one mapping have the same key, and only one could count.",
        NOTATION,
        "keep one of them",
    ),
    fault(
        "unknown-key",
        "a key that means nothing there",
        "The key is none of those that its place has, so that what it says would have no effect.",
        WORDS,
        "correct its spelling",
    ),
    fault(
        "missing-key",
        "a key that is needed is missing",
        "The entry can't be used without it.",
        WORDS,
        "add the key",
    ),
    fault(
        "bad-value",
        "a value can't be used",
        "A quantity lacks its unit, has a wrong one, or lies outside what makes sense.",
        WORDS,
        "write number and unit, such as `2.2 kohm` or `-10 mV .. 60 mV`",
    ),
    fault(
        "bad-name",
        "a name can't be used",
        "What stands there is no name, or the name of nothing that is known, or taken already.",
        WORDS,
        "write the name of what is meant; quote one with special signs",
    ),
    fault(
        "unknown-name",
        "the netlist has no such net or part",
        "The budget speaks of something that isn't on the board, so that what it says has no effect.",
        "The names in the netlist; a declaration without effect is never passed over (common practice).",
        "correct the name, or delete the entry where the part is gone",
    ),
    fault(
        "declared-output",
        "the budget declares what an op amp drives",
        "The net is an op amp's output; its voltage is computed and can't be declared.",
        "Common practice: one net, one driver.",
        "declare the signal that drives the stage instead",
    ),
];
