//! Explicit Runge-Kutta schemes, one scheme or pair a file. A new one needs its file and its line in [`DRAWN`].

mod bogacki_shampine;
mod cash_karp;
mod dormand_prince;
mod drawn;
mod euler;
mod fehlberg;
mod heun;
mod kutta3;
mod midpoint;
mod ralston;
mod rk4;
mod three_eighths;

pub(super) use drawn::Drawn;

/// All explicit schemes: single ones by order and year, then pairs.
pub(super) const DRAWN: [Drawn; 11] = [
    euler::EULER,
    midpoint::MIDPOINT,
    heun::HEUN,
    ralston::RALSTON,
    kutta3::KUTTA3,
    rk4::RK4,
    three_eighths::THREE_EIGHTHS,
    bogacki_shampine::BOGACKI_SHAMPINE,
    fehlberg::FEHLBERG,
    cash_karp::CASH_KARP,
    dormand_prince::DORMAND_PRINCE,
];

#[cfg(test)]
mod tests {
    use num_bigint::BigInt;
    use num_rational::BigRational;

    use super::drawn::Claim;
    use super::*;
    use crate::scheme::tableau::{ExactTableau, Tableau};
    use crate::scheme::{Dense, order};

    fn drawn_tableaux() -> impl Iterator<Item = (&'static str, Claim, Tableau)> {
        DRAWN.into_iter().map(|drawn| (drawn.key, drawn.claim, Tableau::read(drawn.tableau).unwrap()))
    }

    /// What a claim says, as it comes out of a tableau.
    fn computed(tableau: ExactTableau) -> Claim {
        let order = order::of_weights(&tableau, &tableau.b);
        let embedded = tableau.b_hat.as_ref().map(|b_hat| order::of_weights(&tableau, b_hat));
        Claim { order, embedded, first_same_as_last: Tableau::from(tableau).first_same_as_last }
    }

    fn ratio(numerator: i64, denominator: i64) -> BigRational {
        BigRational::new(numerator.into(), denominator.into())
    }

    #[test]
    fn every_drawing_is_read_and_no_key_is_there_twice() {
        let mut keys: Vec<_> = DRAWN.iter().map(|drawn| drawn.read().unwrap().key).collect();
        keys.sort_unstable();
        keys.dedup();
        assert_eq!(keys.len(), DRAWN.len());
        assert_eq!(crate::scheme::all().len(), DRAWN.len());
        assert!(keys.iter().all(|key| crate::scheme::find(key).is_some_and(|found| found.key == *key)));
        assert!(crate::scheme::find("rk5").is_none());
    }

    #[test]
    fn every_scheme_has_the_order_that_its_source_claims() {
        for (key, claim, tableau) in drawn_tableaux() {
            assert_eq!(computed(tableau.exact), claim, "{key}");
        }
    }

    #[test]
    fn any_one_changed_coefficient_is_seen() {
        // One unit in the last digit of a numerator, as a slip of the pen would make it.
        fn slip(x: &mut BigRational) {
            *x += BigRational::new(BigInt::from(1), x.denom().clone());
        }
        for (key, claim, tableau) in drawn_tableaux() {
            let exact = tableau.exact;
            let mut changed = Vec::new();
            let mut change = |at: &mut dyn FnMut(&mut ExactTableau)| {
                let mut copy = exact.clone();
                at(&mut copy);
                changed.push(copy);
            };
            for i in 0..exact.stages() {
                change(&mut |t| slip(&mut t.c[i]));
                change(&mut |t| slip(&mut t.b[i]));
                if exact.b_hat.is_some() {
                    change(&mut |t| t.b_hat.iter_mut().for_each(|b_hat| slip(&mut b_hat[i])));
                }
                for j in 0..i {
                    change(&mut |t| slip(&mut t.a[i][j]));
                }
            }
            for t in changed {
                assert_ne!(computed(t.clone()), claim, "{key}: {t:?}");
            }
        }
    }

