//! A sound board spoilt at random, with fixed seeds: nothing panics, coverage adds up, the report is JSON.

use crate::bad_input::bench::{adds_up, harmless};
use gainsay::check::{Options, run};
use gainsay::report::{Style, json, text};
use std::time::{Duration, Instant};
use tempfile::TempDir;

const BOARD: &str = "\
pre-amplifier of a hydrophone
* every kind of stage that the road knows
.param g=10 rf={g*1k}
VCC vcc 0 12
VEE 0 vee 12
.subckt half i o
RA i m 10k
XU1 m o vcc vee o TL072
CA m 0 1n
.ends
XU1 in n1 vcc vee o1 OP07C
R1 n1 0 1k
R2 o1 n1 {rf}
XU2 0 n2 vcc vee o2 TL072
R3 o1 n2 10k 1%
+ pwr=0.25
R4 o2 n2 22k
C4 o2 n2 100p
X3 o2 o3 half
XU4 o3 n4 vcc vee o4 TL072
XU5 ref n5 vcc vee o5 TL072
RG n4 n5 2k2
R6 o4 n4 10k
R7 o5 n5 10k
XU6 p6 n6 vcc vee o6 OP07C
R8 o4 n6 10k
R9 o5 p6 10k
R10 o6 n6 10k
R11 p6 0 10k
VREF ref 0 2.5
D1 o6 clamp DX
R12 clamp 0 1k
XU7 o6 thr vcc vee o7 TL072
R13 vcc thr 10k
R14 thr 0 10k
I1 0 n8 SIN(0 1u 1k)
XU8 0 n8 vcc vee o8 OP07C
R15 o8 n8 1Meg
Q1 vcc o8 e8 QX
R16 e8 0 1k
E1 o9 0 o8 0 2
R17 o9 0 4k7
L1 o9 l9 1m
R18 l9 0 100
VIN in 0 SIN(0 0.01 1k)
.model DX D
.tran 1u 1m
.end
";

/// A small generator of numbers (Marsaglia's xorshift with 64 bits), the same everywhere.
struct Random(u64);

impl Random {
    fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound.max(1) as u64) as usize
    }
}

/// One change: of a line, a word or a character.
fn mutate(random: &mut Random, text: &mut String) {
    const BITS: [&str; 18] = [
        "0", "vcc", "=", "{", "}", "(", "+", "-", "1e999", "\"", ";", "*", ".ends", "\n", "\u{b5}", "?",
        "1e-30", "n1",
    ];
    let mut lines: Vec<String> = text.lines().map(str::to_owned).collect();
    if lines.len() < 2 {
        return;
    }
    let (at, other) = (random.below(lines.len()), random.below(lines.len()));
    match random.below(9) {
        0 => drop(lines.remove(at)),
        1 => lines.insert(other, lines[at].clone()),
        2 => lines.swap(at, other),
        3 => {
            let keep = random.below(lines[at].len() + 1);
            lines[at] = lines[at].chars().take(keep).collect();
        }
        4 => {
            let mut letters: Vec<char> = lines[at].chars().collect();
            if !letters.is_empty() {
                let place = random.below(letters.len());
                letters.remove(place);
            }
            lines[at] = letters.into_iter().collect();
        }
        5 => {
            let mut letters: Vec<char> = lines[at].chars().collect();
            let place = random.below(letters.len() + 1);
            letters.splice(place..place, BITS[random.below(BITS.len())].chars());
            lines[at] = letters.into_iter().collect();
        }
        6 | 7 => {
            let mut words: Vec<&str> = lines[at].split(' ').collect();
            let donor: Vec<&str> = lines[other].split(' ').collect();
            let place = random.below(words.len());
            words[place] = match random.below(3) {
                0 => BITS[random.below(BITS.len())],
                _ => donor[random.below(donor.len())],
            };
            lines[at] = words.join(" ");
        }
        _ => lines.truncate(at + 1),
    }
    *text = lines.join("\n");
}

#[test]
fn the_board_to_be_spoilt_is_sound() {
    let (outcome, _) = checked(BOARD);
    let coverage = &outcome["boards"][0]["coverage"];
    assert_eq!(coverage["op_amps"], 8, "{coverage:#}");
    assert_eq!(coverage["skipped"].as_array().map(Vec::len), Some(0), "{coverage:#}");
}

/// Checks a text and asserts what holds of every board; the report and the exit status.
fn checked(netlist: &str) -> (serde_json::Value, u8) {
    let folder = TempDir::new().expect("a temporary folder can be made");
    let path = folder.path().join("board.cir");
    std::fs::write(&path, netlist).expect("the folder can be written to");
    let outcome = run(&Options { paths: vec![path], ..Options::default() });
    let report = serde_json::from_str(&json(&outcome.report, &outcome.sources)).expect("the report is JSON");
    adds_up(&report);
    harmless(&text(&outcome.report, &outcome.sources, Style { colour: false, width: 100, all: true }));
    (report, outcome.status())
}

#[test]
fn spoilt_boards_are_read_counted_and_reported() {
    let start = Instant::now();
    let mut statuses = [0; 3];
    for seed in 1..=300u64 {
        let mut random = Random(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15));
        let mut netlist = BOARD.to_owned();
        (0..=random.below(6)).for_each(|_| mutate(&mut random, &mut netlist));
        let began = Instant::now();
        let (report, status) = checked(&netlist);
        assert!(began.elapsed() < Duration::from_secs(5), "seed {seed}: {:?}\n{netlist}", began.elapsed());
        statuses[usize::from(status)] += 1;
        let boards = report["boards"].as_array().expect("a report has boards");
        assert_eq!(boards.len(), 1, "seed {seed}");
    }
    // The changes are neither too harsh nor too mild.
    assert!(
        statuses.iter().filter(|count| 0 < **count).count() >= 2,
        "{statuses:?} in {:?}",
        start.elapsed()
    );
}

#[test]
fn spoilt_bytes() {
    let folder = TempDir::new().expect("a temporary folder can be made");
    let path = folder.path().join("board.cir");
    let mut random = Random(0x2545_f491_4f6c_dd1d);
    for _ in 0..100 {
        let mut bytes = BOARD.as_bytes().to_vec();
        for _ in 0..=random.below(8) {
            let at = random.below(bytes.len());
            bytes[at] = random.below(256) as u8;
        }
        std::fs::write(&path, &bytes).expect("the folder can be written to");
        let outcome = run(&Options { paths: vec![path.clone()], ..Options::default() });
        let report =
            serde_json::from_str(&json(&outcome.report, &outcome.sources)).expect("the report is JSON");
        adds_up(&report);
        assert!(outcome.status() <= 2);
    }
}
