//! What op amps add of themselves: bias currents, offsets, and what moves them.

use crate::block::Role;
use crate::circuit::NetId;
use crate::device::{Key, Rank, Technology};
use crate::figure::linear::Effect;
use crate::figure::stage::Stage;
use crate::figure::study::Axis;
use crate::figure::{Item, Quality};
use crate::solve::{Excitation, Solved};
use smallvec::smallvec;

/// An extra value with its range, its typical magnitude and its name.
#[derive(Debug, Clone)]
pub(super) struct Extra {
    pub effect: Effect,
    pub axis: Axis,
    pub item: Item,
}

impl Extra {
    /// A value of either sign: `most` at the worst, `typical` usually.
    pub(super) fn symmetric(effect: Effect, item: Item, typical: f64, most: f64, rank: Rank) -> Extra {
        let axis = Axis { base: 0.0, nominal: 0.0, typical, low: -most, high: most, rank };
        Extra { effect, axis, item }
    }
}

/// Every ten kelvin above 25 degC the bias current of a field-effect input doubles (common practice).
const DOUBLING: f64 = 10.0;

impl Stage<'_> {
    /// Bias currents of every op amp with an input on the block's network: the mean flows into both
    /// pins, half the offset current into one and out of the other. Where a profile gives no offset
    /// current each pin has its own current up to the bias current.
    ///
    /// # Errors
    /// The parameter that is missing, in words.
    pub(super) fn bias_currents(&self) -> Result<Vec<Extra>, String> {
        let model = self.model();
        let mut extras = Vec::new();
        for (amp, op_amp) in model.op_amps.iter().enumerate() {
            let Some(op_amp) = *op_amp else { continue };
            let stage = Stage { op_amp, ..*self };
            let bias =
                stage.input_current(Key::BiasCurrent).ok_or_else(|| stage.missing(Key::BiasCurrent))?;
            let stamp = model.network.amps[amp];
            let into = |plus: f64, minus: f64| Effect {
                injections: smallvec![(stamp.plus, -plus), (stamp.minus, -minus)],
                ..Effect::default()
            };
            match stage.input_current(Key::OffsetCurrent) {
                Some(offset) => {
                    let item = Item::OpAmp(op_amp, Quality::BiasCurrent);
                    extras.push(Extra::symmetric(into(1.0, 1.0), item, bias.0, bias.1, bias.2));
                    let item = Item::OpAmp(op_amp, Quality::OffsetCurrent);
                    extras.push(Extra::symmetric(into(0.5, -0.5), item, offset.0, offset.1, offset.2));
                }
                None => {
                    let plus = Item::OpAmp(op_amp, Quality::BiasPlus);
                    let minus = Item::OpAmp(op_amp, Quality::BiasMinus);
                    extras.push(Extra::symmetric(into(1.0, 0.0), plus, bias.0, bias.1, bias.2));
                    extras.push(Extra::symmetric(into(0.0, 1.0), minus, bias.0, bias.1, bias.2));
                }
            }
        }
        Ok(extras)
    }

    /// Typical and greatest current with its rank; a field-effect input's grows with temperature unless
    /// the limit covers it.
    fn input_current(&self, key: Key) -> Option<(f64, f64, Rank)> {
        let found = self.spread(key, 0.0)?;
        let above = (self.board.circuit.temperature.1 - 25.0).max(0.0);
        let field_effect = matches!(self.part().technology, Some(Technology::Jfet | Technology::Cmos));
        let growth = if field_effect { (above / DOUBLING).exp2() } else { 1.0 };
        let most = if found.covered { found.high } else { found.high * growth };
        Some(((found.nominal * growth).min(most), most, found.rank))
    }

    pub(super) fn missing(&self, key: Key) -> String {
        format!("the profile of {} gives no {}", self.part().name, key.name())
    }

    /// Offsets of every op amp of the block: offset voltage, its drift to the farther end of the ambient
    /// range, the resting common mode over CMRR, and the deviation of the rails over PSRR.
    ///
    /// # Errors
    /// What is missing, in words.
    pub(super) fn offsets(&self, rest: &Excitation<f64>) -> Result<Vec<Extra>, String> {
        let model = self.model();
        let solved = Solved::new(&model.network, model.nominal.clone());
        let state = solved.map_err(|_| "its equations have no solution".to_owned())?.forward(rest);
        let mut extras = Vec::new();
        for (member, op_amp) in model.op_amps[..model.network.members].iter().enumerate() {
            let Some(op_amp) = *op_amp else { continue };
            let stage = Stage { op_amp, ..*self };
            let stamp = model.network.amps[member];
            let common = (state.volts(stamp.plus) + state.volts(stamp.minus)) / 2.0;
            stage.offsets_of(member, common, &mut extras)?;
        }
        Ok(extras)
    }

    fn offsets_of(&self, member: usize, common: f64, extras: &mut Vec<Extra>) -> Result<(), String> {
        let series = |volts: f64| Effect { errors: smallvec![(member, volts)], ..Effect::default() };
        let item = |what| Item::OpAmp(self.op_amp, what);
        let offset = self.spread(Key::OffsetVoltage, 0.0).ok_or_else(|| self.missing(Key::OffsetVoltage))?;
        let most = offset.high.abs();
        extras.push(Extra::symmetric(
            series(1.0),
            item(Quality::OffsetVoltage),
            offset.nominal,
            most,
            offset.rank,
        ));
        let (low, high) = self.board.circuit.temperature;
        let away = (25.0 - low).max(high - 25.0).max(0.0);
        if 0.0 < away && !offset.covered {
            let drift = self.spread(Key::OffsetDrift, 0.0).ok_or_else(|| self.missing(Key::OffsetDrift))?;
            let effect = series(away);
            extras.push(Extra::symmetric(
                effect,
                item(Quality::OffsetDrift),
                drift.nominal,
                drift.high,
                drift.rank,
            ));
        }
        let Some(supply) = self.device().supply else {
            return Err(format!("the supplies of {} are not known", self.part().name));
        };
        let away = common - (supply.positive + supply.negative) / 2.0;
        if away != 0.0 {
            let key = Key::CommonModeRejection;
            let rejection = self.spread(key, 0.0).ok_or_else(|| self.missing(key))?;
            let rank = rejection.rank.max(supply.rank);
            let (usual, least) = (from_decibel(rejection.nominal), from_decibel(rejection.low));
            extras.push(Extra::symmetric(
                series(away),
                item(Quality::CommonModeRejection),
                1.0 / usual,
                1.0 / least,
                rank,
            ));
        }
        let deviation = supply.deviation.0 + supply.deviation.1;
        if 0.0 < deviation {
            let key = Key::SupplyRejection;
            let rejection = self.spread(key, 0.0).ok_or_else(|| self.missing(key))?;
            let rank = rejection.rank.max(supply.deviation_rank);
            let (usual, least) = (from_decibel(rejection.nominal), from_decibel(rejection.low));
            extras.push(Extra::symmetric(
                series(deviation),
                item(Quality::SupplyRejection),
                1.0 / usual,
                1.0 / least,
                rank,
            ));
        }
        Ok(())
    }

    /// What rails do: each moves the ports it feeds, and `direct` of it the quantity itself where it is
    /// the net given.
    pub(super) fn rail_extras(&self, own: Option<(NetId, f64)>) -> Vec<Extra> {
        let board = self.board;
        let own_row = own.and_then(|(net, direct)| Some((board.primary_of(net)?, net, direct)));
        let mut rails = self.rails();
        if let Some((primary, ..)) = own_row
            && !rails.iter().any(|(known, ..)| *known == primary)
        {
            let rail = &board.primaries[primary as usize];
            rails.push((primary, rail.deviation, rail.deviation_rank, Vec::new()));
        }
        let extras = rails.into_iter().filter_map(|(primary, deviation, rank, ports)| {
            let direct = own_row.filter(|(at, ..)| *at == primary).map_or(0.0, |(.., direct)| direct);
            let effect = Effect { ports: ports.into(), direct, ..Effect::default() };
            let item = Item::Rail(board.primaries[primary as usize].net?);
            Some(Extra::symmetric(effect, item, deviation, deviation, rank))
        });
        extras.collect()
    }

    /// What moves the outputs of earlier blocks that feed this one, beyond what signals do.
    pub(super) fn upstream(&self) -> Vec<Extra> {
        let mut extras = Vec::new();
        for (at, port) in self.model().ports.iter().enumerate() {
            let Role::Output(amp) = port.role else { continue };
            let (deviation, rank) = self.deviations[amp.0 as usize];
            if port.input && 0.0 < deviation {
                let effect = Effect { ports: smallvec![(at, 1.0)], ..Effect::default() };
                extras.push(Extra::symmetric(effect, Item::Upstream(port.net), 0.0, deviation, rank));
            }
        }
        extras
    }
}

fn from_decibel(decibel: f64) -> f64 {
    10f64.powf(decibel / 20.0)
}
