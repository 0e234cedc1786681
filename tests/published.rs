//! Check values that others have printed, and closed forms, against what gainsay says of the same circuits.
//!
//! One row a value, in a table a topic. A new row needs nothing else; a new kind of number is one more
//! variant of [`published::case::Ask`].

mod support;

mod published {
    pub mod case;
    pub mod closed_form;
    pub mod gain;
    pub mod headroom;
    pub mod instrumentation;
    pub mod offset;
    pub mod source;
    pub mod summing;
}

use published::case::{Case, failure};
use published::{closed_form, gain, headroom, instrumentation, offset, summing};

/// Every row.
fn cases() -> impl Iterator<Item = &'static Case> {
    [gain::CASES, offset::CASES, instrumentation::CASES, summing::CASES, headroom::CASES, closed_form::CASES]
        .into_iter()
        .flatten()
}

#[test]
fn gainsay_agrees_with_every_printed_value() {
    let failures: Vec<String> = cases().filter_map(failure).collect();
    let count = cases().count();
    assert!(failures.is_empty(), "{} of {count} differ:\n{}", failures.len(), failures.join("\n"));
    assert!(60 <= count, "only {count} values are left");
}

#[test]
fn every_value_has_an_id_of_its_own() {
    let mut ids: Vec<&str> = cases().map(|case| case.id).collect();
    let count = ids.len();
    ids.sort_unstable();
    ids.dedup();
    assert_eq!(ids.len(), count);
}

#[test]
fn a_value_that_differs_is_noticed() {
    let case = cases().next().expect("the table has rows");
    let wrong = Case { printed: case.printed * 1.1, ..*case };
    let failure = failure(&wrong).expect("ten per cent are noticed");
    assert!(failure.contains(case.id), "{failure}");
}
