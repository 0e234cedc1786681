//! What the program carries: profiles, what is assumed, and the core rule pack.

/// Profiles by file, in the order in which they are read.
pub(super) const PROFILES: &[(&str, &str)] = &[
    ("rules/devices/bipolar-audio.yaml", include_str!("../../rules/devices/bipolar-audio.yaml")),
    ("rules/devices/bipolar-general.yaml", include_str!("../../rules/devices/bipolar-general.yaml")),
    ("rules/devices/bipolar-precision.yaml", include_str!("../../rules/devices/bipolar-precision.yaml")),
    (
        "rules/devices/bipolar-single-supply.yaml",
        include_str!("../../rules/devices/bipolar-single-supply.yaml"),
    ),
    ("rules/devices/cmos.yaml", include_str!("../../rules/devices/cmos.yaml")),
    ("rules/devices/fast.yaml", include_str!("../../rules/devices/fast.yaml")),
    ("rules/devices/generic.yaml", include_str!("../../rules/devices/generic.yaml")),
    ("rules/devices/jfet.yaml", include_str!("../../rules/devices/jfet.yaml")),
    ("rules/devices/mos-input.yaml", include_str!("../../rules/devices/mos-input.yaml")),
    ("rules/devices/power.yaml", include_str!("../../rules/devices/power.yaml")),
    ("rules/devices/zero-drift.yaml", include_str!("../../rules/devices/zero-drift.yaml")),
];

/// What is assumed where nothing is declared.
pub(super) const ASSUMED: (&str, &str) =
    ("rules/devices/assumed.yaml", include_str!("../../rules/devices/assumed.yaml"));

/// Rule packs, the first one the core.
pub(super) const PACKS: &[(&str, &str)] = &[("rules/core.yaml", include_str!("../../rules/core.yaml"))];
