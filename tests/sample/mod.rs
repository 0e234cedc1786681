//! Reports made by hand, for the tests of the output formats.

use gainsay::device::Rank;
use gainsay::diagnostic::{Label, Severity};
use gainsay::figure::Bad;
use gainsay::quantity::Unit;
use gainsay::report::{
    BoardReport, Coverage, FigureReport, LedgerLine, PinReport, Report, StageReport, TransferReport, Verdict,
};
use gainsay::rule::{Finding, Status, Waived};
use gainsay::source::{FileId, Sources, Span};

const NETLIST: &str = "\
Fermenter head, revision B
VCC VCC 0 5
VEE VEE 0 -5
* pressure bridge, times 101
.include parts/opx21.inc
XU1 PRESS_IN N001 VCC VEE PRESS_OUT OPX21
R2 N001 0 1k
R3 PRESS_OUT N001 100k
* pH electrode
XU2 PH_IN PH_OUT VCC VEE PH_OUT OPX90
R7 PH_OUT 0 10k
* dissolved oxygen
XU3 0 N004 VCC VEE OXY_OUT OPX21
R9 N004 OXY_OUT 1Meg
XU4 N010 N011 VCC VEE N012 LMX7
";

const INCLUDE: &str = "* parts of the fermenter head
.subckt OPX21 inp inn vp vn out
Rdiff inp inn 2Meg
.ends
";

/// The words of a file, each time they are marked.
pub struct Words {
    /// The file.
    pub file: FileId,
    /// Its text.
    pub text: String,
}

impl Words {
    /// A label on the first place where `words` stand.
    pub fn label(&self, words: &str, text: &str) -> Label {
        let start = self.text.find(words).expect("the words stand in the file") as u32;
        let span = Span { file: self.file, start, end: start + words.len() as u32 };
        Label { span, text: text.to_owned() }
    }
}

/// A figure without ledger, inside its limit.
pub fn figure(slug: &'static str, unit: Unit, bad: Bad) -> FigureReport {
    FigureReport {
        slug,
        unit,
        bad,
        nominal: None,
        worst: None,
        rss: None,
        sign: None,
        limit: None,
        ledger_unit: unit,
        worked: None,
        trials: None,
        stated: false,
        status: Status::Within,
        reason: None,
        data: Rank::Guaranteed,
        ledger: Vec::new(),
    }
}

/// A ledger's line.
pub fn line(item: &str, effect: f64, share: Option<f64>, against: bool) -> LedgerLine {
    LedgerLine { item: item.to_owned(), effect, share, value: None, origin: None, against }
}

/// A finding without places.
pub fn finding(rule: &str, severity: Severity, stage: Option<&str>, message: &str) -> Finding {
    Finding {
        rule: rule.to_owned(),
        severity,
        stage: stage.map(str::to_owned),
        value: None,
        limit: None,
        unit: None,
        message: message.to_owned(),
        cure: None,
        waived: None,
        labels: Vec::new(),
    }
}

/// The stage with everything known of it.
pub fn pressure_stage() -> StageReport {
    let gain_error = FigureReport {
        nominal: Some(-0.000101),
        worst: Some(-0.0021),
        rss: Some(0.0016),
        limit: Some(0.002),
        stated: true,
        status: Status::Broken,
        ledger: vec![
            line("XU1 open-loop gain", -0.001596, Some(0.731), false),
            line("R3 tolerance", -0.000545, Some(0.25), false),
            line("R2 temperature drift", 0.000041, Some(0.0188), true),
            line("higher order", 0.0, Some(0.0), false),
        ],
        ..figure("gain-error", Unit::One, Bad::Either)
    };
    let loop_gain = FigureReport {
        nominal: Some(9_900.0),
        worst: Some(1_980.0),
        sign: Some(1.0),
        limit: Some(10.0),
        ledger: vec![
            line("nominal", 9_900.0, None, false),
            line("XU1 open-loop gain", -7_920.0, Some(1.0), false),
        ],
        ..figure("loop-gain", Unit::One, Bad::Low)
    };
    let loading = FigureReport {
        nominal: Some(0.0021),
        worst: Some(0.0022),
        rss: Some(0.0022),
        limit: Some(0.5),
        data: Rank::Typical,
        ..figure("feedback-loading", Unit::One, Bad::High)
    };
    let headroom = FigureReport {
        nominal: Some(0.98),
        worst: Some(0.23),
        rss: Some(0.41),
        limit: Some(0.25),
        status: Status::Marginal,
        data: Rank::Assumed,
        ..figure("output-headroom", Unit::Volt, Bad::Low)
    };
    let rejection = FigureReport {
        status: Status::Unknown,
        reason: Some("the stage has no pair".to_owned()),
        ..figure("rejection", Unit::Decibel, Bad::Low)
    };
    StageReport {
        id: "XU1".to_owned(),
        device: "precision-bipolar".to_owned(),
        topology: "non-inverting".to_owned(),
        group: None,
        output: "PRESS_OUT".to_owned(),
        transfers: vec![TransferReport {
            adjusts: None,
            input: "PRESS_IN".to_owned(),
            unit: "V/V",
            frequency: 0.0,
            ideal: 101.0,
            actual: Some(100.989_799_1),
            error: Some(-0.000_100_999_009_900_990_1),
        }],
        worked: None,
        local: None,
        pins: vec![pins("low", -0.02), pins("high", 0.02)],
        reach: None,
        figures: vec![gain_error, loop_gain, loading, headroom, rejection],
    }
}

