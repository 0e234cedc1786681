//! Profiles: a device's datasheet figures, each with unit, conditions and source.

mod catalogue;
mod read;
mod spread;
mod standing;

pub use read::{read_assumed, read_pins, read_profiles, technology};
pub use spread::{Situation, Spread, bounds, spread};
pub use standing::Standing;

use crate::quantity::{Amps, Celsius, Farads, Ohms, Unit, Volts};
use crate::source::Span;

/// How far a value can be trusted, best first.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Rank {
    /// A datasheet's limit or a declared value.
    Guaranteed,
    /// A typical value, derated.
    Typical,
    /// A default, a class bound, a figure from memory, a rail read off a name.
    Assumed,
}

/// The process family that sets what is assumed where a profile says nothing.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Technology {
    /// Bipolar transistors at the input.
    Bipolar,
    /// Junction field-effect transistors at the input.
    Jfet,
    /// MOS transistors at the input.
    Cmos,
}

impl Technology {
    /// Every technology.
    pub const ALL: [Technology; 3] = [Technology::Bipolar, Technology::Jfet, Technology::Cmos];

    /// The word in files and reports.
    pub fn word(self) -> &'static str {
        match self {
            Technology::Bipolar => "bipolar",
            Technology::Jfet => "jfet",
            Technology::Cmos => "cmos",
        }
    }
}

/// What a pin of an op amp does.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Pin {
    /// Non-inverting input.
    NonInverting,
    /// Inverting input.
    Inverting,
    /// Positive supply.
    PositiveSupply,
    /// Negative supply.
    NegativeSupply,
    /// Output.
    Output,
}

impl Pin {
    /// Every pin.
    pub const ALL: [Pin; 5] =
        [Pin::NonInverting, Pin::Inverting, Pin::PositiveSupply, Pin::NegativeSupply, Pin::Output];

    /// The word in files and reports.
    pub fn word(self) -> &'static str {
        match self {
            Pin::NonInverting => "non-inverting",
            Pin::Inverting => "inverting",
            Pin::PositiveSupply => "positive-supply",
            Pin::NegativeSupply => "negative-supply",
            Pin::Output => "output",
        }
    }
}

/// Declares the parameters of a profile: variant, the key in YAML, the unit, the doc.
macro_rules! parameters {
    ($($(#[$doc:meta])* $name:ident, $key:literal, $unit:expr;)*) => {
        /// A parameter of a profile.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum Key { $($(#[$doc])* $name,)* }

        impl Key {
            /// Every parameter, in the order of declaration.
            pub const ALL: &'static [Key] = &[$(Key::$name,)*];

            /// The key in a profile's YAML.
            pub fn name(self) -> &'static str {
                match self { $(Key::$name => $key,)* }
            }

            /// The unit that values are held in.
            pub fn unit(self) -> Unit {
                match self { $(Key::$name => $unit,)* }
            }
        }
    };
}

parameters! {
    /// Open-loop gain at DC, V/V (YAML also takes dB and V/mV).
    OpenLoopGain, "open-loop-gain", Unit::One;
    /// Differential input resistance.
    InputResistance, "input-resistance", Unit::Ohm;
    /// Resistance of each input to ground.
    CommonModeResistance, "common-mode-resistance", Unit::Ohm;
    /// Differential input capacitance.
    InputCapacitance, "input-capacitance", Unit::Farad;
    /// Capacitance of each input to ground.
    CommonModeCapacitance, "common-mode-capacitance", Unit::Farad;
    /// Open-loop output resistance.
    OutputResistance, "output-resistance", Unit::Ohm;
    /// Input bias current, magnitude.
    BiasCurrent, "bias-current", Unit::Ampere;
    /// Input offset current, magnitude.
    OffsetCurrent, "offset-current", Unit::Ampere;
    /// Input offset voltage, magnitude.
    OffsetVoltage, "offset-voltage", Unit::Volt;
    /// Drift of the offset voltage, magnitude.
    OffsetDrift, "offset-drift", Unit::VoltPerKelvin;
    /// Common-mode rejection, dB.
    CommonModeRejection, "common-mode-rejection", Unit::Decibel;
    /// Supply rejection, dB.
    SupplyRejection, "supply-rejection", Unit::Decibel;
    /// Gain-bandwidth product.
    GainBandwidth, "gain-bandwidth", Unit::Hertz;
    /// Second pole of the open-loop gain.
    SecondPole, "second-pole", Unit::Hertz;
    /// Phase margin at unity gain; turned into a second pole where none is given.
    PhaseMargin, "phase-margin", Unit::Degree;
    /// Least noise gain at which the device is stable.
    MinimumStableGain, "minimum-stable-gain", Unit::One;
    /// Slew rate.
    SlewRate, "slew-rate", Unit::VoltPerSecond;
    /// White voltage noise density.
    VoltageNoise, "voltage-noise", Unit::VoltPerRootHertz;
    /// Corner of the voltage noise's 1/f part.
    VoltageNoiseCorner, "voltage-noise-corner", Unit::Hertz;
    /// White current noise density of each input.
    CurrentNoise, "current-noise", Unit::AmperePerRootHertz;
    /// Corner of the current noise's 1/f part.
    CurrentNoiseCorner, "current-noise-corner", Unit::Hertz;
    /// How near the output comes to the positive rail.
    SwingBelowPositive, "swing-below-positive", Unit::Volt;
    /// How near the output comes to the negative rail.
    SwingAboveNegative, "swing-above-negative", Unit::Volt;
    /// How near the inputs may come to the positive rail; negative: beyond it.
    InputBelowPositive, "input-below-positive", Unit::Volt;
    /// How near the inputs may come to the negative rail; negative: beyond it.
    InputAboveNegative, "input-above-negative", Unit::Volt;
    /// Output current at which the swing holds.
    OutputCurrent, "output-current", Unit::Ampere;
    /// Current into a short; never a load rating.
    ShortCircuitCurrent, "short-circuit-current", Unit::Ampere;
    /// Load at which gain and swing are guaranteed.
    RatedLoad, "rated-load", Unit::Ohm;
    /// Recommended total supply, between the two supply pins; `min` and `max`.
    Supply, "supply", Unit::Volt;
    /// Absolute maximum of the total supply; `max`.
    SupplyMaximum, "supply-maximum", Unit::Volt;
    /// Supply current of each section.
    SupplyCurrent, "supply-current", Unit::Ampere;
}

/// Where the load of a condition returns to.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LoadTo {
    /// Ground: the middle of a split supply, the negative rail of a single one.
    Ground,
    /// The middle of the supplies.
    Middle,
    /// The positive rail.
    Positive,
    /// The negative rail.
    Negative,
}

