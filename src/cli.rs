//! The command line: what can be asked, and how answers are printed.

mod devices;
mod explain;
mod stages;

use crate::check::{self, Options};
use crate::device::Technology;
use crate::diagnostic::Severity;
use crate::report::{self, Style};
use clap::{Parser, Subcommand, ValueEnum};
use std::io::{IsTerminal, Write};
use std::path::PathBuf;

/// Checks every op-amp stage of a netlist against its error budget, with real parts, before layout.
#[derive(Debug, Parser)]
#[command(name = "gainsay", version, after_help = report::CAUTION_LINE)]
pub struct Cli {
    #[command(subcommand)]
    command: Command,
}

#[derive(Debug, Subcommand)]
enum Command {
    /// Check netlists: every stage, every figure, what breaks its limit and which lines cause it.
    Check(Check),
    /// Show one stage in full: transfers, pin voltages, and each figure item by item.
    Ledger(Ledger),
    /// Show what was found: stages with their topology and transfers, what each can do, what was left out.
    Stages(stages::Stages),
    /// Explain a figure, a fact or a kind of fault: physics, formula, source, cures, the limits in force.
    Explain(explain::Explain),
    /// List the device profiles at hand, or show one with all its figures.
    Devices(devices::Devices),
}

/// What every command that reads a board takes.
#[derive(Debug, clap::Args)]
struct Board {
    /// Budget of the one netlist; else NAME.budget.yaml beside each netlist is taken.
    #[arg(long, value_name = "FILE")]
    budget: Option<PathBuf>,
    /// Further device profiles: a YAML file or a folder of them. Later ones win.
    #[arg(long, value_name = "PATH")]
    devices: Vec<PathBuf>,
    /// Further rule packs. Later entries win.
    #[arg(long, value_name = "FILE")]
    rules: Vec<PathBuf>,
    /// Judge op amps of unknown devices by the bounds of a class; all that rests on them is assumed.
    #[arg(long, value_enum, value_name = "CLASS")]
    assume_technology: Option<Class>,
}

/// What an op amp is built of.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Class {
    /// Bipolar transistors at the input.
    Bipolar,
    /// Junction field-effect transistors at the input.
    Jfet,
    /// MOS transistors at the input.
    Cmos,
}

impl Class {
    fn technology(self) -> Technology {
        match self {
            Class::Bipolar => Technology::Bipolar,
            Class::Jfet => Technology::Jfet,
            Class::Cmos => Technology::Cmos,
        }
    }
}

impl Board {
    /// The options of a run over such boards; paths and the rest are left to the command.
    fn options(&self) -> Options {
        Options {
            budget: self.budget.clone(),
            devices: self.devices.clone(),
            rules: self.rules.clone(),
            assume_technology: self.assume_technology.map(Class::technology),
            ..Options::default()
        }
    }
}

#[derive(Debug, clap::Args)]
struct Check {
    /// Netlists, or folders to look for netlists in.
    #[arg(required = true, value_name = "PATH")]
    paths: Vec<PathBuf>,
    #[command(flatten)]
    board: Board,
    /// How the report is written.
    #[arg(long, value_enum, default_value = "text")]
    format: Format,
    /// Least severity of a finding that fails the run.
    #[arg(long, value_enum, default_value = "error")]
    fail_on: Weight,
    /// Fail as well where an op amp is skipped or a stated limit can't be judged.
    #[arg(long)]
    complete: bool,
    /// Try another value, as in R5=49.9k, and show figures and findings before and after. May be repeated;
    /// nothing is written.
    #[arg(long, value_name = "NAME=VALUE", value_parser = trial_value)]
    with: Vec<(String, f64)>,
    /// Show every note in full.
    #[arg(long)]
    all: bool,
}

