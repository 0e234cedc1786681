//! Figures worked by hand: the textbook formula with the values put in, for a pocket calculator.
//!
//! A formula stands only where it gives what the nodal solution gives, within a hundredth of the number
//! or as its sentence says; elsewhere the solution speaks alone.

use crate::block::Topology;
use crate::circuit::{ElementId, ElementKind, NetId};
use crate::figure::ledger::Item;
use crate::figure::stage::{Review, Stage};
use crate::figure::{Figure, Kind, Quality};
use crate::quantity::{Unit, percent, show};
use crate::solve::Solved;

/// How near a formula must come to the solution.
const NEAR: f64 = 0.01;

impl Stage<'_> {
    /// The ideal transfer from the main port by its textbook formula, where the network is that simple.
    pub fn worked_transfer(&self, review: &Review, topology: Topology) -> Option<String> {
        let ideal = review.transfers.get(review.main?)?.ideal;
        let part = self.part();
        let feedback = self.between(part.output, part.inverting);
        let (formula, value) = match (topology, feedback) {
            (Topology::Follower, _) => ("1 (all of the output is fed back)".to_owned(), 1.0),
            (Topology::NonInverting, Some(rf)) => {
                let rg = self.grounded(part.inverting)?;
                (format!("1 + {}/{} = 1 + {} / {}", rf.0, rg.0, ohms(rf.1), ohms(rg.1)), 1.0 + rf.1 / rg.1)
            }
            (Topology::Inverting | Topology::Summing | Topology::Difference, Some(rf)) => {
                let input = review.transfers.get(review.main?)?.input.name.clone();
                let net =
                    self.board.circuit.net_ids().find(|net| self.board.circuit.net(*net).name == input)?;
                let rin = self.between(net, part.inverting)?;
                (format!("-{}/{} = -{} / {}", rf.0, rin.0, ohms(rf.1), ohms(rin.1)), -rf.1 / rin.1)
            }
            (Topology::Transimpedance, Some(rf)) => (format!("-{} = -{}", rf.0, ohms(rf.1)), -rf.1),
            _ => return None,
        };
        ((value - ideal).abs() <= 1e-9 * ideal.abs())
            .then(|| format!("{formula} = {}", show(value, Unit::One)))
    }

    /// A figure's formula with its nominal values put in.
    pub fn worked(&self, review: &Review, figure: &Figure) -> Option<String> {
        let Some(nominal) = figure.nominal else { return self.worked_resistances(review, figure) };
        let of = |quality: Quality| {
            let own = |line: &&crate::figure::Line| line.item == Item::OpAmp(self.op_amp, quality);
            figure.ledger.iter().find(own).and_then(|line| line.value).map(|(nominal, ..)| nominal)
        };
        let near = |value: f64| (value - nominal).abs() <= NEAR * nominal.abs();
        match figure.kind {
            Kind::GainError => {
                let (noise_gain, gain) = (self.noise_gain()?, of(Quality::OpenLoopGain)?);
                let value = -noise_gain / gain;
                near(value).then(|| {
                    format!(
                        "-NG / A = -{} / {} = {}",
                        show(noise_gain, Unit::One),
                        show(gain, Unit::One),
                        percent(value)
                    )
                })
            }
            Kind::LoopGain => {
                let (noise_gain, gain) = (self.noise_gain()?, of(Quality::OpenLoopGain)?);
                let value = gain / noise_gain;
                near(value).then(|| {
                    format!(
                        "A / NG = {} / {} = {}",
                        show(gain, Unit::One),
                        show(noise_gain, Unit::One),
                        show(value, Unit::One)
                    )
                })
            }
            Kind::FeedbackLoading | Kind::OutputCurrent => {
                let rated = of(Quality::RatedCurrent).or_else(|| self.rated_current())?;
                let current = nominal * rated;
                Some(format!(
                    "I / Irated = {} / {} = {}",
                    show(current, Unit::Ampere),
                    show(rated, Unit::Ampere),
                    percent(nominal)
                ))
            }
            Kind::BiasError => {
                let (plus, minus) = self.transresistances()?;
                let (sum, difference) = ((plus + minus).abs(), (plus - minus).abs());
                let bias = of(Quality::BiasCurrent).or_else(|| self.typical(Quality::BiasCurrent))?;
                let offset = of(Quality::OffsetCurrent).or_else(|| self.typical(Quality::OffsetCurrent))?;
                let value = bias * sum + offset / 2.0 * difference;
                near(value).then(|| {
                    format!(
                        "|Ib| |Zp + Zn| + |Ios|/2 |Zp - Zn| = {} x {} + {} x {} = {}",
                        show(bias, Unit::Ampere),
                        show(sum, Unit::Ohm),
                        show(offset / 2.0, Unit::Ampere),
                        show(difference, Unit::Ohm),
                        show(value, Unit::Volt),
                    )
                })
            }
            Kind::OffsetError => self.worked_offset(figure, nominal),
            Kind::OutputHeadroom => self.worked_headroom(review, figure, nominal),
            _ => self.worked_resistances(review, figure),
        }
    }

    /// Resistances, loads, rejection and dissipation: sums and ratios of a stage's own resistors.
    fn worked_resistances(&self, review: &Review, figure: &Figure) -> Option<String> {
        let part = self.part();
        let nominal = figure.nominal.or(figure.worst)?;
        let near = |value: f64| (value - nominal).abs() <= NEAR * nominal.abs();
        let feedback = || self.between(part.output, part.inverting);
        let other = |kind: Kind| {
            review.figures.iter().find(|figure| figure.kind == kind).and_then(|figure| figure.nominal)
        };
        match figure.kind {
            Kind::FeedbackResistance => {
                // Of the twin: what is left out shows in full.
                let exact = |value: f64| (value - nominal).abs() <= 1e-6 * nominal.abs();
                let (name, rf) = feedback()?;
                if exact(rf) {
                    return Some(format!("{name} = {}", ohms(rf)));
                }
                let (leg, rg) = self.grounded(part.inverting)?;
                exact(rf + rg)
                    .then(|| format!("{name} + {leg} = {} + {} = {}", ohms(rf), ohms(rg), ohms(rf + rg)))
            }
            Kind::OutputResistance => {
                let (own, loop_gain) = (self.typical(Quality::OutputResistance)?, other(Kind::LoopGain)?);
                let value = own / (1.0 + loop_gain);
                near(value).then(|| {
                    format!(
                        "Ro / (1 + T) = {} / (1 + {}) = {}",
                        ohms(own),
                        show(loop_gain, Unit::One),
                        ohms(value)
                    )
                })
            }
            Kind::InputResistance => {
                let differential = self.typical(Quality::InputResistance)? * (1.0 + other(Kind::LoopGain)?);
                let common = self.typical(Quality::CommonModeResistance).unwrap_or(f64::INFINITY);
                let value = 1.0 / (1.0 / differential + 1.0 / common);
                near(value).then(|| {
                    format!(
                        "Rid (1 + T) in parallel with Rcm = {} || {} = {}",
                        ohms(differential),
                        ohms(common),
                        ohms(value)
                    )
                })
            }
            Kind::SourceLoading => {
                let input = other(Kind::InputResistance)?;
                let source =
                    self.model().ports.iter().enumerate().find_map(|(at, _)| self.series_resistance(at))?;
                let value = source / (source + input);
                near(value).then(|| {
                    format!(
                        "Rs / (Rs + Rin) = {} / ({} + {}) = {}",
                        ohms(source),
                        ohms(source),
                        ohms(input),
                        percent(value)
                    )
                })
            }
            Kind::GainSpread => {
                let terms: Vec<f64> = figure.ledger.iter().map(|line| line.effect).collect();
                let sum: f64 = terms.iter().sum();
                let words: Vec<String> = terms.iter().take(6).map(|effect| percent(*effect)).collect();
                let more = if 6 < terms.len() { " + ..." } else { "" };
                near(sum).then(|| {
                    format!("sum of tolerance x sensitivity = {}{more} = {}", words.join(" + "), percent(sum))
                })
            }
            Kind::Rejection => {
                // To first order each resistor adds its tolerance over one plus the gain.
                let sum: f64 = figure
                    .ledger
                    .iter()
                    .filter(|line| line.item != Item::Nominal)
                    .map(|line| line.effect.abs())
                    .sum();
                let value = -20.0 * sum.log10();
                let worst = figure.worst?;
                ((value - worst).abs() < 0.1).then(|| {
                    format!(
                        "worst: -20 log10 of the sum of the ledger = -20 log10({}) = {}",
                        show(sum, Unit::One),
                        show(value, Unit::Decibel)
                    )
                })
            }
            Kind::InputHeadroom => self.worked_input_headroom(review, figure, nominal),
            _ => None,
        }
    }

    fn worked_input_headroom(&self, review: &Review, figure: &Figure, nominal: f64) -> Option<String> {
        let supply = self.device().supply?;
        let (quality, distance) = figure.ledger.iter().find_map(|line| match line.item {
            Item::OpAmp(at, quality @ (Quality::InputBelowPositive | Quality::InputAboveNegative))
                if at == self.op_amp =>
            {
                Some((quality, line.value?.0))
            }
            _ => None,
        })?;
        let volts = |value: f64| show(value, Unit::Volt);
        let pins = review.pins.iter().flat_map(|pins| [pins.plus, pins.minus]);
        pins.map(|pin| match quality {
            Quality::InputBelowPositive => {
                let value = supply.positive - distance - pin;
                (
                    value,
                    format!(
                        "V+ - range - Vin = {} - {} - ({})",
                        volts(supply.positive),
                        volts(distance),
                        volts(pin)
                    ),
                )
            }
            _ => {
                let value = pin - supply.negative - distance;
                (
                    value,
                    format!(
                        "Vin - (V- + range) = {} - ({} + {})",
                        volts(pin),
                        volts(supply.negative),
                        volts(distance)
                    ),
                )
            }
        })
        .min_by(|(a, _), (b, _)| (a - nominal).abs().total_cmp(&(b - nominal).abs()))
        .filter(|(value, _)| (value - nominal).abs() <= NEAR * nominal.abs().max(0.01))
        .map(|(value, text)| format!("{text} = {}", volts(value)))
    }

    fn worked_offset(&self, figure: &Figure, nominal: f64) -> Option<String> {
        let noise_gain = self.noise_gain()?;
        let supply = self.device().supply?;
        let deviation = supply.deviation.0 + supply.deviation.1;
        let mut terms: Vec<(f64, String)> = Vec::new();
        for line in &figure.ledger {
            let Item::OpAmp(at, quality) = line.item else { continue };
            let (typical, ..) = line.value?;
            if at != self.op_amp {
                return None;
            }
            let (low, high) = self.board.circuit.temperature;
            let volts = match quality {
                Quality::OffsetVoltage => typical,
                Quality::OffsetDrift => typical * (25.0 - low).max(high - 25.0),
                Quality::SupplyRejection => deviation / 10f64.powf(typical / 20.0),
                _ => continue,
            };
            terms.push((volts, format!("{} of {}", show(volts, Unit::Volt), quality.label())));
        }
        let sum: f64 = terms.iter().map(|(volts, _)| volts).sum();
        let rest = nominal / noise_gain - sum;
        if NEAR * sum < rest.abs() {
            terms.push((rest, format!("{} of common-mode rejection", show(rest, Unit::Volt))));
        }
        let words: Vec<String> = terms.into_iter().map(|(_, words)| words).collect();
        Some(format!(
            "NG x sum = {} x ({}) = {}",
            show(noise_gain, Unit::One),
            words.join(" + "),
            show(nominal, Unit::Volt)
        ))
    }

    fn worked_headroom(&self, review: &Review, figure: &Figure, nominal: f64) -> Option<String> {
        let supply = self.device().supply?;
        let kept = figure.ledger.iter().find_map(|line| match line.item {
            Item::OpAmp(at, quality @ (Quality::SwingBelowPositive | Quality::SwingAboveNegative))
                if at == self.op_amp =>
            {
                Some((quality, line.value?.0))
            }
            _ => None,
        })?;
        let out = |high: bool| review.pins.iter().find(|pins| pins.high == high).map(|pins| pins.out);
        let (text, value) = match kept {
            (Quality::SwingBelowPositive, distance) => {
                let out = out(true)?;
                let text = format!(
                    "V+ - swing - Vout = {} - {} - ({})",
                    show(supply.positive, Unit::Volt),
                    show(distance, Unit::Volt),
                    show(out, Unit::Volt)
                );
                (text, supply.positive - distance - out)
            }
            (_, distance) => {
                let out = out(false)?;
                let text = format!(
                    "Vout - (V- + swing) = {} - ({} + {})",
                    show(out, Unit::Volt),
                    show(supply.negative, Unit::Volt),
                    show(distance, Unit::Volt)
                );
                (text, out - supply.negative - distance)
            }
        };
        ((value - nominal).abs() <= NEAR * nominal.abs().max(0.01))
            .then(|| format!("{text} = {}", show(value, Unit::Volt)))
    }

    /// The twin's gain from a voltage in series with the op amp's input.
    fn noise_gain(&self) -> Option<f64> {
        let twin = self.twin(&self.model().nominal)?;
        Some(twin.adjoint(&[(self.output(), 1.0)]).error[self.member].abs())
    }

    /// Transresistances from a current into each pin to the output, with the real op amp.
    fn transresistances(&self) -> Option<(f64, f64)> {
        let model = self.model();
        let solved = Solved::new(&model.network, model.nominal.clone()).ok()?;
        let weights = solved.adjoint(&[(self.output(), 1.0)]);
        let (plus, minus) = self.inputs();
        Some((-weights.current(plus), -weights.current(minus)))
    }

    fn typical(&self, quality: Quality) -> Option<f64> {
        self.spread(quality.key(), 0.0).map(|spread| spread.nominal)
    }

    /// The one resistor between two nets, with its value.
    fn between(&self, a: NetId, b: NetId) -> Option<(String, f64)> {
        self.resistor_at(b, |other| other == a)
    }

    fn grounded(&self, net: NetId) -> Option<(String, f64)> {
        self.resistor_at(net, |other| self.board.circuit.net(other).ground)
    }

    fn resistor_at(&self, net: NetId, to: impl Fn(NetId) -> bool) -> Option<(String, f64)> {
        let circuit = self.board.circuit;
        let mut found = circuit.pins(net).filter_map(|(id, pin): (ElementId, usize)| {
            let element = circuit.element(id);
            let ElementKind::Resistor(part) = element.kind else { return None };
            let other = *element.nets.get(1 - pin.min(1))?;
            to(other).then_some((element.name.clone(), part.value?))
        });
        let first = found.next();
        if found.next().is_some() { None } else { first }
    }
}

fn ohms(value: f64) -> String {
    show(value, Unit::Ohm)
}
