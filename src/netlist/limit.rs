//! How much of a text is read at most; text from outside must not exhaust time or memory.
//!
//! Reaching a limit is a diagnostic that names it. Each is far above what real boards need.

/// Bytes of one file.
pub const FILE_BYTES: usize = 64 << 20;
/// Bytes of all files together, a file that is included twice counted twice.
pub const TOTAL_BYTES: usize = 256 << 20;
/// Bytes of one logical line, continuations and the comments between them included.
pub const LINE_BYTES: usize = 1 << 20;
/// Bytes of the name of an element, net, model, parameter or subcircuit.
pub const NAME_BYTES: usize = 512;
/// Elements, models, parameters and definitions of one run.
pub const STATEMENTS: usize = 2_000_000;
/// Include lines that are followed.
pub const INCLUDES: usize = 256;
/// Files that include one another.
pub const INCLUDE_DEPTH: usize = 16;
/// Definitions inside one another.
pub const SUBCIRCUIT_DEPTH: usize = 32;
/// Nesting of an expression: parentheses, calls, signs and powers.
pub const EXPRESSION_DEPTH: usize = 64;
/// Bytes of one expression.
pub const EXPRESSION_BYTES: usize = 16 << 10;
/// Nets that a behavioural source is taken to sense.
pub const SENSED_NETS: usize = 64;
/// Diagnostics of one run.
pub const DIAGNOSTICS: usize = 1_000;
