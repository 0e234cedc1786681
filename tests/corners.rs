//! Worst cases against every corner of the parameters, each solved by itself; and ledgers that add up.

#[expect(dead_code, reason = "the stages here have no controlled sources and no capacitors")]
mod nodal;
mod support;

mod corners {
    mod brute;
    mod law;
    mod part;
    mod stage;
}
