//! Bad input from end to end: each fault stands at its place, the rest of the board is still checked, nothing
//! panics, and the exit status says what happened.

mod bad_input {
    mod bench;
    mod budget;
    mod circuit;
    mod file;
    mod hostile;
    mod include;
    mod mutation;
    mod netlist;
    mod nesting;
    mod profile;
    mod value;
}
