//! The JSON report against its schema, and what its numbers and texts must keep.

mod sample;

use gainsay::report::json;
use serde_json::{Value, from_str, json};

const SCHEMA: &str = include_str!("schema/gainsay-report-1.schema.json");

fn schema() -> jsonschema::Validator {
    let schema: Value = from_str(SCHEMA).expect("the schema is JSON");
    jsonschema::draft202012::meta::validate(&schema).expect("the schema is one of its draft");
    jsonschema::draft202012::new(&schema).expect("the schema compiles")
}

fn complaints(document: &Value) -> Vec<String> {
    schema().iter_errors(document).map(|fault| format!("{}: {fault}", fault.instance_path())).collect()
}

fn fermenter() -> Value {
    let (report, sources) = sample::fermenter();
    from_str(&json(&report, &sources)).expect("the report is JSON")
}

/// Keys stand somewhere in the text in this order, each after the one before.
fn in_order(text: &str, keys: &[&str]) -> bool {
    let mut rest = text;
    keys.iter().all(|key| match rest.split_once(&format!("\"{key}\":")) {
        Some((_, after)) => {
            rest = after;
            true
        }
        None => false,
    })
}

#[test]
fn mixed_report_keeps_the_schema() {
    assert_eq!(complaints(&fermenter()), Vec::<String>::new());
}

#[test]
fn hostile_report_keeps_the_schema() {
    let (report, sources) = sample::hostile();
    let text = json(&report, &sources);
    assert_eq!(complaints(&from_str(&text).expect("the report is JSON")), Vec::<String>::new());
    assert_eq!(text.find(|character: char| character != '\n' && character.is_control()), None);
    assert_eq!(text.find(['\u{202e}', '\u{200f}', '\u{2028}']), None);
    let read: Value = from_str(&text).expect("the report is JSON");
    assert_eq!(read["boards"][0]["stages"][0]["id"], json!(report.boards[0].stages[0].id));
    assert_eq!(read["boards"][0]["findings"][0]["message"], json!(report.boards[0].findings[0].message));
}

#[test]
fn schema_refuses_what_breaks_the_contract() {
    type Change = fn(&mut Value);
    let changes: [(&str, Change); 10] = [
        ("a missing key", |report| {
            drop(report["boards"][0]["stages"][0].as_object_mut().unwrap().remove("local"))
        }),
        ("a missing schema", |report| drop(report.as_object_mut().unwrap().remove("schema"))),
        ("another schema", |report| report["schema"] = json!("gainsay-report/2")),
        ("a verdict of its own", |report| report["verdict"] = json!("pass")),
        ("a status of its own", |report| {
            report["boards"][0]["stages"][0]["figures"]["gain-error"]["status"] = json!("failed");
        }),
        ("a number as text", |report| {
            report["boards"][0]["stages"][0]["figures"]["gain-error"]["worst"] = json!("-0.21 %");
        }),
        ("an unknown figure without reason", |report| {
            report["boards"][0]["stages"][0]["figures"]["rejection"]["reason"] = Value::Null;
        }),
        ("a share above all", |report| {
            report["boards"][0]["stages"][0]["figures"]["gain-error"]["ledger"][0]["share"] = json!(1.5);
        }),
        ("a line before the first", |report| {
            report["boards"][0]["findings"][0]["spans"][0]["line"] = json!(0);
        }),
        ("a waiver without a signer", |report| {
            drop(report["boards"][0]["findings"][2]["waived"].as_object_mut().unwrap().remove("by"));
        }),
    ];
    for (what, change) in changes {
        let mut report = fermenter();
        change(&mut report);
        assert_ne!(complaints(&report), Vec::<String>::new(), "{what} passes the schema");
    }
}

#[test]
fn schema_lets_keys_be_added() {
    let mut report = fermenter();
    report["later"] = json!(1);
    report["boards"][0]["stages"][0]["figures"]["gain-error"]["later"] = json!(1);
    assert_eq!(complaints(&report), Vec::<String>::new());
}

