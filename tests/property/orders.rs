//! Every scheme converges at its order, at step ends and inside steps, for autonomous and non-autonomous rates.
//!
//! The slope is measured where errors exceed 1000 roundings and the step is in the asymptotic range.

use halfstep::scheme::dense_output::{Piece, Room};
use halfstep::scheme::rates::Rates;
use halfstep::scheme::step::Stepper;
use halfstep::scheme::{Scheme, all};

/// A problem with a known solution.
struct Problem {
    name: &'static str,
    rates: fn(f64, &[f64], &mut [f64]),
    exact: fn(f64) -> Vec<f64>,
    until: f64,
}

impl Rates for &Problem {
    fn states(&self) -> usize {
        (self.exact)(0.0).len()
    }
    fn rates(&mut self, t: f64, y: &[f64], out: &mut [f64]) {
        (self.rates)(t, y, out);
    }
}

const PROBLEMS: [Problem; 3] = [
    Problem {
        // Autonomous and nonlinear: a turning vector whose speed depends on its length.
        name: "turning vector",
        rates: |_, y, out| {
            let r2 = y[0] * y[0] + y[1] * y[1];
            out[0] = -y[1] * r2;
            out[1] = y[0] * r2;
        },
        exact: |t| vec![t.cos(), t.sin()],
        until: 2.0,
    },
    Problem {
        // Non-autonomous and nonlinear: wrong nodes c show here.
        name: "driven Riccati",
        rates: |t, y, out| out[0] = y[0] * y[0] - t.sin() * t.sin() + t.cos(),
        exact: |t| vec![t.sin()],
        until: 1.5,
    },
    Problem {
        name: "periodic growth",
        rates: |t, y, out| out[0] = y[0] * t.cos(),
        exact: |t| vec![t.sin().exp()],
        until: 3.0,
    },
];

/// Largest error at step ends, and at a few places inside steps, with so many steps.
fn errors(scheme: &'static Scheme, problem: &Problem, steps: u32) -> (f64, f64) {
    let mut rates = problem;
    let mut y = (problem.exact)(0.0);
    let n = y.len();
    let (mut f, mut y_new, mut f_new, mut inside) = (vec![0.0; n], vec![0.0; n], vec![0.0; n], vec![0.0; n]);
    rates.rates(0.0, &y, &mut f);
    let mut stepper = Stepper::new(scheme, n);
    let (mut piece, mut room) = (Piece::new(n), Room::new(n));
    let (mut at_end, mut within) = (0.0_f64, 0.0_f64);
    for k in 0..steps {
        let t = problem.until * f64::from(k) / f64::from(steps);
        let t_new = problem.until * f64::from(k + 1) / f64::from(steps);
        stepper.step(&mut rates, t, &y, &f, t_new, &mut y_new, &mut f_new).unwrap();
        piece.fill(&stepper, &mut rates, t, &y, &f, t_new, &y_new, &f_new, &mut room).unwrap();
        for theta in [0.2, 0.37, 0.5, 0.81] {
            piece.value(theta, &mut inside);
            for (value, exact) in inside.iter().zip((problem.exact)(piece.time(theta))) {
                within = within.max((value - exact).abs());
            }
        }
        for (value, exact) in y_new.iter().zip((problem.exact)(t_new)) {
            at_end = at_end.max((value - exact).abs());
        }
        std::mem::swap(&mut y, &mut y_new);
        std::mem::swap(&mut f, &mut f_new);
    }
    (at_end, within)
}

#[test]
fn every_scheme_converges_at_its_order() {
    for scheme in all() {
        for problem in &PROBLEMS {
            let order = f64::from(scheme.order);
            let measured: Vec<(f64, f64)> =
                [12, 24, 48, 96, 192, 384].iter().map(|steps| errors(scheme, problem, *steps)).collect();
            let mut slopes = Vec::new();
            for pair in measured.windows(2) {
                if pair[1].0 > 1e3 * f64::EPSILON && pair[1].1 > 1e3 * f64::EPSILON {
                    slopes.push(((pair[0].0 / pair[1].0).log2(), (pair[0].1 / pair[1].1).log2()));
                }
            }
            let text = format!("{} on {}: {slopes:.3?} {measured:?}", scheme.key, problem.name);
            assert!(slopes.len() >= 2, "{text}");
            let (end, inside) = slopes[slopes.len() - 1];
            // Not below the order; a symmetric problem may show one more.
            assert!(end > order - 0.15, "{text}");
            assert!(inside > order - 0.15, "{text}");
            let exact_order = PROBLEMS.iter().any(|other| {
                let (coarse, fine) = (errors(scheme, other, 48), errors(scheme, other, 96));
                ((coarse.0 / fine.0).log2() - order).abs() < 0.35
            });
            assert!(exact_order, "{text}: no problem shows the order itself");
        }
    }
}

#[test]
fn the_solution_inside_a_step_is_one_order_better_than_the_scheme_needs() {
    // Local interpolation error of one step against exact start values: O(h^(p+1)).
    for scheme in all() {
        let problem = &PROBLEMS[1];
        let local = |h: f64| {
            let mut rates = problem;
            let y = (problem.exact)(0.3);
            let (mut f, mut y_new, mut f_new, mut inside) = (vec![0.0], vec![0.0], vec![0.0], vec![0.0]);
            rates.rates(0.3, &y, &mut f);
            let mut stepper = Stepper::new(scheme, 1);
            let (mut piece, mut room) = (Piece::new(1), Room::new(1));
            stepper.step(&mut rates, 0.3, &y, &f, 0.3 + h, &mut y_new, &mut f_new).unwrap();
            piece.fill(&stepper, &mut rates, 0.3, &y, &f, 0.3 + h, &y_new, &f_new, &mut room).unwrap();
            let mut worst = 0.0_f64;
            for i in 1..20 {
                let theta = f64::from(i) / 20.0;
                piece.value(theta, &mut inside);
                worst = worst.max((inside[0] - (problem.exact)(piece.time(theta))[0]).abs());
            }
            worst
        };
        // The step is small enough for the lowest order and large enough for the highest.
        let h = [0.02, 0.02, 0.02, 0.05, 0.1][scheme.order as usize - 1];
        let slope = (local(h) / local(0.5 * h)).log2();
        assert!(slope > f64::from(scheme.order) + 0.6, "{}: {slope}", scheme.key);
    }
}
