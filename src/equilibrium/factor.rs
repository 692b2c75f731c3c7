//! Factorisation of the small symmetric matrices of the coupled mass balances.
#![expect(
    clippy::indexing_slicing,
    reason = "indexes run below `order`, bounded by `Factor::of`"
)]

use crate::equilibrium::tableau::MOST_COUPLED;

/// A square matrix of the largest order.
pub(super) type Matrix = [[f64; MOST_COUPLED]; MOST_COUPLED];

/// Lower triangular `L` of a symmetric positive definite matrix `A`, with `A = L Lᵀ`.
#[derive(Clone, Debug, Default)]
pub(super) struct Factor {
    order: usize,
    lower: Matrix,
}

impl Factor {
    /// Factorises the leading `order` rows and columns; reads the lower triangle only. `None` if the matrix is not positive definite to
    /// working precision.
    pub(super) fn of(matrix: &Matrix, order: usize) -> Option<Self> {
        if order > MOST_COUPLED {
            return None;
        }
        let mut lower = [[0.0; MOST_COUPLED]; MOST_COUPLED];
        for row in 0..order {
            for column in 0..=row {
                let done: f64 = (0..column).map(|k| lower[row][k] * lower[column][k]).sum();
                let rest = matrix[row][column] - done;
                lower[row][column] = if row == column {
                    positive_root(rest)?
                } else {
                    rest / lower[column][column]
                };
            }
        }
        Some(Self { order, lower })
    }

    /// Solves `A x = b` in place; entries beyond the order are left alone.
    pub(super) fn solve(&self, b: &mut [f64; MOST_COUPLED]) {
        for row in 0..self.order {
            let done: f64 = (0..row).map(|k| self.lower[row][k] * b[k]).sum();
            b[row] = (b[row] - done) / self.lower[row][row];
        }
        for row in (0..self.order).rev() {
            let done: f64 = (row + 1..self.order)
                .map(|k| self.lower[k][row] * b[k])
                .sum();
            b[row] = (b[row] - done) / self.lower[row][row];
        }
    }
}

/// The root of a finite positive number, else `None`; NaN fails the comparison and is refused too.
fn positive_root(square: f64) -> Option<f64> {
    (square > 0.0 && square.is_finite()).then(|| square.sqrt())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn two_by_two([a, b, c]: [f64; 3]) -> Matrix {
        let mut matrix = [[0.0; MOST_COUPLED]; MOST_COUPLED];
        matrix[0][0] = a;
        matrix[1][0] = b;
        matrix[1][1] = c;
        matrix
    }

    #[test]
    fn solution_satisfies_the_equations() {
        let mut x = [0.0; MOST_COUPLED];
        x[0] = 8.0;
        x[1] = 7.0;
        Factor::of(&two_by_two([4.0, 2.0, 3.0]), 2)
            .unwrap()
            .solve(&mut x);
        // By hand: 4·1.25 + 2·1.5 = 8 and 2·1.25 + 3·1.5 = 7; one irrational root enters four operations.
        assert!(
            (x[0] - 1.25).abs() <= 4.0 * f64::EPSILON && (x[1] - 1.5).abs() <= 4.0 * f64::EPSILON
        );
    }

    #[test]
    fn an_indefinite_matrix_has_no_factor() {
        assert!(Factor::of(&two_by_two([1.0, 2.0, 1.0]), 2).is_none());
    }
}
