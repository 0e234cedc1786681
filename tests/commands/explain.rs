//! `gainsay explain`.

use crate::{PLAIN, gainsay};
use gainsay::check::reference;
use gainsay::report::{topic_text, topics_text};

fn explained(slug: &str) -> String {
    let topics = reference(&[], &[]).topics;
    topic_text(topics.iter().find(|topic| topic.slug == slug).expect("the slug is known"), PLAIN)
}

#[test]
fn a_figure_with_its_rules() {
    insta::assert_snapshot!(explained("feedback-loading"));
}

#[test]
fn a_figure_with_rules_of_a_scope() {
    insta::assert_snapshot!(explained("rejection"));
}

#[test]
fn a_fact() {
    insta::assert_snapshot!(explained("lost-zero"));
}

#[test]
fn a_fault() {
    insta::assert_snapshot!(explained("missing-value"));
}

#[test]
fn all_slugs() {
    insta::assert_snapshot!(topics_text(&reference(&[], &[]).topics, PLAIN));
}

#[test]
fn an_unknown_slug_fails_with_the_nearest() {
    let (status, printed, complaint) = gainsay(&["explain", "gain-eror"]);
    assert_eq!((status, printed.as_str()), (2, ""));
    assert_eq!(complaint, "gainsay: there is no `gain-eror`; the nearest is `gain-error`\n");
    let (status, _, complaint) = gainsay(&["explain", "xyzzy\u{1b}[31m"]);
    assert_eq!(status, 2);
    assert!(!complaint.contains('\u{1b}'), "{complaint}");
}

#[test]
fn limits_of_a_pack_of_ones_own_are_shown() {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let pack = folder.path().join("house.yaml");
    let rule = "- figure: gain-error\n  limit: 0.2 %\n  severity: error\n  scope: { topology: [difference] }\n  \
        reason: Measuring channels are not trimmed.\n  source: house rule 12\n";
    std::fs::write(&pack, rule).expect("the folder can be written to");
    let (status, printed, complaint) =
        gainsay(&["explain", "GAIN-ERROR", "--rules", pack.to_str().expect("a plain path")]);
    assert_eq!((status, complaint.as_str()), (0, ""));
    assert!(printed.contains("- +/- 1 %; error at most; every stage\n"), "{printed}");
    assert!(printed.contains("- +/- 0.2 %; error at most; topology difference\n"), "{printed}");
    assert!(printed.contains("source: house rule 12"), "{printed}");
}

#[test]
fn a_pack_at_fault_fails_with_its_place() {
    let folder = tempfile::tempdir().expect("a temporary folder can be made");
    let pack = folder.path().join("house.yaml");
    std::fs::write(&pack, "- figure: gain-eror\n").expect("the folder can be written to");
    let (status, _, complaint) = gainsay(&["explain", "--rules", pack.to_str().expect("a plain path")]);
    assert_eq!(status, 2);
    assert!(complaint.contains("house.yaml:1:11: there is no figure `gain-eror`"), "{complaint}");
}
