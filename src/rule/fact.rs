//! Facts about a board that findings state: what each one is, in the words that `explain` uses.

/// What a fact is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct FactDoc {
    /// Its name in reports.
    pub slug: &'static str,
    /// Its name in sentences.
    pub title: &'static str,
    /// What happens in the circuit.
    pub physics: &'static str,
    /// How it is told.
    pub test: &'static str,
    /// Where that comes from.
    pub source: &'static str,
    /// What makes it worse or likelier.
    pub worse: &'static str,
    /// What must change.
    pub cure: &'static str,
}

/// Every fact that is told.
pub const FACTS: &[FactDoc] = &[
    FactDoc {
        slug: "bias-path",
        title: "an input without a DC path",
        physics: "An input pin draws a bias current, however small. With no DC path to carry it the current charges the capacitors on the pin until the output stands at a rail.",
        test: "No path of resistors, inductors or sources leads from the input's net to an output or a held voltage.",
        source: "Common practice; the bias current is in the device's datasheet.",
        worse: "Coupling capacitors straight at an input, sensors that are capacitors, plugs that may be open.",
        cure: "give the input a resistor to ground or a reference, small enough for its bias current",
    },
    FactDoc {
        slug: "feedback-polarity",
        title: "DC feedback that regenerates",
        physics: "With its inputs exchanged a stage feeds its own error back with the sign that makes it grow. Its transfers look almost right on paper; the real output goes to a rail and stays.",
        test: "The determinant of the block with its op amps has another sign than with dead ones: an odd number of real poles lies in the right half-plane.",
        source: "H. W. Bode, Network Analysis and Feedback Amplifier Design, Van Nostrand, 1945 (return difference; cited from memory).",
        worse: "Symbols mirrored after they were wired, dual packages with mixed sections.",
        cure: "exchange the two inputs, unless the stage is meant to switch",
    },
    FactDoc {
        slug: "open-loop",
        title: "no feedback at all",
        physics: "Without a path from output to inverting input nothing but the rails limits the output: the op amp works as a comparator, for which many are slow and some latch.",
        test: "No network leads from the output to either input. A warning where the output drives a linear network, else a note.",
        source: "Common practice.",
        worse: "A feedback part that isn't fitted, a net name misspelt on one side.",
        cure: "close the loop, or take a comparator where switching is meant",
    },
    FactDoc {
        slug: "dc-loop",
        title: "feedback that closes for alternating signals alone",
        physics: "A loop closed through a capacitor is open at DC. Offset and bias current are integrated until the output stands at a rail, unless an outer loop or a reset holds it.",
        test: "With ideal op amps and open capacitors the equations leave the output undetermined.",
        source: "Nodal analysis; common practice for integrators.",
        worse: "Long time constants, large bias currents.",
        cure: "put a resistor across the feedback capacitor, or close the loop at DC outside the stage",
    },
    FactDoc {
        slug: "joined-outputs",
        title: "outputs joined on one net",
        physics: "Two outputs on a net fight over its voltage; each tries to give its full current.",
        test: "More than one op-amp output stands on the net.",
        source: "Common practice: one net, one driver.",
        worse: "Net labels used twice, sections in parallel without resistors.",
        cure: "separate the nets, or share the load through a resistor at each output",
    },
    FactDoc {
        slug: "shorted-output",
        title: "an output tied to a fixed voltage",
        physics: "An output on ground, a rail or a source can't move; the op amp gives its short-circuit current and heats up.",
        test: "The output's net is ground, or tied to it through voltage sources.",
        source: "Common practice; the short-circuit current is in the device's datasheet.",
        worse: "Pin orders that differ between symbol and model.",
        cure: "correct the net, or the pin order: budget: `devices: { NAME: { pins: [...] } }`",
    },
    FactDoc {
        slug: "lost-zero",
        title: "the zero of a single supply is out of reach",
        physics: "An output comes near its negative rail, not onto it. Where that rail is ground and the signal begins at zero, the last millivolts are clipped.",
        test: "The output headroom breaks its limit at the ground end of a single supply alone, by less than 2 % of the span.",
        source: "The device's datasheet, output swing; common practice for the share.",
        worse: "Outputs that sink current near the rail, bipolar output stages.",
        cure: "lift the zero by a small bias, give a negative rail, or say `zero: unused` in the budget",
    },
];

impl FactDoc {
    /// The fact of a slug.
    pub fn by_slug(slug: &str) -> Option<&'static FactDoc> {
        FACTS.iter().find(|fact| fact.slug == slug)
    }
}