#[test]
fn keys_stand_in_the_order_of_the_contract() {
    let (report, sources) = sample::fermenter();
    let text = json(&report, &sources);
    assert!(in_order(&text, &["schema", "tool", "name", "version", "verdict", "caution", "boards"]));
    assert!(in_order(
        &text,
        &["netlist", "budget", "coverage", "op_amps", "analysed", "non_linear", "skipped"]
    ));
    let keys =
        ["id", "device", "topology", "group", "output", "transfers", "local", "pins", "figures", "findings"];
    assert!(in_order(&text, &keys));
    assert!(in_order(&text, &["input", "unit", "frequency", "ideal", "actual", "error"]));
    assert!(in_order(&text, &["at", "in+", "in-", "out", "difference", "twin_out"]));
    let keys =
        ["nominal", "worst", "rss", "limit", "status", "reason", "data", "ledger", "item", "effect", "share"];
    assert!(in_order(&text, &keys));
    assert!(in_order(
        &text,
        &["gain-error", "loop-gain", "feedback-loading", "output-headroom", "rejection"]
    ));
    let keys = ["rule", "severity", "stage", "value", "limit", "unit", "message", "cure", "waived", "spans"];
    assert!(in_order(&text, &keys));
    assert!(in_order(&text, &["file", "line", "column", "end_column", "label"]));
}

#[test]
fn numbers_come_back_as_they_were() {
    let (report, sources) = sample::fermenter();
    let text = json(&report, &sources);
    assert!(text.contains("\"error\": -0.0001009990099009901"), "{text}");
    let read = fermenter();
    let (stage, known) = (&read["boards"][0]["stages"][0], &report.boards[0].stages[0]);
    assert_eq!(stage["transfers"][0]["actual"].as_f64(), known.transfers[0].actual);
    assert_eq!(stage["pins"][1]["in-"].as_f64(), Some(known.pins[1].minus));
    assert_eq!(stage["figures"]["gain-error"]["ledger"][2]["against"], json!(true));
    assert_eq!(stage["figures"]["gain-error"]["ledger"][0].get("against"), None);
    assert_eq!(stage["figures"]["loop-gain"]["ledger"][0]["share"], Value::Null);
    assert_eq!(stage["figures"]["loop-gain"]["sign"], json!(1.0));
    assert_eq!(stage["figures"]["gain-error"].get("sign"), None);
}

#[test]
fn what_is_no_number_is_null_with_its_reason() {
    let (report, sources) = sample::hostile();
    let read: Value = from_str(&json(&report, &sources)).expect("the report is JSON");
    let board = &read["boards"][0];
    let figure = &board["stages"][0]["figures"]["rejection"];
    assert_eq!(figure["nominal"], Value::Null);
    assert_eq!(figure["reason"], json!("nominal is unlimited, worst is undefined"));
    let finding = &board["findings"][0];
    assert_eq!(finding["value"], Value::Null);
    assert_eq!(finding["reason"], json!("value is -unlimited, limit is undefined"));
    assert_eq!(board["stages"][0]["transfers"][0]["reason"], json!("the ideal transfer is 0"));
    let skipped = &fermenter()["boards"][0]["stages"][2]["transfers"][0]["reason"];
    assert_eq!(*skipped, json!("no profile is known for the device `LMX7`"));
}

#[test]
fn places_are_those_of_the_file() {
    let read = fermenter();
    let spans = &read["boards"][0]["findings"][0]["spans"];
    assert_eq!(
        spans[0],
        json!({"file": "boards/fermenter.cir", "line": 8, "column": 1, "end_column": 23, "label": "25 % of it"})
    );
    assert_eq!(spans[2]["file"], json!("boards/parts/opx21.inc"));
    assert_eq!(read["boards"][0]["findings"][4]["spans"], json!([]));
}

#[test]
fn layout_is_two_spaces_and_a_last_newline() {
    let (report, sources) = sample::fermenter();
    let text = json(&report, &sources);
    assert!(
        text.starts_with("{\n  \"schema\": \"gainsay-report/1\",\n  \"tool\": {\n    \"name\": \"gainsay\",")
    );
    assert!(text.ends_with("}\n"));
}
