//! What leaves the program. One file a format; formats read a [`Report`] and compute nothing.

mod harmless;
mod json;
mod markdown;
mod text;
mod topic;

pub(crate) use harmless::harmless;
pub use json::json;
pub use markdown::ledger_markdown;
pub use text::{
    Style, device_text, devices_text, ledger_text, stages_text, text, topic_text, topics_text, trial_text,
};
pub use topic::{Sort, Topic, TopicRule};

use crate::device::Rank;
use crate::figure::{Bad, InputRange, Percentiles};
use crate::quantity::Unit;
use crate::rule::{Finding, Status};

/// The whole run.
#[derive(Debug, Clone, PartialEq)]
pub struct Report {
    /// What a gate goes by.
    pub verdict: Verdict,
    /// Boards in the order given.
    pub boards: Vec<BoardReport>,
}

/// The verdict over a board or a run.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// Every op amp was analysed and every limit is kept.
    WithinBudget,
    /// An op amp was skipped, or a limit that the budget states can't be judged.
    Incomplete,
    /// A finding weighs enough to fail.
    Fail,
}

impl Verdict {
    /// The word in reports.
    pub fn word(self) -> &'static str {
        match self {
            Verdict::WithinBudget => "within-budget",
            Verdict::Incomplete => "incomplete",
            Verdict::Fail => "fail",
        }
    }
}

/// One board.
#[derive(Debug, Clone, PartialEq)]
pub struct BoardReport {
    /// Path of the netlist as given.
    pub netlist: String,
    /// Path of the budget, where there is one.
    pub budget: Option<String>,
    /// What the board is called, where the budget says.
    pub name: Option<String>,
    /// Its own verdict.
    pub verdict: Verdict,
    /// How many op amps there are and were analysed.
    pub coverage: Coverage,
    /// What was assumed because nothing is declared, one sentence each.
    pub assumed: Vec<String>,
    /// Stages in netlist order.
    pub stages: Vec<StageReport>,
    /// Findings, the heaviest first, then in netlist order.
    pub findings: Vec<Finding>,
}

/// `op_amps = analysed + non_linear + skipped`.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Coverage {
    /// Op amps of the board.
    pub op_amps: usize,
    /// Those whose figures were computed.
    pub analysed: usize,
    /// Those that are non-linear by intent.
    pub non_linear: usize,
    /// The others: element and reason.
    pub skipped: Vec<(String, String)>,
}

/// One stage.
#[derive(Debug, Clone, PartialEq)]
pub struct StageReport {
    /// The op amp's id.
    pub id: String,
    /// Its profile's name, or the model's where no profile is known.
    pub device: String,
    /// What it is called.
    pub topology: String,
    /// Name of the group that it belongs to, where it does.
    pub group: Option<String>,
    /// Net of its output.
    pub output: String,
    /// Transfers from the ports of its block to its output.
    pub transfers: Vec<TransferReport>,
    /// The main transfer by its textbook formula; told only where a stage is shown in full.
    pub worked: Option<String>,
    /// Transfers with the block's other outputs held; `None` in a block of one.
    pub local: Option<Vec<TransferReport>>,
    /// Voltages where the ranges drive the output lowest and highest.
    pub pins: Vec<PinReport>,
    /// What it can do where nothing is declared; `None` where nobody asked.
    pub reach: Option<ReachReport>,
    /// Figures in the order of their list.
    pub figures: Vec<FigureReport>,
}

/// What a stage can do where nothing is declared.
#[derive(Debug, Clone, PartialEq)]
pub struct ReachReport {
    /// The main input, where there is one.
    pub main: Option<String>,
    /// `V` or `A`.
    pub unit: Unit,
    /// Its linear range, or why it can't be told.
    pub input: Result<InputRange, String>,
    /// Least load to ground in ohm, or why it can't be told.
    pub load: Result<f64, String>,
    /// How far the data can be trusted.
    pub data: Rank,
}

