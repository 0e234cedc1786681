//! The nodal analysis of a whole board at once, written apart from the crate's own solver: it shares
//! neither its equations, which keep every element's current as an unknown, nor any of its code.

use nalgebra::{DMatrix, DVector, Dyn, LU};

/// A net; 0 is ground.
pub type Net = usize;

/// The linear model of an op amp; infinite values are left out.
#[derive(Debug, Clone, Copy)]
pub struct OpAmp {
    /// Open-loop gain.
    pub gain: f64,
    /// Resistance between the inputs, ohm.
    pub differential: f64,
    /// Resistance from each input to ground, ohm.
    pub common: f64,
    /// Resistance behind the output, ohm.
    pub output: f64,
}

/// An element of a board.
#[derive(Debug, Clone, Copy)]
pub enum Element {
    /// Between two nets, ohm.
    Resistor(Net, Net, f64),
    /// Non-inverting input, inverting input, output. Driven: a voltage in series with the input.
    OpAmp(Net, Net, Net, OpAmp),
    /// Output, control from the third net to the fourth times a gain.
    Gain(Net, Net, Net, f64),
    /// From the first net to the second. Driven: that voltage.
    Source(Net, Net),
    /// Into the first net out of the second. Driven: that current.
    Current(Net, Net),
    /// No current at DC.
    Capacitor(Net, Net),
}

/// A board factored.
pub struct Nodal {
    nets: usize,
    matrix: DMatrix<f64>,
    lu: LU<f64, Dyn, Dyn>,
    scale: Vec<f64>,
    /// Row that each element's drive enters.
    driven: Vec<Option<usize>>,
    currents: Vec<(Net, Net)>,
}

/// Branches of a board: ends, and the element whose equation stands in their row.
fn branches(elements: &[Element]) -> Vec<(Net, Net, Option<f64>, usize)> {
    let mut found = Vec::new();
    for (at, element) in elements.iter().enumerate() {
        match *element {
            Element::Resistor(a, b, ohms) => found.push((a, b, Some(ohms), at)),
            Element::OpAmp(plus, minus, output, model) => {
                let inputs =
                    [(plus, minus, model.differential), (plus, 0, model.common), (minus, 0, model.common)];
                let conduct = inputs.into_iter().filter(|(a, b, ohms)| a != b && ohms.is_finite());
                found.extend(conduct.map(|(a, b, ohms)| (a, b, Some(ohms), at)));
                found.push((output, 0, None, at));
            }
            Element::Gain(output, ..) => found.push((output, 0, None, at)),
            Element::Source(plus, minus) => found.push((plus, minus, None, at)),
            Element::Current(..) | Element::Capacitor(..) => {}
        }
    }
    found
}

impl Nodal {
    /// Factors a board of nets 1 to `nets`.
    pub fn new(nets: usize, elements: &[Element]) -> Nodal {
        let branches = branches(elements);
        let size = nets + branches.len();
        let mut matrix = DMatrix::<f64>::zeros(size, size);
        let mut driven = vec![None; elements.len()];
        for (place, (a, b, ohms, at)) in branches.into_iter().enumerate() {
            let row = nets + place;
            let mut add = |row: usize, net: Net, share: f64| {
                if net != 0 {
                    matrix[(row, net - 1)] += share;
                }
            };
            match (ohms, elements[at]) {
                (None, Element::OpAmp(plus, minus, output, model)) => {
                    add(row, output, 1.0 / model.gain);
                    add(row, plus, -1.0);
                    add(row, minus, 1.0);
                    matrix[(row, row)] += -model.output / model.gain;
                }
                (None, Element::Gain(output, plus, minus, gain)) => {
                    add(row, output, 1.0);
                    add(row, plus, -gain);
                    add(row, minus, gain);
                }
                (ohms, _) => {
                    add(row, a, 1.0);
                    add(row, b, -1.0);
                    matrix[(row, row)] -= ohms.unwrap_or(0.0);
                }
            }
            if ohms.is_none() {
                driven[at] = Some(row);
            }
            // The branch's current leaves `a` and enters `b`; an output's current enters ground.
            for (net, sign) in [(a, 1.0), (b, -1.0)] {
                if net != 0 {
                    matrix[(net - 1, row)] += sign;
                }
            }
        }
        let largest = |row: usize| matrix.row(row).iter().fold(0.0f64, |most, entry| most.max(entry.abs()));
        let scale: Vec<f64> = (0..size).map(|row| 1.0 / largest(row)).collect();
        for (mut row, scale) in matrix.row_iter_mut().zip(&scale) {
            row *= *scale;
        }
        let currents = elements.iter().map(|element| match *element {
            Element::Current(into, from) => (into, from),
            _ => (0, 0),
        });
        let currents = currents.collect();
        Nodal { nets, lu: LU::new(matrix.clone()), matrix, scale, driven, currents }
    }

    /// Voltages of all nets, ground first, with the elements driven as listed: element, value.
    pub fn voltages(&self, drives: &[(usize, f64)]) -> Vec<f64> {
        let mut right = DVector::<f64>::zeros(self.matrix.nrows());
        for (element, value) in drives {
            if let Some(row) = self.driven[*element] {
                right[row] += value;
            }
            let (into, from) = self.currents[*element];
            for (net, sign) in [(into, 1.0), (from, -1.0)] {
                if net != 0 {
                    right[net - 1] += sign * value;
                }
            }
        }
        for (entry, scale) in right.iter_mut().zip(&self.scale) {
            *entry *= scale;
        }
        let unknowns = self.solve(&right);
        std::iter::once(0.0).chain(unknowns.iter().take(self.nets).copied()).collect()
    }

    /// The sign of the determinant, free of overflow.
    pub fn sign(&self) -> f64 {
        let exchanges: f64 = self.lu.p().determinant();
        self.lu.u().diagonal().iter().fold(exchanges, |sign, pivot| sign * pivot.signum())
    }

    /// A solution refined until it stands still: each remainder is summed in twice the precision.
    fn solve(&self, right: &DVector<f64>) -> DVector<f64> {
        let mut unknowns = self.lu.solve(right).expect("a board has a solution");
        for _ in 0..8 {
            let remainder =
                DVector::from_fn(right.len(), |row, _| remainder(&self.matrix, row, &unknowns, right[row]));
            let step = self.lu.solve(&remainder).expect("it had one before");
            unknowns += &step;
            if step.amax() <= 1e-15 * unknowns.amax() {
                break;
            }
        }
        unknowns
    }
}

/// `right - row * unknowns`, with every product and sum kept in two parts.
fn remainder(matrix: &DMatrix<f64>, row: usize, unknowns: &DVector<f64>, right: f64) -> f64 {
    let (mut sum, mut rest) = (right, 0.0);
    for column in (0..matrix.ncols()).filter(|column| matrix[(row, *column)] != 0.0) {
        let (entry, value) = (-matrix[(row, column)], unknowns[column]);
        let product = entry * value;
        let total = sum + product;
        let part = total - sum;
        rest += (sum - (total - part)) + (product - part) + entry.mul_add(value, -product);
        sum = total;
    }
    sum + rest
}