#[derive(Debug, clap::Args)]
struct Ledger {
    /// The netlist.
    #[arg(value_name = "NETLIST")]
    netlist: PathBuf,
    /// The stage's id, as the check shows it.
    #[arg(value_name = "STAGE")]
    stage: String,
    /// How it is written.
    #[arg(long, value_enum, default_value = "text")]
    format: Page,
    /// Random trials of each figure beside worst case and RSS; the same numbers at every run.
    #[arg(long, value_name = "N")]
    trials: Option<u32>,
    #[command(flatten)]
    board: Board,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For people.
    Text,
    /// For programs: schema gainsay-report/1.
    Json,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Page {
    /// For a terminal.
    Text,
    /// For a review record.
    Markdown,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Weight {
    /// Errors alone.
    Error,
    /// Warnings too.
    Warning,
    /// Notes too.
    Note,
}

/// Runs a command; the exit status.
pub fn run() -> u8 {
    match Cli::parse().command {
        Command::Check(check) => run_check(check),
        Command::Ledger(ledger) => run_ledger(&ledger),
        Command::Stages(asked) => stages::run(asked),
        Command::Explain(asked) => explain::run(&asked),
        Command::Devices(asked) => devices::run(&asked),
    }
}

fn run_check(asked: Check) -> u8 {
    let fail_on = match asked.fail_on {
        Weight::Error => Severity::Error,
        Weight::Warning => Severity::Warning,
        Weight::Note => Severity::Note,
    };
    let options = Options {
        paths: asked.paths,
        fail_on: Some(fail_on),
        complete: asked.complete,
        ..asked.board.options()
    };
    if !asked.with.is_empty() {
        return run_trial(&options, &asked.with, asked.format);
    }
    let outcome = check::run(&options);
    complain(&outcome.unusable);
    let text = match asked.format {
        Format::Json => report::json(&outcome.report, &outcome.sources),
        Format::Text => report::text(&outcome.report, &outcome.sources, style(asked.all)),
    };
    if print(&text) { outcome.status() } else { 2 }
}

fn run_ledger(asked: &Ledger) -> u8 {
    let options = Options {
        paths: vec![asked.netlist.clone()],
        detail: true,
        trials: asked.trials.unwrap_or(0).min(MOST_TRIALS),
        ..asked.board.options()
    };
    let outcome = check::run(&options);
    complain(&outcome.unusable);
    let stages = || outcome.report.boards.iter().flat_map(|board| &board.stages);
    match stages().find(|stage| stage.id.eq_ignore_ascii_case(&asked.stage)) {
        Some(stage) => {
            let page = match asked.format {
                Page::Text => report::ledger_text(stage, style(true)),
                Page::Markdown => report::ledger_markdown(stage),
            };
            if print(&page) && outcome.unusable.is_empty() { 0 } else { 2 }
        }
        None => {
            let known: Vec<&str> = stages().map(|stage| stage.id.as_str()).collect();
            complain(&[format!(
                "no stage {}; the stages are: {}",
                crate::source::quote(&asked.stage),
                known.join(", ")
            )]);
            2
        }
    }
}

/// More trials than this tell nothing more.
const MOST_TRIALS: u32 = 1_000_000;

/// A trial value as a netlist would have it.
fn trial_value(text: &str) -> Result<(String, f64), String> {
    let (name, value) = text.split_once('=').ok_or("write NAME=VALUE, as in R5=49.9k")?;
    if let Some(digits) = value.strip_suffix('M') {
        return Err(format!("{value} is milli in a netlist; write {digits}Meg or {digits}m"));
    }
    let number = crate::netlist::number(value)
        .ok_or_else(|| format!("{value} is no value; write 49.9k, 4k7 or 100n"))?;
    Ok((name.to_owned(), number.value))
}

/// Checks with the netlist's own values and with the trial values.
fn run_trial(options: &Options, with: &[(String, f64)], format: Format) -> u8 {
    let before = check::run(options);
    let after = check::run(&Options { with: with.to_vec(), ..options.clone() });
    complain(&after.unusable);
    let text = match format {
        Format::Json => report::json(&after.report, &after.sources),
        Format::Text => report::trial_text(&before.report, &after.report, with, style(false)),
    };
    if print(&text) { after.status() } else { 2 }
}

/// Says on the error stream what can't be read or used.
fn complain(lines: &[String]) {
    for line in lines {
        // An error stream that is closed has nobody to tell.
        let _ = writeln!(std::io::stderr(), "gainsay: {}", report::harmless(line));
    }
}

/// Writes a report; a reader that closes the pipe has seen enough.
fn print(text: &str) -> bool {
    match std::io::stdout().write_all(text.as_bytes()) {
        Ok(()) => true,
        Err(fault) => fault.kind() == std::io::ErrorKind::BrokenPipe,
    }
}

fn style(all: bool) -> Style {
    const USUAL: usize = 100;
    let colour =
        std::io::stdout().is_terminal() && std::env::var_os("NO_COLOR").is_none_or(|value| value.is_empty());
    let width = std::env::var("COLUMNS").ok().and_then(|columns| columns.parse().ok()).unwrap_or(USUAL);
    Style { colour, width: width.clamp(40, 200), all }
}
