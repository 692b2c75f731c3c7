//! Arithmetic written down once: exact values, derivatives and draws all follow from the same steps.
//!
//! What a solution contains is a small expression of what was stated: masses, purities, molar masses, volumes. Written as steps on variables, it
//! can be evaluated exactly (double-double), evaluated fast for thousands of draws, and differentiated backwards in one pass.

use crate::equilibrium::Total;

/// A value on the tape.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Node(usize);

/// A variable of the tape.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct VariableIndex(usize);

impl VariableIndex {
    /// Its place among the variables.
    pub(super) fn place(self) -> usize {
        self.0
    }
}

#[derive(Clone, Copy, Debug)]
enum Step {
    Constant(Total),
    Variable(usize),
    Add(Node, Node),
    Multiply(Node, Node),
    Divide(Node, Node),
}

/// The steps in the order in which they are worked.
#[derive(Clone, Debug, Default)]
pub(super) struct Tape {
    steps: Vec<Step>,
    variables: usize,
}

impl Tape {
    /// A constant, exact.
    pub(super) fn constant(&mut self, value: Total) -> Node {
        self.push(Step::Constant(value))
    }

    /// A new variable and its node.
    pub(super) fn variable(&mut self) -> (VariableIndex, Node) {
        let index = self.variables;
        self.variables += 1;
        (VariableIndex(index), self.push(Step::Variable(index)))
    }

    /// The variable at a place, as counted from 0.
    pub(super) fn index_of(&self, place: usize) -> VariableIndex {
        VariableIndex(place.min(self.variables))
    }

    /// a + b.
    pub(super) fn add(&mut self, a: Node, b: Node) -> Node {
        self.push(Step::Add(a, b))
    }

    /// a b.
    pub(super) fn multiply(&mut self, a: Node, b: Node) -> Node {
        self.push(Step::Multiply(a, b))
    }

    /// a / b.
    pub(super) fn divide(&mut self, a: Node, b: Node) -> Node {
        self.push(Step::Divide(a, b))
    }

    /// The sum of terms; zero where there are none.
    pub(super) fn sum(&mut self, terms: &[Node]) -> Node {
        let mut terms = terms.iter().copied();
        let Some(mut sum) = terms.next() else {
            return self.constant(Total::ZERO);
        };
        for term in terms {
            sum = self.add(sum, term);
        }
        sum
    }

    /// A node times a whole number.
    pub(super) fn times(&mut self, node: Node, count: i32) -> Node {
        if count == 1 {
            return node;
        }
        let count = self.constant(Total::from_f64(f64::from(count)));
        self.multiply(node, count)
    }

    fn push(&mut self, step: Step) -> Node {
        self.steps.push(step);
        Node(self.steps.len() - 1)
    }

    /// Every node for values of the variables, in double-double.
    pub(super) fn evaluate(&self, variables: &[Total]) -> Worked<Total> {
        let mut values = Vec::with_capacity(self.steps.len());
        for step in &self.steps {
            let at = |node: &Node| -> Total { values.get(node.0).copied().unwrap_or_default() };
            values.push(match step {
                Step::Constant(value) => *value,
                Step::Variable(index) => variables.get(*index).copied().unwrap_or_default(),
                Step::Add(a, b) => at(a) + at(b),
                Step::Multiply(a, b) => at(a) * at(b),
                Step::Divide(a, b) => at(a) / at(b),
            });
        }
        Worked { values }
    }

    /// Every node in plain doubles, into room that is used again.
    pub(super) fn draw(&self, variables: &[f64], room: &mut Worked<f64>) {
        let values = &mut room.values;
        values.clear();
        for step in &self.steps {
            let at = |node: &Node| -> f64 { values.get(node.0).copied().unwrap_or_default() };
            let value = match step {
                Step::Constant(value) => value.to_f64(),
                Step::Variable(index) => variables.get(*index).copied().unwrap_or_default(),
                Step::Add(a, b) => at(a) + at(b),
                Step::Multiply(a, b) => at(a) * at(b),
                Step::Divide(a, b) => at(a) / at(b),
            };
            values.push(value);
        }
    }

    /// Derivative with respect to each variable of the sum of nodes times weights, by one backward pass.
    pub(super) fn gradient(&self, worked: &Worked<Total>, weights: &[(Node, f64)]) -> Vec<f64> {
        let mut adjoint = vec![0.0; self.steps.len()];
        for (node, weight) in weights {
            if let Some(place) = adjoint.get_mut(node.0) {
                *place += weight;
            }
        }
        let mut gradient = vec![0.0; self.variables];
        for (index, step) in self.steps.iter().enumerate().rev() {
            let here = adjoint.get(index).copied().unwrap_or_default();
            let mut give = |node: &Node, derivative: f64| {
                if let Some(place) = adjoint.get_mut(node.0) {
                    *place += here * derivative;
                }
            };
            match step {
                Step::Constant(_) => {}
                Step::Variable(variable) => {
                    if let Some(place) = gradient.get_mut(*variable) {
                        *place += here;
                    }
                }
                Step::Add(a, b) => {
                    give(a, 1.0);
                    give(b, 1.0);
                }
                Step::Multiply(a, b) => {
                    give(a, worked.at(*b).to_f64());
                    give(b, worked.at(*a).to_f64());
                }
                Step::Divide(a, b) => {
                    let below = worked.at(*b).to_f64();
                    give(a, 1.0 / below);
                    give(b, -worked.at(*a).to_f64() / below / below);
                }
            }
        }
        gradient
    }
}

/// The values of all nodes.
#[derive(Clone, Debug, Default)]
pub(super) struct Worked<T> {
    values: Vec<T>,
}

impl<T: Copy + Default> Worked<T> {
    /// The value of a node.
    pub(super) fn at(&self, node: Node) -> T {
        self.values.get(node.0).copied().unwrap_or_default()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn gradient_is_that_of_paper() {
        // f = m p / M / V: the derivatives are f/m, f/p, -f/M, -f/V.
        let mut tape = Tape::default();
        let nodes: Vec<Node> = (0..4).map(|_| tape.variable().1).collect();
        let pure = tape.multiply(nodes[0], nodes[1]);
        let amount = tape.divide(pure, nodes[2]);
        let result = tape.divide(amount, nodes[3]);
        let at = [3.9, 0.995, 156.01, 2.0];
        let worked = tape.evaluate(&at.map(Total::from_f64));
        let f = 3.9 * 0.995 / 156.01 / 2.0;
        let gradient = tape.gradient(&worked, &[(result, 1.0)]);
        for (found, (sign, value)) in gradient.iter().zip([1.0, 1.0, -1.0, -1.0].iter().zip(at)) {
            assert!((found - sign * f / value).abs() < 1e-15);
        }
        let mut room = Worked::default();
        tape.draw(&at, &mut room);
        assert!((room.at(result) - f).abs() < 1e-17);
    }
}
