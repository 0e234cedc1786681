//! The budget: what the user declares about one board.

use crate::device::{Pin, Technology};
use crate::quantity::{Celsius, Farads, Hertz, Ohms, Unit};
use crate::source::Span;

pub use crate::yaml::Name;
pub use read::read;

mod read;

/// A nominal value with the range it stays in; both in the unit of its field.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Toleranced {
    /// Nominal value.
    pub nominal: f64,
    /// Absolute deviation to either side.
    pub deviation: Option<f64>,
}

/// Everything one budget file declares. Fields that it leaves out are `None` or empty.
#[derive(Debug, Clone, Default)]
pub struct Budget {
    /// What the board is called.
    pub board: Option<String>,
    /// Ambient range.
    pub temperature: Option<(Celsius, Celsius)>,
    /// Supply rails: net, volt.
    pub rails: Vec<(Name, Toleranced)>,
    /// Nets that are ground.
    pub grounds: Vec<Name>,
    /// Tolerances where neither the netlist nor `parts` says: relative.
    pub tolerance: Tolerance,
    /// Exceptions to the tolerances.
    pub parts: Vec<Part>,
    /// Elements that aren't fitted.
    pub absent: Vec<Name>,
    /// Signals.
    pub signals: Vec<Signal>,
    /// Differential signals.
    pub pairs: Vec<Pair>,
    /// Loads.
    pub loads: Vec<Load>,
    /// What device a model or designator is.
    pub devices: Vec<DeviceChoice>,
    /// What is asked of stages.
    pub stages: Vec<StageBudget>,
    /// Findings that someone answers for.
    pub waivers: Vec<Waiver>,
    /// What op amps of unknown devices are built of, where the command line says; no file does.
    pub assumed_technology: Option<Technology>,
}

/// Default tolerances, relative; drift per kelvin.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Tolerance {
    /// Of resistors.
    pub resistor: Option<f64>,
    /// Of capacitors.
    pub capacitor: Option<f64>,
    /// Of inductors.
    pub inductor: Option<f64>,
    /// Resistor drift, 1/K.
    pub resistor_drift: Option<f64>,
}

/// An exception for some parts.
#[derive(Debug, Clone, PartialEq)]
pub struct Part {
    /// Designators, `*` allowed.
    pub matches: Vec<Name>,
    /// Relative tolerance.
    pub tolerance: Option<f64>,
    /// Relative tolerance of the ratios within the group.
    pub ratio: Option<f64>,
    /// Drift, 1/K.
    pub drift: Option<f64>,
    /// Rated power, watt.
    pub power: Option<f64>,
    /// Travel of an adjustable part, 0 to 1.
    pub travel: Option<(f64, f64)>,
}

/// A declared signal.
#[derive(Debug, Clone, PartialEq)]
pub struct Signal {
    /// Its name; the net's, unless `net` is given.
    pub name: Name,
    /// The net, where the name is the user's own.
    pub net: Option<Name>,
    /// Open-circuit range and its unit: volt, or ampere for a current.
    pub range: Option<(f64, f64, Unit)>,
    /// Source resistance (of a current: in parallel).
    pub source: Option<Ohms>,
    /// Capacitance in parallel with a current.
    pub capacitance: Option<Farads>,
    /// Lowest and highest frequency.
    pub band: Option<(Hertz, Hertz)>,
}

/// A declared differential signal.
#[derive(Debug, Clone, PartialEq)]
pub struct Pair {
    /// Its name.
    pub name: Name,
    /// Net of the positive leg.
    pub positive: Name,
    /// Net of the negative leg.
    pub negative: Name,
    /// Range of positive minus negative, volt.
    pub difference: Option<(f64, f64)>,
    /// Range of the mean of both, volt.
    pub common: Option<(f64, f64)>,
    /// Source resistance of each leg.
    pub source: Option<Ohms>,
    /// Lowest and highest frequency.
    pub band: Option<(Hertz, Hertz)>,
}

/// A declared load.
#[derive(Debug, Clone, PartialEq)]
pub struct Load {
    /// The net it hangs on.
    pub net: Name,
    /// Its resistance.
    pub resistance: Option<Ohms>,
    /// Its capacitance.
    pub capacitance: Option<Farads>,
    /// Where it returns to; ground where left out.
    pub to: Option<Name>,
}

/// What a model name or designator is.
#[derive(Debug, Clone, PartialEq)]
pub struct DeviceChoice {
    /// Model name or designator in the netlist.
    pub name: Name,
    /// The profile that serves.
    pub profile: Option<Name>,
    /// For an unknown device: what it is built of.
    pub technology: Option<Technology>,
    /// Pin order of the call.
    pub pins: Option<Vec<Pin>>,
}

/// A limit stated for a figure, in the figure's unit.
#[derive(Debug, Clone, PartialEq)]
pub struct StatedLimit {
    /// Slug of the figure.
    pub figure: Name,
    /// The value as written, with its unit.
    pub value: f64,
    /// Its unit; [`Unit::One`] for a ratio or percentage.
    pub unit: Unit,
    /// Whether the value is a share of the declared output span: `1 % of span`.
    pub of_span: bool,
    /// Where the value stands.
    pub span: Span,
}

/// Intended gain of a stage.
#[derive(Debug, Clone, PartialEq)]
pub enum Gain {
    /// From the main port.
    Main(f64),
    /// By input: net or signal name, gain.
    ByInput(Vec<(Name, f64)>),
}

/// What is asked of some stages.
#[derive(Debug, Clone, PartialEq)]
pub struct StageBudget {
    /// Stage ids, `*` allowed.
    pub matches: Vec<Name>,
    /// Intended gain, signed.
    pub gain: Option<Gain>,
    /// Limits.
    pub limits: Vec<StatedLimit>,
    /// Positive and negative supply net of an op amp called without supply pins.
    pub supply: Option<(Name, Name)>,
    /// `zero: unused`: the last millivolts at the rail don't matter.
    pub zero_unused: bool,
}

/// A finding that someone answers for.
#[derive(Debug, Clone, PartialEq)]
pub struct Waiver {
    /// Slug of the rule.
    pub rule: Name,
    /// Stage ids or designators, `*` allowed.
    pub matches: Vec<Name>,
    /// Why.
    pub reason: String,
    /// Who signs.
    pub by: String,
    /// Last day it holds, as `YYYY-MM-DD`.
    pub until: Option<String>,
}