/// A transfer from an input to the stage's output.
#[derive(Debug, Clone, PartialEq)]
pub struct TransferReport {
    /// Name of the net, the pair or the current.
    pub input: String,
    /// `V/V` or `ohm`.
    pub unit: &'static str,
    /// Hertz.
    pub frequency: f64,
    /// The twin's.
    pub ideal: f64,
    /// With the real op amp; `None` where the device is unknown.
    pub actual: Option<f64>,
    /// Least and greatest over the travel of adjustable parts, where there are any.
    pub adjusts: Option<(f64, f64)>,
    /// `actual/ideal - 1`; `None` where there is none.
    pub error: Option<f64>,
}

/// Voltages at one extreme of the output, in volt.
#[derive(Debug, Clone, PartialEq)]
pub struct PinReport {
    /// `low` or `high`.
    pub at: &'static str,
    /// Non-inverting input.
    pub plus: f64,
    /// Inverting input.
    pub minus: f64,
    /// Output.
    pub out: f64,
    /// Non-inverting less inverting input.
    pub difference: f64,
    /// Output of the twin.
    pub twin_out: f64,
}

/// A figure with its verdict.
#[derive(Debug, Clone, PartialEq)]
pub struct FigureReport {
    /// Its slug.
    pub slug: &'static str,
    /// Its unit.
    pub unit: Unit,
    /// Which way it turns bad.
    pub bad: Bad,
    /// Nominal value.
    pub nominal: Option<f64>,
    /// Worst case.
    pub worst: Option<f64>,
    /// Root sum of squares.
    pub rss: Option<f64>,
    /// Sign of the return ratio, for the loop gain.
    pub sign: Option<f64>,
    /// What it must keep.
    pub limit: Option<f64>,
    /// Whether the budget states that limit.
    pub stated: bool,
    /// The verdict.
    pub status: Status,
    /// Why something is missing.
    pub reason: Option<String>,
    /// How far the data can be trusted.
    pub data: Rank,
    /// Unit of the ledger's effects, where they are no figures of this unit.
    pub ledger_unit: Unit,
    /// The formula with its values put in; told only where a stage is shown in full.
    pub worked: Option<String>,
    /// Random trials, where they were asked for.
    pub trials: Option<Percentiles>,
    /// What makes it up.
    pub ledger: Vec<LedgerLine>,
}

/// One line of a ledger.
#[derive(Debug, Clone, PartialEq)]
pub struct LedgerLine {
    /// What it is about.
    pub item: String,
    /// Its signed effect, in the figure's unit.
    pub effect: f64,
    /// Its share of the sum of all magnitudes; `None` for the base.
    pub share: Option<f64>,
    /// Its value: nominal or typical, at the worst corner, and the unit of both.
    pub value: Option<(f64, f64, Unit)>,
    /// Where that value comes from; told only where a stage is shown in full.
    pub origin: Option<String>,
    /// Whether it works against the worst case.
    pub against: bool,
}

/// What every report says of itself, whole.
pub const CAUTION: &str = "Screening aid. It judges static and small-signal limits of the op-amp stages that it could analyse, from declared and datasheet figures. It doesn't see layout, parasitics, real output impedance, distortion, overload, start-up and power-down, faults, ESD, isolation, leakage, ageing and, unless declared, resistor drift. 'Within budget' is no proof of safety or correctness, nor is the absence of findings. Device figures were entered by hand: check the current datasheet of the part and maker that you fit. Assumed values are marked. A waiver is its signer's responsibility. Not a sole measure for medical, life-support, mains-connected, automotive, railway, aviation, explosive-atmosphere or other functional-safety use: there the applicable standards and local codes, measurement, and a qualified engineer's independent review decide.";

/// The caution where there is room for one line.
pub const CAUTION_LINE: &str = "Screening aid on declared and datasheet data; it replaces neither measurement nor a qualified engineer's review; applicable standards and local codes decide.";
