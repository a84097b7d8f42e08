//! Order conditions in exact ratios, without a tolerance: a scheme has order p when the conditions of all rooted
//! trees of orders 1 to p hold and one of order p + 1 does not.
//!
//! Source: Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.2 (theorem 2.13), sect. II.6 for interpolants.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use super::tableau::ExactTableau;
use super::tree::{self, Tree};
use crate::arithmetic::ratio;

/// The highest order that is told apart: weights that reach it may have a higher one.
pub const HIGHEST: u32 = tree::HIGHEST;

/// Norms of the residuals of the first order of conditions that fails: the size of the leading error term.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PrincipalError {
    /// Square root of the sum of squares.
    pub two_norm: f64,
    /// Largest magnitude.
    pub max_norm: f64,
}

/// Whether `c_i = sum_j a_ij` for each stage. The order conditions take it for granted.
pub fn row_sums_hold(tableau: &ExactTableau) -> bool {
    tableau.c.iter().zip(&tableau.a).all(|(c, row)| row.iter().sum::<BigRational>() == *c)
}

/// The order of the scheme with these weights, `b` or `b_hat`; 0 where the row sums or the first condition fail.
pub fn of_weights(tableau: &ExactTableau, weights: &[BigRational]) -> u32 {
    if !row_sums_hold(tableau) {
        return 0;
    }
    let mut stage_weights = StageWeights::new(tableau);
    let first_failure = stage_weights.find(|(tree, phi)| !residual(tree, phi, weights).is_zero());
    first_failure.map_or(HIGHEST, |(tree, _)| tree.order - 1)
}

/// The size of the leading error term of weights of order `p`: norms over the trees of order `p + 1` of
/// `(weight - 1 / gamma) / sigma`. The residuals are exact; each norm is then rounded.
///
/// `None` where the row sums fail or the order is too high to be told.
pub fn principal_error(tableau: &ExactTableau, weights: &[BigRational]) -> Option<PrincipalError> {
    let next = of_weights(tableau, weights) + 1;
    if next > HIGHEST || !row_sums_hold(tableau) {
        return None;
    }
    let mut squares = BigRational::zero();
    let mut largest = BigRational::zero();
    for (tree, phi) in StageWeights::new(tableau).filter(|(tree, _)| tree.order == next) {
        let term = residual(tree, &phi, weights) / BigRational::from_integer(tree.sigma.clone());
        squares += &term * &term;
        largest = largest.max(term.abs());
    }
    Some(PrincipalError { two_norm: ratio::nearest(&squares).sqrt(), max_norm: ratio::nearest(&largest) })
}

/// The order of an interpolant with the weights `b_i(theta)`: the conditions `sum_i b_i(theta) Phi_i = theta^n /
/// gamma` hold for all theta, for the trees of orders `n` up to it. Rows and powers as in [`ExactTableau::b_theta`].
///
/// Order p means an error O(h^(p+1)) inside a step.
pub fn of_interpolant(tableau: &ExactTableau, b_theta: &[Vec<BigRational>]) -> u32 {
    if !row_sums_hold(tableau) {
        return 0;
    }
    let powers = b_theta.iter().map(Vec::len).max().unwrap_or(0);
    let column = |power: usize| -> Vec<BigRational> {
        b_theta.iter().map(|row| row.get(power).cloned().unwrap_or_else(BigRational::zero)).collect()
    };
    let columns: Vec<Vec<BigRational>> = (0..powers).map(column).collect();
    let holds = |tree: &Tree, phi: &[BigRational]| {
        let own = tree.order as usize - 1;
        own < powers
            && columns.iter().enumerate().all(|(power, weights)| {
                let sum = dot(weights, phi);
                if power == own { sum == one_over(&tree.gamma) } else { sum.is_zero() }
            })
    };
    let first_failure = StageWeights::new(tableau).find(|(tree, phi)| !holds(tree, phi));
    first_failure.map_or(HIGHEST, |(tree, _)| tree.order - 1)
}

fn residual(tree: &Tree, phi: &[BigRational], weights: &[BigRational]) -> BigRational {
    dot(weights, phi) - one_over(&tree.gamma)
}

fn one_over(n: &BigInt) -> BigRational {
    BigRational::new(BigInt::one(), n.clone())
}

fn dot(a: &[BigRational], b: &[BigRational]) -> BigRational {
    a.iter().zip(b).filter(|(a, b)| !a.is_zero() && !b.is_zero()).map(|(a, b)| a * b).sum()
}

/// Each tree with its elementary weights `Phi_i` at the stages, in the order of the table.
///
/// A root that carries the subtrees `u` has `Phi_i = product over u of (sum_j a_ij Phi_j(u))`.
struct StageWeights<'a> {
    tableau: &'a ExactTableau,
    /// `sum_j a_ij Phi_j` of each tree that was passed.
    lifted: Vec<Vec<BigRational>>,
}

impl<'a> StageWeights<'a> {
    fn new(tableau: &'a ExactTableau) -> Self {
        Self { tableau, lifted: Vec::new() }
    }
}

