//! The law itself.

use super::composed::{Comparison, Difference, compare};
use super::random::{Dice, Grower};
use super::sketch::Sketch;

#[test]
fn probe() {
    let mut skipped = 0;
    for seed in 0..(std::env::var("N").map_or(600u64,|n| n.parse().unwrap())) {
        let only: Option<u64> = std::env::var("SEED").ok().and_then(|s| s.parse().ok());
        if only.is_some_and(|o| o != seed) { continue; }
        let sketch = Grower::new(Dice(seed).between(1.0, 1e18) as u64).board();
        if only.is_some() { println!("{}", sketch.netlist()); for e in &sketch.elements { if let crate::nodal::Element::OpAmp(..) = e { println!("{e:?}"); } } }
        let bad = |s: &Sketch| { let s = Sketch { nets: s.nets, elements: s.elements.clone(), fixed: s.fixed.clone() }; std::panic::catch_unwind(move || { let c = compare(&s); if std::env::var("REG").is_ok() { return !c.faults.is_empty() && c.faults.iter().all(|f| f == "Regenerative"); } c.faults.is_empty() && c.outputs.iter().chain(&c.inner).any(|d| d.share > 1e-8) && c.outputs.iter().all(|d| d.share.is_finite()) }).unwrap_or(false) };
        let mut sketch = sketch;
        if only.is_some() && std::env::var("SHRINK").is_ok() {
            std::panic::set_hook(Box::new(|_| ()));
            loop {
                let mut done = true;
                for at in (0..sketch.elements.len()).rev() {
                    let mut smaller = Sketch { nets: sketch.nets, elements: sketch.elements.clone(), fixed: sketch.fixed.iter().filter(|f| **f != at).map(|f| if *f > at { f - 1 } else { *f }).collect() };
                    smaller.elements.remove(at);
                    // renumber nets that vanish
                    let used = |n: usize| smaller.elements.iter().any(|e| match *e { crate::nodal::Element::Resistor(a,b,_) | crate::nodal::Element::Source(a,b) | crate::nodal::Element::Current(a,b) | crate::nodal::Element::Capacitor(a,b) => a==n||b==n, crate::nodal::Element::OpAmp(a,b,c,_) | crate::nodal::Element::Gain(a,b,c,_) => a==n||b==n||c==n });
                    let gone: Vec<usize> = (1..=smaller.nets).filter(|n| !used(*n)).collect();
                    for n in gone { smaller.elements.push(crate::nodal::Element::Resistor(n, 0, 1.0)); }
                    if bad(&smaller) && smaller.elements.len() < sketch.elements.len() { sketch = smaller; done = false; break; }
                }
                if done { break; }
            }
            let _ = std::panic::take_hook();
            println!("{}", sketch.netlist()); for e in &sketch.elements { if let crate::nodal::Element::OpAmp(..) = e { println!("{e:?}"); } }
        }
        let c: Comparison = compare(&sketch);
        let dead: Vec<_> = sketch.elements.iter().map(|e| match *e { crate::nodal::Element::OpAmp(p, n, o, m) => crate::nodal::Element::OpAmp(p, n, o, crate::nodal::OpAmp { gain: 1e-12, ..m }), e => e }).collect();
        let sign = |e: &[crate::nodal::Element]| crate::nodal::Nodal::new(sketch.nets, e).sign();
        let reg = sign(&sketch.elements) != sign(&dead);
        if reg != !c.faults.is_empty() { println!("SIGN {seed} {reg} {:?}", c.faults); }
        if !c.faults.is_empty() { skipped += 1; println!("{seed} {:?}", c.faults); continue; }
        if only.is_some() { println!("{c:?}"); }
        let worst = |l: &[Difference]| l.iter().cloned().max_by(|a, b| a.share.total_cmp(&b.share));
        let (o, i) = (worst(&c.outputs), worst(&c.inner));
        let big = |d: &Option<Difference>| d.as_ref().is_some_and(|d| !(d.share <= 1e-8));
        if big(&o) || big(&i) { println!("{seed} {o:?} {i:?} {}", sketch.elements.len()); }
    }
    println!("skipped {skipped}");
}
