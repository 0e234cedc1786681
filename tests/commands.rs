//! The commands besides `check` and `ledger`: what they print, and what they end with.

#[path = "support/mod.rs"]
#[allow(dead_code)]
mod support;

#[path = "commands/devices.rs"]
mod devices;
#[path = "commands/explain.rs"]
mod explain;
#[path = "commands/slugs.rs"]
mod slugs;
#[path = "commands/stages.rs"]
mod stages;
#[path = "commands/technology.rs"]
mod technology;

use gainsay::report::Style;
use std::process::Command;

/// A page of the usual width without colour.
const PLAIN: Style = Style { colour: false, width: 100, all: true };

/// Runs the program; its exit status, what it printed and what it complained of.
fn gainsay(words: &[&str]) -> (i32, String, String) {
    let output = Command::new(env!("CARGO_BIN_EXE_gainsay"))
        .args(words)
        .env_remove("COLUMNS")
        .output()
        .expect("the program starts");
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).expect("the program prints text");
    (output.status.code().expect("it ends by itself"), text(output.stdout), text(output.stderr))
}
