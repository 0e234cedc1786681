//! Laws that hold for every board: what a change of the netlist must leave alone, or scale by a known factor.

mod support;

mod laws {
    mod board;
    mod limit;
    mod same;
    mod snapshot;
}
