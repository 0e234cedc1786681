//! Nodes joined by branches without resistance: loops of voltage sources and inductors have no single solution.

use crate::solve::{Node, Short};

/// Sums of source voltages agree within this, in volt.
const ROUNDING: f64 = 1e-9;

/// What one more short does.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Joined {
    /// It joins what was apart.
    New,
    /// The others give the same voltage between its ends already.
    Same,
    /// The others give another voltage, or both ends are held from outside.
    Contradiction,
}

/// Sets of nodes joined by shorts, each node with its voltage above that of its set.
#[derive(Debug, Default)]
pub(super) struct Shorted {
    sets: Vec<Vec<(Node, f64)>>,
}

impl Shorted {
    /// Joins the ends of a short.
    pub(super) fn join(&mut self, short: Short) -> Joined {
        let ((a, above_a), (b, above_b)) = (self.set(short.a), self.set(short.b));
        let step = above_b + short.volts - above_a;
        if a == b {
            return if step.abs() <= ROUNDING { Joined::Same } else { Joined::Contradiction };
        }
        let held = |set: &Vec<(Node, f64)>| set.iter().any(|(node, _)| !matches!(node, Node::Unknown(_)));
        if held(&self.sets[a]) && held(&self.sets[b]) {
            return Joined::Contradiction;
        }
        let moved = std::mem::take(&mut self.sets[a]);
        self.sets[b].extend(moved.into_iter().map(|(node, volts)| (node, volts + step)));
        Joined::New
    }

    /// The set of a node and its voltage in it.
    fn set(&mut self, node: Node) -> (usize, f64) {
        let found = self.sets.iter().enumerate().find_map(|(at, set)| {
            set.iter().find(|(member, _)| *member == node).map(|(_, volts)| (at, *volts))
        });
        found.unwrap_or_else(|| {
            self.sets.push(vec![(node, 0.0)]);
            (self.sets.len() - 1, 0.0)
        })
    }
}

#[cfg(test)]
mod tests {
    use super::{Joined, Shorted};
    use crate::solve::{Node, Short};

    #[test]
    fn loops_are_told_by_their_voltages() {
        let node = Node::Unknown;
        let mut shorted = Shorted::default();
        let mut join = |a, b, volts| shorted.join(Short { a, b, volts });
        assert_eq!(join(node(0), node(1), 1.0), Joined::New);
        assert_eq!(join(node(2), node(1), 3.0), Joined::New);
        assert_eq!(join(node(2), node(0), 2.0), Joined::Same);
        assert_eq!(join(node(0), node(2), 2.0), Joined::Contradiction);
        assert_eq!(join(node(0), Node::Ground, 1.0), Joined::New);
        assert_eq!(join(node(1), Node::Ground, 0.0), Joined::Same);
        assert_eq!(join(node(1), Node::Port(0), 0.0), Joined::Contradiction);
        assert_eq!(join(node(3), node(3), 0.0), Joined::Same);
    }
}
