//! The board composed of its blocks against the nodal analysis of the whole board at once, on random boards
//! with strong and weak op amps.

mod nodal;

mod whole_board {
    mod composed;
    mod law;
    mod random;
    mod sketch;
}