fn pins(at: &'static str, input: f64) -> PinReport {
    PinReport {
        at,
        plus: input,
        minus: input * 0.999_899,
        out: input * 100.9898,
        difference: input * 1.01e-4,
        twin_out: input * 101.0,
    }
}

fn oxygen_stage() -> StageReport {
    let gain_error = FigureReport {
        nominal: Some(-0.00005),
        worst: Some(-0.0003),
        ..figure("gain-error", Unit::One, Bad::Either)
    };
    StageReport {
        id: "XU3".to_owned(),
        device: "precision-bipolar".to_owned(),
        topology: "transimpedance".to_owned(),
        group: None,
        output: "OXY_OUT".to_owned(),
        transfers: vec![TransferReport {
            adjusts: None,
            input: "N004".to_owned(),
            unit: "ohm",
            frequency: 0.0,
            ideal: -1e6,
            actual: Some(-999_950.0),
            error: Some(-0.00005),
        }],
        worked: None,
        local: None,
        pins: Vec::new(),
        reach: None,
        figures: vec![gain_error],
    }
}

fn unknown_stage() -> StageReport {
    StageReport {
        id: "XU4".to_owned(),
        device: "LMX7".to_owned(),
        topology: "unclassified".to_owned(),
        group: None,
        output: "N012".to_owned(),
        transfers: vec![TransferReport {
            adjusts: None,
            input: "N010".to_owned(),
            unit: "V/V",
            frequency: 0.0,
            ideal: 1.0,
            actual: None,
            error: None,
        }],
        worked: None,
        local: None,
        pins: Vec::new(),
        reach: None,
        figures: Vec::new(),
    }
}

fn findings(netlist: &Words, include: &Words) -> Vec<Finding> {
    let gain = Finding {
        value: Some(-0.0021),
        limit: Some(0.002),
        unit: Some(Unit::One),
        cure: Some(
            "an op amp of five times the open-loop gain, or a smaller gain: 49.9 kohm at R3 keeps the limit"
                .to_owned(),
        ),
        labels: vec![
            netlist.label("R3 PRESS_OUT N001 100k", "25 % of it"),
            netlist.label("XU1", "73 % of it: its least open-loop gain"),
            include.label("Rdiff inp inn 2Meg", "its input resistance"),
        ],
        ..finding(
            "gain-error",
            Severity::Error,
            Some("XU1"),
            "XU1: the gain error reaches -0.21 % in the worst case, its limit is 0.2 %: broken",
        )
    };
    let headroom = Finding {
        value: Some(0.23),
        limit: Some(0.25),
        unit: Some(Unit::Volt),
        cure: Some(
            "a greater distance between output and rail: a smaller gain, or a higher supply".to_owned(),
        ),
        labels: vec![netlist.label("PRESS_OUT OPX21", "comes within 230 mV of VCC")],
        ..finding(
            "output-headroom",
            Severity::Warning,
            Some("XU1"),
            "XU1: the output headroom is 230 mV in the worst case, its limit is 250 mV: marginal",
        )
    };
    let skipped = Finding {
        labels: vec![netlist.label("LMX7", "")],
        cure: Some(
            "add a profile for it with --devices, or name one under `devices` in the budget".to_owned(),
        ),
        ..finding(
            "unknown-device",
            Severity::Note,
            Some("XU4"),
            "XU4: no profile is known for the device `LMX7`",
        )
    };
    let lone = finding("decoupling", Severity::Note, None, "no capacitor stands between VCC and ground");
    let waived = Finding {
        value: Some(0.61),
        limit: Some(0.5),
        unit: Some(Unit::One),
        waived: Some(Waived {
            reason: "output drives nothing else; measured on revision A".to_owned(),
            by: "analog review".to_owned(),
            until: Some("2027-06-30".to_owned()),
        }),
        labels: vec![netlist.label("R7 PH_OUT 0 10k", "all of it")],
        ..finding(
            "feedback-loading",
            Severity::Warning,
            Some("XU2"),
            "XU2: the feedback network takes 61 % of the rated output current, its limit is 50 %: marginal",
        )
    };
    vec![gain, headroom, waived, skipped, lone]
}

