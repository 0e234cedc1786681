//! The module order, and what every file and every figure must bring along.

use gainsay::figure::Kind;
use std::path::{Path, PathBuf};

/// Modules in the order of the road; each uses only those before it.
const ORDER: [&str; 16] = [
    "source",
    "quantity",
    "diagnostic",
    "yaml",
    "netlist",
    "device",
    "budget",
    "circuit",
    "block",
    "solve",
    "figure",
    "fact",
    "rule",
    "report",
    "check",
    "cli",
];

/// Files longer than this, in lines, are to be split.
const LONGEST: usize = 600;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// Every Rust file under `src`, its path below `src` and its text, in the order of the paths.
fn files() -> Vec<(PathBuf, String)> {
    fn visit(folder: &Path, found: &mut Vec<PathBuf>) {
        for entry in std::fs::read_dir(folder).expect("src can be read") {
            let path = entry.expect("src can be read").path();
            if path.is_dir() {
                visit(&path, found);
            } else if path.extension().is_some_and(|ending| ending == "rs") {
                found.push(path);
            }
        }
    }
    let source = root().join("src");
    let mut paths = Vec::new();
    visit(&source, &mut paths);
    paths.sort();
    let read = |path: PathBuf| {
        let text = std::fs::read_to_string(&path).expect("a source file is text");
        (path.strip_prefix(&source).expect("it lies in src").to_owned(), text)
    };
    paths.into_iter().map(read).collect()
}

/// The module that a file belongs to; `None` for the crate's root and the binary.
fn module(path: &Path) -> Option<String> {
    let first = path.components().next()?.as_os_str().to_str()?;
    let name = first.strip_suffix(".rs").unwrap_or(first);
    (!matches!(name, "lib" | "main")).then(|| name.to_owned())
}

/// The modules that a text names behind `crate::`, comments aside.
fn used(text: &str) -> Vec<String> {
    let code: Vec<&str> = text.lines().map(|line| line.split("//").next().unwrap_or("")).collect();
    let code = code.join("\n");
    let mut found = Vec::new();
    for (at, mark) in code.match_indices("crate::") {
        let before = code[..at].chars().next_back();
        if before.is_some_and(|c| c.is_alphanumeric() || c == '_' || c == '$') {
            continue;
        }
        let rest = &code[at + mark.len()..];
        match rest.strip_prefix('{') {
            Some(group) => found.extend(members(group)),
            None => found.push(word(rest)),
        }
    }
    found
}

/// The first names of a group's members; the text begins behind the opening brace.
fn members(group: &str) -> Vec<String> {
    let (mut depth, mut found, mut start) = (1, Vec::new(), 0);
    for (at, c) in group.char_indices() {
        match c {
            '{' => depth += 1,
            '}' => depth -= 1,
            _ => {}
        }
        if depth == 0 || (depth == 1 && c == ',') {
            found.push(word(&group[start..at]));
            start = at + 1;
        }
        if depth == 0 {
            break;
        }
    }
    found.retain(|name| !name.is_empty());
    found
}

/// The name that a text begins with.
fn word(text: &str) -> String {
    text.trim().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect()
}

fn place(module: &str) -> Option<usize> {
    ORDER.iter().position(|known| *known == module)
}

/// What is wrong with what a module uses, one sentence each.
fn disorder(module: &str, path: &str, text: &str) -> Vec<String> {
    let Some(own) = place(module) else {
        return vec![format!("{path} belongs to module {module}, which has no place in the order")];
    };
    let complaint = |other: String| match place(&other) {
        Some(at) if at <= own => None,
        Some(_) => Some(format!("{path}: module {module} uses {other}, which stands later in the order")),
        None => Some(format!("{path}: module {module} uses {other}, which has no place in the order")),
    };
    used(text).into_iter().filter_map(complaint).collect()
}

#[test]
fn module_order() {
    let files = files();
    assert!(100 < files.len(), "only {} files were found", files.len());
    let complaints: Vec<String> = files
        .iter()
        .filter_map(|(path, text)| Some((module(path)?, path, text)))
        .flat_map(|(module, path, text)| disorder(&module, &path.display().to_string(), text))
        .collect();
    assert!(complaints.is_empty(), "\n{}", complaints.join("\n"));
}

#[test]
fn a_module_that_looks_ahead_is_named() {
    let text =
        "use crate::{source, report::Style};\n// crate::cli is fine here\nfn f() { crate::check::run() }";
    let expected = [
        "block.rs: module block uses report, which stands later in the order",
        "block.rs: module block uses check, which stands later in the order",
    ];
    assert_eq!(disorder("block", "block.rs", text), expected);
    let unknown = "x.rs: module block uses extra, which has no place in the order";
    assert_eq!(disorder("block", "x.rs", "use crate::extra::Thing;"), [unknown]);
}

#[test]
fn every_file_says_what_it_is_and_stays_short() {
    let mut complaints = Vec::new();
    for (path, text) in files() {
        if !text.starts_with("//! ") {
            complaints
                .push(format!("{} doesn't begin with a `//!` line that says what it is", path.display()));
        }
        let lines = text.lines().count();
        if LONGEST < lines {
            complaints.push(format!("{} has {lines} lines, more than {LONGEST}", path.display()));
        }
    }
    assert!(complaints.is_empty(), "\n{}", complaints.join("\n"));
}

#[test]
fn every_figure_is_documented() {
    let mut slugs: Vec<&str> = Vec::new();
    for kind in Kind::ALL {
        let doc = kind.doc();
        let texts = [
            ("title", doc.title),
            ("physics", doc.physics),
            ("formula", doc.formula),
            ("source", doc.source),
            ("worse", doc.worse),
            ("cure", doc.cure),
        ];
        for (what, text) in texts {
            assert!(!text.trim().is_empty(), "{} has no {what}", doc.slug);
        }
        let plain = |c: char| c.is_ascii_lowercase() || c == '-';
        assert!(!doc.slug.is_empty() && doc.slug.chars().all(plain), "{} is no slug", doc.slug);
        assert_eq!(Kind::by_slug(doc.slug), Some(*kind), "{} leads to another figure", doc.slug);
        slugs.push(doc.slug);
    }
    slugs.sort_unstable();
    let doubled = slugs.windows(2).find(|pair| pair[0] == pair[1]);
    assert_eq!(doubled, None, "two figures have one slug");
}

#[test]
fn every_figure_has_a_rule() {
    let pack = std::fs::read_to_string(root().join("rules/core.yaml")).expect("the core pack is there");
    let ruled: Vec<&str> = pack.lines().filter_map(|line| line.strip_prefix("- figure: ")).collect();
    let lacking: Vec<&str> =
        Kind::ALL.iter().map(|kind| kind.doc().slug).filter(|slug| !ruled.contains(slug)).collect();
    assert!(lacking.is_empty(), "rules/core.yaml has no entry for {}", lacking.join(", "));
}

#[test]
fn every_figure_has_a_file_of_its_own() {
    for kind in Kind::ALL {
        let name = format!("src/figure/{}.rs", kind.doc().slug.replace('-', "_"));
        assert!(root().join(&name).is_file(), "{} should stand in {name}", kind.doc().slug);
    }
}
