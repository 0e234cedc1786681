//! Include lines and the text behind them.

use super::show::{Read, with};
use gainsay::netlist::Include;
use gainsay::source::{FileId, Sources};

/// Reads a board whose includes are found by name in a list.
fn board(text: &str, files: &[(&str, &str)]) -> Read {
    let mut load =
        |sources: &mut Sources, path: &str, _: FileId| match files.iter().find(|(name, _)| *name == path) {
            Some((name, text)) => Include::Found(sources.add(*name, (*text).to_owned())),
            None if path.starts_with('/') => Include::Refused("outside the project folder".to_owned()),
            None => Include::Missing("no such file".to_owned()),
        };
    with("board.cir", &format!("title\n{text}"), &mut load)
}

#[test]
fn included_statements_stand_at_the_line_that_includes_them() {
    let read = board("R1 a b 1k\n.include \"my parts.lib\"\nR3 a b 3k\n", &[("my parts.lib", "R2 a b 2k\n")]);
    assert_eq!(read.lines(), ["R1 [a | b] R 1e3", "R2 [a | b] R 2e3", "R3 [a | b] R 3e3"]);
    assert_eq!(read.netlist.includes.len(), 1);
    assert_eq!(read.text(read.netlist.includes[0].1), ".include \"my parts.lib\"");
    assert!(read.faults.is_empty());
}

#[test]
fn paths_in_every_form() {
    let files = [("a b.lib", ""), ("c.lib", ""), (r"D:\x y\z.sub", ""), ("~/$PDK/t.l", "")];
    let text = ".include a b.lib\n.INC 'c.lib'\n.lib c.lib\n.lib \"c.lib\" typ\n.include D:\\x y\\z.sub\n.lib ~/$PDK/t.l tt ; remark\n";
    let read = board(text, &files);
    assert!(read.faults.is_empty(), "{:?}", read.faults);
    let found: Vec<&str> =
        read.netlist.includes.iter().map(|(file, _)| read.sources.file(*file).path.as_str()).collect();
    assert_eq!(found, ["a b.lib", "c.lib", "c.lib", "c.lib", r"D:\x y\z.sub", "~/$PDK/t.l"]);
}

#[test]
fn one_section_of_a_library() {
    let library = ".lib tt\nR1 a b 1k\n.endl tt\n.lib ss\nR1 a b 2k\n.endl\n";
    let read = board(".lib corners.lib SS\n", &[("corners.lib", library)]);
    assert_eq!(read.lines(), ["R1 [a | b] R 2e3"]);
    assert!(read.faults.is_empty());
}

#[test]
fn includes_that_give_nothing() {
    let read = board(".include gone.lib\n.include /etc/x\n.include\nR1 a b 1k\n", &[]);
    assert_eq!(read.kinds(), ["missing-include", "include-refused", "missing-name"]);
    assert_eq!(read.lines().len(), 1);
}

#[test]
fn a_loop_is_said_once_and_reading_goes_on() {
    let files = [("a.lib", ".include b.lib\nR1 a b 1k\n"), ("b.lib", ".include a.lib\nR2 a b 1k\n")];
    let read = board(".include a.lib\nR3 a b 1k\n", &files);
    assert_eq!(read.kinds(), ["include-loop"]);
    assert_eq!(read.lines().len(), 3);
}

#[test]
fn depth_and_number_of_includes_are_bounded() {
    let mut count = 0;
    let mut load = |sources: &mut Sources, _: &str, _: FileId| {
        count += 1;
        Include::Found(
            sources.add(format!("{count}.lib"), ".include next.lib\n.include next.lib\n".to_owned()),
        )
    };
    let read = with("board.cir", "title\n.include first.lib\n", &mut load);
    assert!(count <= gainsay::netlist::limit::INCLUDES);
    assert!(read.kinds().iter().all(|kind| *kind == "include-limit"));
}
