//! Figures of every topology against forms worked out on paper: one function a topology, the form beside it.
//!
//! With input resistances infinite and the output resistance nought, a stage of one op amp obeys
//! `Vo = K (Vp - Vn0 + e)` with `K = 1 / (beta + 1/A)`: beta is the share of the output that comes back to the
//! inverting input, Vn0 that input's voltage with the output at 0, and e an error in series with the input.

mod support;

mod closed_forms {
    pub mod form;
    mod one_input;
    mod pair;
    mod several_inputs;
}