impl Iterator for StageWeights<'_> {
    type Item = (&'static Tree, Vec<BigRational>);

    fn next(&mut self) -> Option<Self::Item> {
        let tree = tree::trees().get(self.lifted.len())?;
        let stages = self.tableau.stages();
        let phi: Vec<BigRational> = (0..stages)
            .map(|stage| tree.children.iter().map(|&child| &self.lifted[child][stage]).product())
            .collect();
        self.lifted.push(self.tableau.a.iter().map(|row| dot(row, &phi)).collect());
        Some((tree, phi))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scheme::Tableau;

    fn exact(drawing: &str) -> ExactTableau {
        Tableau::read(drawing).unwrap().exact
    }

    #[test]
    fn the_leading_error_term_has_the_reference_size() {
        // Norms from a separate calculation of the published tableaux in 25 digits (residual over symmetry, all
        // trees of order p + 1). Dormand & Prince (1980), table 2, print 0.399e-3 for their pair (from memory).
        let expect = [
            ("euler", 0.5, 0.5, None),
            ("midpoint", 0.1717960677340691895758921, 0.1666666666666666666666667, None),
            ("heun", 0.1863389981249824747007645, 0.1666666666666666666666667, None),
            ("kutta3", 0.05892556509887896036673703, 0.04166666666666666666666667, None),
            ("rk4", 0.01450458234319821026781764, 0.008333333333333333333333333, None),
            (
                "bogacki-shampine",
                0.04181109228747324819488973,
                0.04166666666666666666666667,
                Some(0.02946278254943948018336852),
            ),
            (
                "fehlberg",
                0.001839243418451607302266071,
                0.001282051282051282051282051,
                Some(0.003355744692851658374789115),
            ),
            (
                "dormand-prince",
                0.0003990801609343599085557095,
                0.0002777777777777777777777778,
                Some(0.00118295715135106741561716),
            ),
        ];
        for (key, two_norm, max_norm, embedded) in expect {
            let tableau = &crate::scheme::find(key).unwrap().tableau.exact;
            let ours = principal_error(tableau, &tableau.b).unwrap();
            // The sum of squares and its root are rounded once each.
            let near = |ours: f64, reference: f64| (ours / reference - 1.0).abs() <= f64::EPSILON;
            assert!(near(ours.two_norm, two_norm), "{key}: {ours:?}");
            assert!(near(ours.max_norm, max_norm), "{key}: {ours:?}");
            assert_eq!(embedded.is_some(), tableau.b_hat.is_some());
            for (b_hat, reference) in tableau.b_hat.iter().zip(embedded) {
                let ours = principal_error(tableau, b_hat).unwrap();
                assert!(near(ours.two_norm, reference), "{key}, embedded: {ours:?}");
            }
        }
    }

    #[test]
    fn ralston_has_the_least_leading_error_of_its_family() {
        // Nodes c, weights 1 - 1/(2c) and 1/(2c) have order 2; Ralston (1962) found the least bound at c = 2/3.
        let size = |c: i64| {
            let (c, half) = (BigRational::new(c.into(), 60.into()), BigRational::new(1.into(), 2.into()));
            let b = half / &c;
            let drawing = format!("0 |\n {c} | {c}\n b | {} {b}", BigRational::one() - &b);
            let tableau = exact(&drawing);
            assert_eq!(of_weights(&tableau, &tableau.b), 2);
            principal_error(&tableau, &tableau.b).unwrap().two_norm
        };
        let least = (20..=60).min_by(|&a, &b| size(a).total_cmp(&size(b)));
        assert_eq!(least, Some(40));
    }

    #[test]
    fn a_scheme_of_order_six_is_told_from_one_of_order_five() {
        // J. C. Butcher (1964), J. Austral. Math. Soc. 4, 179-194: seven stages (from memory).
        let butcher6 = exact(
            "
              0  |
             1/3 |   1/3
             2/3 |    0      2/3
             1/3 |  1/12     1/3    -1/12
             1/2 | -1/16     9/8    -3/16   -3/8
             1/2 |    0      9/8    -3/8    -3/4   1/2
              1  |  9/44   -9/11    63/44   18/11   0   -16/11
             ----|---------------------------------------------------
              b  | 11/120     0     27/40   27/40  -4/15  -4/15  11/120
            ",
        );
        assert_eq!(of_weights(&butcher6, &butcher6.b), 6);
        assert!(principal_error(&butcher6, &butcher6.b).is_some());
    }

    #[test]
    fn false_row_sums_leave_no_order() {
        let tableau = exact("0 |\n 1/2 | 1/3\n b | 0 1");
        assert!(!row_sums_hold(&tableau));
        assert_eq!(of_weights(&tableau, &tableau.b), 0);
        assert_eq!(principal_error(&tableau, &tableau.b), None);
    }

    #[test]
    fn the_interpolant_of_dormand_and_prince_has_order_four() {
        // Shampine (1986), Math. Comp. 46, 135-150; Hairer, Nørsett & Wanner I, sect. II.6.
        let tableau = &crate::scheme::find("dormand-prince").unwrap().tableau.exact;
        let rows = tableau.b_theta.as_ref().unwrap();
        assert_eq!(of_interpolant(tableau, rows), 4);
        for stage in 0..rows.len() {
            for power in 0..rows[stage].len() {
                let mut changed = rows.clone();
                changed[stage][power] += BigRational::new(1.into(), 1_000_000.into());
                assert!(of_interpolant(tableau, &changed) < 4, "stage {stage}, power {power}");
            }
        }
    }

    #[test]
    fn a_straight_line_between_the_points_has_order_one() {
        // y + theta h k_1 of Euler's scheme: its error inside a step is O(h^2).
        let euler = exact("0 |\n b | 1\n theta | 1");
        assert_eq!(of_interpolant(&euler, euler.b_theta.as_ref().unwrap()), 1);
    }
}