impl LoadTo {
    /// Every end.
    pub const ALL: [LoadTo; 4] = [LoadTo::Ground, LoadTo::Middle, LoadTo::Positive, LoadTo::Negative];

    /// The word in files and reports.
    pub fn word(self) -> &'static str {
        match self {
            LoadTo::Ground => "ground",
            LoadTo::Middle => "middle",
            LoadTo::Positive => "positive",
            LoadTo::Negative => "negative",
        }
    }
}

/// Under what an entry holds; `None` where the document doesn't say.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Conditions {
    /// Load resistance at the output.
    pub load: Option<Ohms>,
    /// Where that load returns to.
    pub load_to: Option<LoadTo>,
    /// Current out of the output.
    pub sourcing: Option<Amps>,
    /// Current into the output.
    pub sinking: Option<Amps>,
    /// Total supply.
    pub supply: Option<Volts>,
    /// Temperature range that a limit covers; both ends equal for one temperature.
    pub temperature: Option<(Celsius, Celsius)>,
}

/// One line of a datasheet: least, typical and greatest value under one condition.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Entry {
    /// Guaranteed least value.
    pub min: Option<f64>,
    /// Typical value.
    pub typ: Option<f64>,
    /// Guaranteed greatest value.
    pub max: Option<f64>,
    /// Under what it holds.
    pub at: Conditions,
    /// Document, revision and table, `memory` or `assumed`; where the entry has none, the profile's.
    pub source: Option<String>,
}

/// One device.
#[derive(Debug, Clone)]
pub struct Profile {
    /// Its name, unique among profiles.
    pub name: String,
    /// Model names that mean it, any case, `*` allowed.
    pub aliases: Vec<String>,
    /// What it is built of.
    pub technology: Technology,
    /// Whether it stands for a class of devices: then all its figures are assumed.
    pub generic: bool,
    /// Op amps in one package.
    pub sections: u32,
    /// Order of the pins of one section's call; empty where the profile gives none.
    pub pins: Vec<Pin>,
    /// Where its figures come from, unless an entry says otherwise.
    pub source: String,
    /// Hints for people: traps, missing compensation pins, and the like.
    pub notes: Vec<String>,
    /// Entries by parameter, in the order of [`Key::ALL`].
    pub entries: Vec<Vec<Entry>>,
    /// Where it is defined.
    pub span: Option<Span>,
}

impl Profile {
    /// The entries of one parameter, possibly none.
    pub fn entries(&self, key: Key) -> &[Entry] {
        self.entries.get(key as usize).map_or(&[], Vec::as_slice)
    }
}

/// How a typical value becomes a worst case where the document prints no limit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Derating {
    /// Worst = typical times this factor.
    Times(f64),
    /// Worst = typical minus this many decibel.
    Minus(f64),
    /// Worst lies between typical times the first and typical times the second; the one that hurts.
    Between(f64, f64),
}

/// What is assumed where profiles say nothing; read from `rules/devices/assumed.yaml`.
#[derive(Debug, Clone, Default)]
pub struct Assumed {
    /// Derating by parameter, in the order of [`Key::ALL`].
    pub derating: Vec<Option<Derating>>,
    /// Bounds where a profile says nothing: the parameter, the technologies it holds for, least and
    /// greatest value. The first that fits counts.
    pub bounds: Vec<(Key, Vec<Technology>, f64, f64)>,
    /// Relative tolerance of resistors.
    pub resistor: f64,
    /// Relative tolerance of capacitors.
    pub capacitor: f64,
    /// Relative deviation of rails.
    pub rail: f64,
    /// Stray capacitance at each input net.
    pub stray: Farads,
}

/// All profiles at hand.
#[derive(Debug, Default)]
pub struct Catalogue {
    /// Profiles; later ones win over earlier ones of the same name or alias.
    pub profiles: Vec<Profile>,
    /// What is assumed where they say nothing.
    pub assumed: Assumed,
}
