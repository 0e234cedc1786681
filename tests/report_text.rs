//! What a person reads: snapshots of the text report, and what it must keep whatever it is given.

mod sample;

use gainsay::report::{Style, ledger_text, text};
use textwrap::core::display_width;

const PLAIN: Style = Style { colour: false, width: 100, all: false };

#[test]
fn a_board_that_fails() {
    let (report, sources) = sample::fermenter();
    insta::assert_snapshot!(text(&report, &sources, PLAIN));
}

#[test]
fn a_board_that_fails_with_all_notes() {
    let (report, sources) = sample::fermenter();
    insta::assert_snapshot!(text(&report, &sources, Style { all: true, ..PLAIN }));
}

#[test]
fn a_stage_in_full() {
    insta::assert_snapshot!(ledger_text(&sample::pressure_stage(), PLAIN));
}

#[test]
fn several_boards_of_hostile_text() {
    let (report, sources) = sample::hostile();
    insta::assert_snapshot!(text(&report, &sources, PLAIN));
}
