//! A folder of files, checked by the library and by the program.

use gainsay::check::{Options, run};
use gainsay::report::json;
use serde_json::Value;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};
use tempfile::TempDir;

/// Two rails, lines 2 and 3 of a board.
pub const RAILS: &str = "a board\nVCC vcc 0 12\nVEE vee 0 -12\n";
/// A sound stage, lines 4 to 7 behind the rails: it must be analysed whatever else the board holds.
pub const SOUND: &str = "XU1 in n1 vcc vee out OP07C\nR1 n1 0 1k\nR2 out n1 10k\nVIN in 0 SIN(0 0.1 1k)\n";

/// Rails, the sound stage, and more from line 8 on.
pub fn board(more: &str) -> String {
    format!("{RAILS}{SOUND}{more}")
}

/// A folder that is checked.
pub struct Bench {
    folder: TempDir,
    arguments: Vec<String>,
}

/// What came out, the same from the library and from the program.
pub struct Outcome {
    pub status: i32,
    /// The one board; null where there is none.
    pub board: Value,
    pub report: Value,
    pub errors: String,
}

impl Bench {
    /// A folder with a board in it.
    pub fn new(netlist: impl AsRef<[u8]>) -> Bench {
        let folder = TempDir::new().expect("a temporary folder can be made");
        Bench { folder, arguments: Vec::new() }.file("board.cir", netlist)
    }

    /// Adds a file.
    pub fn file(self, name: &str, text: impl AsRef<[u8]>) -> Bench {
        let path = self.path(name);
        std::fs::create_dir_all(path.parent().expect("a file lies in a folder")).expect("it can be made");
        std::fs::write(path, text).expect("the folder can be written to");
        self
    }

    /// Adds a budget beside the board.
    pub fn budget(self, text: &str) -> Bench {
        self.file("board.budget.yaml", text)
    }

    /// Adds arguments of the program; files among them lie in the folder.
    pub fn arguments(mut self, arguments: &[&str]) -> Bench {
        self.arguments.extend(arguments.iter().map(|argument| (*argument).to_owned()));
        self
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    /// Runs the program in the folder.
    pub fn program(&self, arguments: &[&str]) -> Output {
        let mut program = Command::new(env!("CARGO_BIN_EXE_gainsay"));
        program.current_dir(self.folder.path()).arg("check").args(arguments).args(&self.arguments);
        program.output().expect("the program runs")
    }

    /// The same with at most 1 GB of address space.
    #[cfg(unix)]
    pub fn confined(&self, arguments: &[&str]) -> Output {
        let mut shell = Command::new("sh");
        shell.current_dir(self.folder.path()).args(["-c", "ulimit -v 1000000; exec \"$@\"", "sh"]);
        shell.arg(env!("CARGO_BIN_EXE_gainsay")).arg("check").args(arguments);
        shell.output().expect("the program runs")
    }

    /// The same; where address space can't be bounded, the time is.
    #[cfg(not(unix))]
    pub fn confined(&self, arguments: &[&str]) -> Output {
        self.program(arguments)
    }

    /// Checks `board.cir`.
    pub fn check(&self) -> Outcome {
        self.check_path("board.cir")
    }

    /// Checks a path by the program, and by the library, which must say the same.
    pub fn check_path(&self, path: &str) -> Outcome {
        let output = self.program(&[path, "--format", "json"]);
        let report: Value = serde_json::from_slice(&output.stdout).expect("the report is JSON");
        let errors = String::from_utf8(output.stderr).expect("the error stream is UTF-8");
        let status = output.status.code().expect("the program ends by itself");
        let own = run(&self.options(path));
        assert_eq!(i32::from(own.status()), status, "{errors}");
        let own: Value = serde_json::from_str(&json(&own.report, &own.sources)).expect("the report is JSON");
        assert_eq!(said(&own["boards"][0]), said(&report["boards"][0]));
        let text = self.program(&[path, "--all"]);
        assert_eq!(text.status.code(), Some(status));
        harmless(&String::from_utf8(text.stdout).expect("the text is UTF-8"));
        harmless(&errors);
        adds_up(&report);
        Outcome { status, board: report["boards"][0].clone(), report, errors }
    }

    fn options(&self, path: &str) -> Options {
        let mut options = Options { paths: vec![self.path(path)], ..Options::default() };
        for pair in self.arguments.chunks(2) {
            match pair {
                [flag, value] if flag == "--devices" => options.devices.push(self.path(value)),
                [flag, value] if flag == "--rules" => options.rules.push(self.path(value)),
                [flag, value] if flag == "--budget" => options.budget = Some(self.path(value)),
                _ => panic!("an argument that the bench doesn't know: {pair:?}"),
            }
        }
        options
    }
}

impl Outcome {
    /// Findings, one line each: `severity rule file:line:column`.
    pub fn said(&self) -> Vec<String> {
        said(&self.board)
    }