    #[test]
    fn a_change_that_keeps_the_row_sum_is_seen_too() {
        let step = ratio(1, 1000);
        for (key, claim, tableau) in drawn_tableaux() {
            let exact = tableau.exact;
            for i in 1..exact.stages() {
                for j in 0..i {
                    let mut with_node = exact.clone();
                    with_node.a[i][j] += &step;
                    with_node.c[i] += &step;
                    assert_ne!(computed(with_node), claim, "{key}: node and a[{i}][{j}]");
                    for k in 0..j {
                        let mut within_row = exact.clone();
                        within_row.a[i][j] += &step;
                        within_row.a[i][k] -= &step;
                        assert_ne!(computed(within_row), claim, "{key}: a[{i}][{j}] and a[{i}][{k}]");
                    }
                }
            }
        }
    }

    #[test]
    fn the_first_step_is_that_of_the_reference_calculation() {
        // y' = y - t^2 + 1, y(0) = 1/2, h = 1/5: Burden & Faires, Numerical Analysis, sect. 5.2. The values are a
        // separate calculation in 26 digits; those of Euler, Heun and midpoint are printed there too.
        let expect = [
            ("euler", "0.8", None),
            ("midpoint", "0.828", None),
            ("heun", "0.826", None),
            ("ralston", "0.82733333333333333333333333", None),
            ("kutta3", "0.8292", None),
            ("rk4", "0.82929333333333333333333333", None),
            ("three-eighths", "0.82929555555555555555555556", None),
            ("bogacki-shampine", "0.8292", Some("0.82913")),
            ("fehlberg", "0.82929907692307692307692308", Some("0.8292985574358974358974359")),
            ("cash-karp", "0.82929862346666666666666667", Some("0.82929879233567708333333333")),
            ("dormand-prince", "0.82929864462222222222222222", Some("0.82929893597511111111111111")),
        ];
        let decimal = |digits: &str| {
            let shift = digits.len() - 2;
            ratio(1, 10).pow(i32::try_from(shift).unwrap())
                * BigRational::from_integer(digits.replace('.', "").parse().unwrap())
        };
        let tolerance = ratio(1, 10).pow(26);
        for ((key, _, tableau), (name, y_new, y_hat)) in drawn_tableaux().zip(expect) {
            assert_eq!(key, name);
            let ExactTableau { c, a, b, b_hat, .. } = tableau.exact;
            let h = ratio(1, 5);
            let advance = |weights: &[BigRational], k: &[BigRational]| {
                ratio(1, 2) + &h * weights.iter().zip(k).map(|(w, k)| w * k).sum::<BigRational>()
            };
            let mut k: Vec<BigRational> = Vec::new();
            for (c, row) in c.iter().zip(&a) {
                let t = c * &h;
                k.push(advance(row, &k) - &t * &t + ratio(1, 1));
            }
            assert!((advance(&b, &k) - decimal(y_new)).pow(2) < tolerance.clone().pow(2), "{key}");
            assert_eq!(b_hat.is_some(), y_hat.is_some());
            for (b_hat, y_hat) in b_hat.iter().zip(y_hat) {
                assert!((advance(b_hat, &k) - decimal(y_hat)).pow(2) < tolerance.clone().pow(2), "{key}");
            }
        }
    }

    #[test]
    fn an_interpolant_ends_at_the_new_point_with_its_slope() {
        for drawn in DRAWN {
            let scheme = drawn.read().unwrap();
            let Dense::Matched { weights, .. } = &scheme.dense else { continue };
            let exact = &scheme.tableau.exact;
            let rows = exact.b_theta.as_ref().unwrap();
            assert_eq!(weights.len(), rows.len());
            let last = rows.len() - 1;
            for (i, row) in rows.iter().enumerate() {
                let powers = (1_i64..).map(|power| ratio(power, 1));
                let slope: BigRational = row.iter().zip(powers).map(|(w, power)| w * power).sum();
                assert_eq!(row.iter().sum::<BigRational>(), exact.b[i], "value at theta = 1, stage {i}");
                assert_eq!(row[0], ratio(i64::from(i == 0), 1), "slope at theta = 0, stage {i}");
                assert_eq!(slope, ratio(i64::from(i == last), 1), "slope at theta = 1, stage {i}");
            }
        }
    }
}
