//! The law itself.

use super::composed::{Comparison, Difference, compare};
use super::random::{Dice, Grower};
use super::sketch::Sketch;

#[test]
fn probe() {
    let mut skipped = 0;
    for seed in 0..600u64 {
        let only: Option<u64> = std::env::var("SEED").ok().and_then(|s| s.parse().ok());
        if only.is_some_and(|o| o != seed) { continue; }
        let sketch = Grower::new(Dice(seed).between(1.0, 1e18) as u64).board();
        if only.is_some() { println!("{}", sketch.netlist()); for e in &sketch.elements { if let crate::nodal::Element::OpAmp(..) = e { println!("{e:?}"); } } }
        let c: Comparison = compare(&sketch);
        if !c.faults.is_empty() { skipped += 1; println!("{seed} {:?}", c.faults); continue; }
        if only.is_some() { println!("{c:?}"); }
        let worst = |l: &[Difference]| l.iter().cloned().max_by(|a, b| a.share.total_cmp(&b.share));
        let (o, i) = (worst(&c.outputs), worst(&c.inner));
        let big = |d: &Option<Difference>| d.as_ref().is_some_and(|d| !(d.share <= 1e-8));
        if big(&o) || big(&i) { println!("{seed} {o:?} {i:?} {}", sketch.elements.len()); }
    }
    println!("skipped {skipped}");
}