    /// Asserts the exit status and all findings above a note.
    #[track_caller]
    pub fn is(&self, status: i32, expected: &[&str]) -> &Outcome {
        let heavy: Vec<String> = self.said().into_iter().filter(|line| !line.starts_with("note")).collect();
        assert_eq!(heavy, expected, "{:#}", self.board["findings"]);
        assert_eq!(self.status, status, "{}", self.errors);
        self
    }

    /// Asserts that a finding is there, notes included.
    #[track_caller]
    pub fn has(&self, expected: &str) -> &Outcome {
        assert!(self.said().iter().any(|line| line == expected), "{expected}: {:#?}", self.said());
        self
    }

    /// Asserts how many op amps there are, were analysed and are non-linear by intent.
    #[track_caller]
    pub fn covers(&self, op_amps: u64, analysed: u64, non_linear: u64) -> &Outcome {
        let coverage = &self.board["coverage"];
        let found = ["op_amps", "analysed", "non_linear"].map(|key| coverage[key].as_u64());
        assert_eq!(found, [Some(op_amps), Some(analysed), Some(non_linear)], "{coverage:#}");
        self
    }

    /// Asserts why an op amp is skipped.
    #[track_caller]
    pub fn skips(&self, element: &str, reason: &str) -> &Outcome {
        let skipped = self.board["coverage"]["skipped"].as_array().expect("coverage lists what is skipped");
        let found = skipped.iter().find(|skipped| skipped["element"] == element);
        let found = found.unwrap_or_else(|| panic!("{element} isn't skipped: {skipped:#?}"));
        assert_eq!(found["reason"], reason);
        self
    }

    /// Asserts that the sound stage is analysed: its gain is 11 but for the op amp.
    #[track_caller]
    pub fn sound(&self) -> &Outcome {
        let stages = self.board["stages"].as_array().expect("a board has stages");
        let stage = stages.iter().find(|stage| stage["id"] == "XU1").expect("the sound stage is there");
        let transfer = &stage["transfers"][0];
        assert_eq!(transfer["input"], "in");
        let (ideal, error) = (transfer["ideal"].as_f64(), transfer["error"].as_f64());
        assert!(ideal.is_some_and(|ideal| (ideal - 11.0).abs() <= 1e-9), "{transfer:#}");
        assert!(error.is_some_and(|error| error.abs() <= 1e-3), "{transfer:#}");
        self
    }

    /// The message of the first finding of a rule.
    #[track_caller]
    pub fn message(&self, rule: &str) -> String {
        let findings = self.board["findings"].as_array().expect("a board has findings");
        let found = findings.iter().find(|finding| finding["rule"] == rule);
        let found = found.unwrap_or_else(|| panic!("no {rule}: {findings:#?}"));
        found["message"].as_str().expect("a message is text").to_owned()
    }
}

/// Findings, one line each; the folder of a file isn't shown.
pub fn said(board: &Value) -> Vec<String> {
    let Some(findings) = board["findings"].as_array() else { return Vec::new() };
    let one = |finding: &Value| {
        let text = |value: &Value| value.as_str().unwrap_or_default().to_owned();
        let span = &finding["spans"][0];
        let place = match Path::new(&text(&span["file"])).file_name() {
            Some(name) => format!("{}:{}:{}", name.to_string_lossy(), span["line"], span["column"]),
            None => "nowhere".to_owned(),
        };
        format!("{} {} {place}", text(&finding["severity"]), text(&finding["rule"]))
    };
    findings.iter().map(one).collect()
}

/// Asserts of every board that its coverage adds up and that every skipped op amp is a finding.
#[track_caller]
pub fn adds_up(report: &Value) {
    for board in report["boards"].as_array().expect("a report has boards") {
        let coverage = &board["coverage"];
        let count = |key: &str| coverage[key].as_u64().expect("coverage counts");
        let skipped = coverage["skipped"].as_array().expect("coverage lists what is skipped");
        let sum = count("analysed") + count("non_linear") + skipped.len() as u64;
        assert_eq!(count("op_amps"), sum, "{coverage:#}");
        let findings = board["findings"].as_array().expect("a board has findings");
        for skipped in skipped {
            let reason = skipped["reason"].as_str().expect("a reason is text");
            let told = |finding: &&Value| {
                let message = finding["message"].as_str().unwrap_or("");
                match (finding["rule"].as_str(), reason.strip_prefix("unknown device ")) {
                    // One finding for all stages of a device.
                    (Some("unknown-device"), Some(rest)) => {
                        let model = rest.rsplit_once(" (").map_or(rest, |(model, _)| model);
                        message
                            .split_once(" is an unknown device")
                            .is_some_and(|(of, _)| of.eq_ignore_ascii_case(model))
                    }
                    _ => finding["stage"] == skipped["element"] && message.contains(reason),
                }
            };
            assert!(!reason.is_empty() && findings.iter().any(|finding| told(&finding)), "{skipped:#}");
        }
    }
}

/// Asserts that a text can't act on a terminal.
#[track_caller]
pub fn harmless(text: &str) {
    let acts = |c: &char| {
        (c.is_control() && *c != '\n')
            || matches!(c, '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}')
    };
    assert_eq!(text.chars().find(acts), None, "{text:?}");
}
