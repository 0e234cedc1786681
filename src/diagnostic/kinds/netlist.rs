//! Faults of netlists.

use super::KindDoc;

/// Where the forms come from that statements are read by.
const FORMS: &str = "The statement forms that SPICE-style netlists have in common and exporters really write (common practice).";

/// Where bounds come from.
const BOUND: &str = "A bound of this program, far above what real boards need: a text from outside must not exhaust time or memory (common practice).";

const fn form(slug: &'static str, title: &'static str, meaning: &'static str, cure: &'static str) -> KindDoc {
    KindDoc { slug, title, meaning, source: FORMS, cure }
}

const fn bound(
    slug: &'static str,
    title: &'static str,
    meaning: &'static str,
    cure: &'static str,
) -> KindDoc {
    KindDoc { slug, title, meaning, source: BOUND, cure }
}

/// Faults of netlists.
pub(super) const KINDS: &[KindDoc] = &[
    form(
        "not-a-netlist",
        "the file holds something else than a netlist",
        "The text is of another kind or in another language, such as a page, a program or a netlist of a layout tool.",
        "export the board as a SPICE netlist and name that file",
    ),
    form(
        "empty-netlist",
        "no element stands in the netlist",
        "The text was read to its end without finding an element, a definition or an include.",
        "see that the export wrote the sheet that you mean, and all of it",
    ),
    form(
        "title-statement",
        "the title line looks like a statement",
        "The first line of a netlist is its title and never an element; an element written there is lost.",
        "put a title line before the first statement",
    ),
    form(
        "unknown-directive",
        "a line with a dot that means nothing here",
        "The directive is none of those that are read or knowingly passed over; the line has no effect.",
        "correct its spelling, or delete the line where nothing depends on it",
    ),
    form(
        "unknown-element",
        "a line that is neither element nor directive",
        "An element's name begins with a letter that tells its kind; this line begins otherwise and is passed over.",
        "give the element a designator with its kind's letter, or begin a comment with `*`",
    ),
    form(
        "missing-name",
        "a directive lacks the name it needs",
        "A definition, a model or an include says nothing of what it defines or where it stands.",
        "write the name or the path behind the directive",
    ),
    form(
        "missing-node",
        "an element has too few nodes",
        "Fewer nodes stand in the line than an element of its kind has pins; the element is left out.",
        "give every pin its net, an open pin a net of its own",
    ),
    form(
        "missing-value",
        "a passive has no value",
        "The element is kept in the network, but figures that need its value are unknown.",
        "write the value into the schematic's value field and export again",
    ),
    form(
        "unreadable-number",
        "a value is no number",
        "What stands where a value belongs can't be read as a number with a scale factor or unit.",
        "write a plain value, such as `4k7`, `10n` or `2.2Meg`",
    ),
    form(
        "unreadable-value",
        "an expression has no value",
        "An expression or parameter can't be evaluated: a name in it is unknown, or it is no formula.",
        "define the parameter, or write the number",
    ),
    form(
        "unclosed-expression",
        "a brace or quote is never closed",
        "Everything from the opening brace or quote to the end of the line counts as the expression.",
        "close the brace or the quote",
    ),
    form(
        "not-positive-value",
        "a value is nought or negative",
        "A passive of no or negative size stands there; no network of such parts can be judged.",
        "correct the value; for a link write a resistor of 0 ohm",
    ),
    form(
        "blank-in-value",
        "a blank stands inside a value",
        "Number and unit were read as one value, as some exporters write it.",
        "write number and unit without a blank between them to be sure",
    ),
    form(
        "blank-in-name",
        "a blank stands inside a name",
        "A netlist separates words by blanks, so a net or part whose name holds one may be read as two.",
        "name the net or the part without blanks",
    ),
    form(
        "unread-word",
        "a word behind a value was not understood",
        "The value was taken, what follows it was not.",
        "see whether the word belongs to the value; else remove it",
    ),
    form(
        "unreadable-name",
        "a node is no name",
        "What stands in the place of a net can't be the name of one.",
        "name the net with letters and digits",
    ),
    form(
        "duplicate-designator",
        "two elements have one name",
        "Two lines of one level carry the same designator, so that what is said of it in the budget is said of both.",
        "number the parts anew and export again",
    ),
    form(
        "duplicate-subckt",
        "a subcircuit is defined twice",
        "Two definitions share a name; the first one counts.",
        "keep the definition that you mean",
    ),
    form(
        "unbalanced-subckt",
        "a definition doesn't begin and end once",
        "A `.subckt` lacks its `.ends`, or the other way round, or the names at both ends differ.",
        "end each definition once, with its own name",
    ),
    form(
        "pin-count",
        "a call has another number of nodes than its definition",
        "The nodes can't be told apart, so the call is kept as a part that isn't modelled.",
        "make the symbol's pins those of the definition",
    ),
    form(
        "recursive-subcircuit",
        "a subcircuit calls itself",
        "Opening it would never end; calls of it are kept as parts that aren't modelled.",
        "break the circle of calls",
    ),
    form(
        "unknown-subcircuit",
        "a called name is defined nowhere",
        "Neither the netlist nor a profile knows the name. The part is kept with its nets; if it is an op amp, its stage goes unseen.",
        "for an op amp say in the budget what it is: `devices: { NAME: { profile: ..., pins: [...] } }`; else include its definition",
    ),
    form(
        "not-modelled",
        "a controlled source is not linear or not a two-port",
        "What the source drives is taken for a signal; what it does with its control isn't followed.",
        "nothing, where its output is a stimulus; else write the source as a linear one",
    ),
    form(
        "missing-include",
        "an included file isn't there",
        "The netlist is read without it; what it would define counts as unknown.",
        "put the file beside the netlist, or drop the line where profiles stand for its models",
    ),
    KindDoc {
        slug: "include-refused",
        title: "an included file lies elsewhere",
        meaning: "Includes are followed inside the netlist's own folder alone, so that a netlist from outside can't have other files of the machine read.",
        source: "Common practice against path traversal (CWE-22).",
        cure: "copy the file into the netlist's folder",
    },
    form(
        "include-loop",
        "a file includes itself",
        "Following the line would never end; it is passed over.",
        "break the circle of includes",
    ),
    form(
        "source-loop",
        "voltage sources form a loop",
        "Two chains of voltage sources tie the same nets together; where they disagree no voltages fulfil both.",
        "remove the source that is one too many",
    ),
    bound(
        "include-limit",
        "too many includes",
        "More files are included, or deeper, than are read.",
        "include the files that the board needs alone",
    ),
    bound(
        "file-size-limit",
        "the text is too long",
        "One file, or all together, are longer than is read.",
        "leave out stimulus tables and model libraries that the board doesn't use",
    ),
    bound(
        "line-length-limit",
        "a line is too long",
        "The line with its continuations is longer than is read; it is passed over.",
        "split the table or the expression that makes it so long",
    ),
    bound(
        "name-length-limit",
        "a name is too long",
        "No exporter names nets and parts at such length; the statement is passed over.",
        "see whether the file is the netlist that you mean",
    ),
    bound("statement-limit", "too many statements", "What follows is not read.", "check boards one by one"),
    bound(
        "nesting-limit",
        "definitions are nested too deep",
        "What lies deeper is not read.",
        "define subcircuits beside one another",
    ),
    bound(
        "too-large",
        "subcircuits stand for too many elements",
        "Opened, the calls would be more elements, or nested deeper, than any board; they are kept as parts that aren't modelled.",
        "leave out what isn't part of the board",
    ),
    bound(
        "fault-limit",
        "too many faults",
        "Faults beyond the first thousand of a netlist are left out of the report.",
        "cure the first ones; most of the others follow from them",
    ),
];
