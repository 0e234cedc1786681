//! Blocks as equations: stamps, the twin, solutions and sensitivities, and the board composed of them.
//! Plain numbers live only here and in what is built on it.
//!
//! Unknowns are the voltages of a block's own nets and outputs, and the currents of branches without
//! resistance. A net gives the sum of the currents that leave it; an output gives the row
//! `a (Vo + Ro I) - (Vp - Vn) = e` with a = 1/A, I the current that leaves the output and e an error in
//! series with the input. With a = 0 and no input conductance the same rows describe the twin: a nullor.

mod board;
mod dense;
mod device;
mod gradient;
mod load;
mod model;
mod network;
mod parameter;
mod shorted;
mod sweep;
mod system;

pub use board::{Board, Primary, PrimaryKind, Row};
pub use device::{Device, Range, Supply};
pub use gradient::Sensitivity;
pub use model::{Fault, Model};
pub use network::{
    AmpStamp, AmpValues, Branch, Drain, Excitation, Feed, LoadStamp, Network, Node, Short, Values,
};
pub use parameter::{Parameter, What, along, point, regenerates, values_at};
pub use system::{Singular, Solved, State, Weights};

/// A short list: most blocks have few unknowns, ports and branches, and are solved without the heap.
pub type List<T> = smallvec::SmallVec<[T; 8]>;

/// A number that systems are solved in: real at DC, complex above.
pub trait Scalar: nalgebra::ComplexField<RealField = f64> + Copy {}

impl<T: nalgebra::ComplexField<RealField = f64> + Copy> Scalar for T {}
