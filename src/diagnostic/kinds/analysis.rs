//! What the analysis says of itself: what it couldn't place, solve or judge.

use super::KindDoc;

/// What is analysed of a board.
pub(super) const KINDS: &[KindDoc] = &[
    KindDoc {
        slug: "unknown-device",
        title: "no profile knows the device",
        meaning: "The op amp's model name leads to no profile. Its stage is found, named and solved with an ideal op amp; nothing that rests on the real one is known.",
        source: "The device's datasheet has the figures that are missing.",
        cure: "budget: `devices: { NAME: { technology: bipolar } }` for a class's bounds, all assumed, or `devices: { NAME: { profile: ... } }` with a profile of your own under --devices",
    },
    KindDoc {
        slug: "pin-map",
        title: "which pin is which can't be told",
        meaning: "The call has another number of nodes than the pin order at hand, so the op amp isn't placed. Pins are never guessed.",
        source: "The pin order of the symbol or the definition; five-node calls follow no standard (common practice).",
        cure: "budget: `devices: { NAME: { pins: [...] } }` with one role for each node",
    },
    KindDoc {
        slug: "not-analysed",
        title: "the stage has no figures",
        meaning: "Its equations can't be trusted or solved, or the loop closes through something that isn't modelled, or it isn't linear by intent. The reason stands in the message.",
        source: "Nodal analysis: a linear solution holds for a linear network alone.",
        cure: "declare the value, device or signal that the reason names; judge the stage by hand where it isn't linear",
    },
    KindDoc {
        slug: "unjudged",
        title: "a figure can't be judged",
        meaning: "Something that the figure or its limit needs is stated nowhere: a range, a supply, a line of the profile.",
        source: "Common practice: what isn't known is said, not taken to be right.",
        cure: "add the line of budget or profile that the message shows",
    },
    KindDoc {
        slug: "value-reading",
        title: "a value that two readers read differently",
        meaning: "A resistor's value ends with a bare `M`. Netlists have it as milli, drawings as mega; the netlist's reading is used and both are said.",
        source: "IEC 60062 has M as mega; SPICE's scale factors have it as milli.",
        cure: "write Meg for mega, or the value in ohm",
    },
    KindDoc {
        slug: "unreadable-file",
        title: "a file can't be read",
        meaning: "The file is missing, barred, too large, or no text.",
        source: "The operating system's answer; common practice.",
        cure: "correct the path or the rights; save the file as text",
    },
];