/// A board with an error, a warning, notes, a waived finding and a skipped op amp.
pub fn fermenter() -> (Report, Sources) {
    let mut sources = Sources::default();
    let netlist =
        Words { file: sources.add("boards/fermenter.cir", NETLIST.to_owned()), text: NETLIST.to_owned() };
    let include =
        Words { file: sources.add("boards/parts/opx21.inc", INCLUDE.to_owned()), text: INCLUDE.to_owned() };
    let board = BoardReport {
        netlist: "boards/fermenter.cir".to_owned(),
        budget: Some("boards/fermenter.budget.yaml".to_owned()),
        name: Some("Fermenter head, revision B".to_owned()),
        verdict: Verdict::Fail,
        coverage: Coverage {
            op_amps: 4,
            analysed: 3,
            non_linear: 0,
            skipped: vec![("XU4".to_owned(), "no profile is known for the device `LMX7`".to_owned())],
        },
        assumed: vec![
            "resistor tolerance 1 %, for 4 resistors whose lines state none: write `tolerance: { resistor: 1 % }`"
                .to_owned(),
            "OXY_OUT carries no load: write `loads: { OXY_OUT: { resistance: 10 kohm, to: GND } }`".to_owned(),
        ],
        stages: vec![pressure_stage(), oxygen_stage(), unknown_stage()],
        findings: findings(&netlist, &include),
    };
    (Report { verdict: Verdict::Fail, boards: vec![board] }, sources)
}

/// Names with markup, control characters, terminal escapes and right-to-left marks; numbers that aren't finite.
pub fn hostile() -> (Report, Sources) {
    let name = "X<b>&amp;\u{1b}[2J\u{9b}31m\u{202e}\"\u{0}\u{7}'\u{200f}]]>";
    let long = "漢\u{301}".repeat(400);
    let text = format!("title\r\n\r\n{name} A B\u{1b}]0;own\u{7}\tC {long} OPX21 {long}\r\nlast\u{2028}line");
    let mut sources = Sources::default();
    let words = Words { file: sources.add(format!("{name}.cir"), text.clone()), text };
    let end = words.text.len() as u32;
    let at_end = Label { span: Span { file: words.file, start: end, end }, text: format!("ends\n{name}") };
    let found = Finding {
        value: Some(f64::NEG_INFINITY),
        limit: Some(f64::NAN),
        unit: Some(Unit::Decibel),
        cure: Some(format!("rename {name}\n")),
        labels: vec![
            words.label(name, name),
            words.label("OPX21", "in the middle of a line that is far too long"),
            at_end,
        ],
        ..finding(name, Severity::Error, Some(name), &format!("{name}: {}", "word ".repeat(60)))
    };
    let waived = Finding {
        waived: Some(Waived { reason: name.to_owned(), by: name.to_owned(), until: None }),
        ..finding("lone-net", Severity::Note, None, name)
    };
    let unlimited = FigureReport {
        nominal: Some(f64::INFINITY),
        worst: Some(f64::NAN),
        status: Status::Unknown,
        ledger: vec![line(name, f64::NAN, Some(f64::NAN), true)],
        ..figure("rejection", Unit::Decibel, Bad::Low)
    };
    let mut stage = pressure_stage();
    for field in [&mut stage.id, &mut stage.device, &mut stage.topology, &mut stage.output] {
        *field = name.to_owned();
    }
    stage.group = Some(name.to_owned());
    stage.local = Some(stage.transfers.clone());
    stage.transfers[0] =
        TransferReport { input: long, ideal: 0.0, error: None, ..stage.transfers[0].clone() };
    stage.figures = vec![unlimited];
    let board = BoardReport {
        netlist: format!("{name}.cir"),
        budget: None,
        name: Some(name.to_owned()),
        verdict: Verdict::Incomplete,
        coverage: Coverage {
            op_amps: 2,
            analysed: 0,
            non_linear: 1,
            skipped: vec![(name.to_owned(), name.to_owned())],
        },
        assumed: vec![name.to_owned()],
        stages: vec![stage],
        findings: vec![found, waived],
    };
    let empty = BoardReport {
        netlist: "empty.cir".to_owned(),
        name: None,
        verdict: Verdict::WithinBudget,
        coverage: Coverage::default(),
        assumed: Vec::new(),
        stages: Vec::new(),
        findings: Vec::new(),
        ..board.clone()
    };
    (Report { verdict: Verdict::Incomplete, boards: vec![board, empty] }, sources)
}
