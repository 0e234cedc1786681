//! Units: newtypes for what travels between modules, and quantities as people write and read them.
//!
//! Decides what a text means as a number and how a number reads; knows nothing of files.

mod parse;
mod range;
mod show;
mod unit;

pub use parse::{parse, parse_any, parse_gain, parse_one_of, parse_share};
pub use range::{parse_range, parse_range_of, parse_toleranced};
pub use show::{percent, show};

/// Makes a newtype of `f64` that carries its unit.
macro_rules! quantity {
    ($($(#[$doc:meta])* $name:ident, $unit:expr;)*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default)]
        pub struct $name(pub f64);

        impl std::fmt::Display for $name {
            fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
                f.write_str(&show(self.0, $unit))
            }
        }
    )*};
}

quantity! {
    /// Volt.
    Volts, Unit::Volt;
    /// Ampere.
    Amps, Unit::Ampere;
    /// Ohm.
    Ohms, Unit::Ohm;
    /// Farad.
    Farads, Unit::Farad;
    /// Henry.
    Henries, Unit::Henry;
    /// Hertz.
    Hertz, Unit::Hertz;
    /// Degree Celsius.
    Celsius, Unit::Celsius;
}

/// What a number measures; values are always held in the unit named here, without prefix.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Unit {
    /// A bare ratio.
    One,
    /// V.
    Volt,
    /// A.
    Ampere,
    /// ohm.
    Ohm,
    /// F.
    Farad,
    /// H.
    Henry,
    /// Hz.
    Hertz,
    /// s.
    Second,
    /// W.
    Watt,
    /// degC.
    Celsius,
    /// dB.
    Decibel,
    /// Degree of angle.
    Degree,
    /// V/s.
    VoltPerSecond,
    /// V/K.
    VoltPerKelvin,
    /// A/K.
    AmperePerKelvin,
    /// 1/K.
    PerKelvin,
    /// V/rtHz.
    VoltPerRootHertz,
    /// A/rtHz.
    AmperePerRootHertz,
}

/// Why a text isn't the quantity that was expected; also used for any other word that doesn't fit.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{message}")]
pub struct QuantityFault {
    /// What was expected and what was found.
    pub message: String,
    /// What to write instead, where that is known.
    pub help: Option<String>,
}

impl QuantityFault {
    /// A fault without advice.
    pub fn new(message: impl Into<String>) -> Self {
        QuantityFault { message: message.into(), help: None }
    }

    /// The same fault with advice.
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}
