//! Speed of compiled rates and of whole fixed-step runs, as ratios to hand-written Rust in the same process.
//!
//! `cargo bench --bench rates`. Every program first gives the right answer; then the median of paired runs is printed.
//! These machines are noisy: a ratio means something, a time does not, and nothing here is asserted of either.
#![allow(
    clippy::print_stdout,
    clippy::unwrap_used,
    clippy::disallowed_methods,
    clippy::cast_possible_truncation,
    reason = "a bench: failures are panics, times come from the clock"
)]

use std::hint::black_box;
use std::time::Instant;

use halfstep::cli::pipeline::check;
use halfstep::fault::{Faults, Sources};
use halfstep::plan::RunPlan;
use halfstep::run::system::System;
use halfstep::scheme::find;
use halfstep::scheme::rates::Rates;
use halfstep::scheme::step::Stepper;

/// Pairs of timed runs, of which the median ratio is taken.
const PAIRS: usize = 9;

struct Problem {
    name: &'static str,
    model: &'static str,
    start: &'static [f64],
    rates: fn(f64, &[f64], &mut [f64]),
    h: f64,
    steps: u32,
}

const PROBLEMS: [Problem; 3] = [
    Problem {
        name: "damped driven pendulum",
        model: "states: {th: 0.2, w: 0}\nrates:\n  th: w\n  w: -0.5*w - sin(th) + 0.9*cos(2*t/3)",
        start: &[0.2, 0.0],
        rates: |t, y, out| {
            out[0] = y[1];
            out[1] = -0.5 * y[1] - halfstep::arithmetic::elementary::sin(y[0])
                + 0.9 * halfstep::arithmetic::elementary::cos(2.0 * t / 3.0);
        },
        h: 1e-3,
        steps: 200_000,
    },
    Problem {
        name: "Lorenz",
        model: "states: {x: 1, y: 1, z: 1}\nrates:\n  x: 10*(y-x)\n  y: x*(28-z)-y\n  z: x*y-8/3*z",
        start: &[1.0, 1.0, 1.0],
        rates: |_, y, out| {
            out[0] = 10.0 * (y[1] - y[0]);
            out[1] = y[0] * (28.0 - y[2]) - y[1];
            out[2] = y[0] * y[1] - 8.0 / 3.0 * y[2];
        },
        h: 1e-3,
        steps: 400_000,
    },
    Problem {
        name: "two-body orbit",
        model: "states: {x: 0.5, y: 0, u: 0, v: 1.7}\nderived: {r3: (x^2+y^2)^1.5}\nrates:\n  x: u\n  y: v\n  u: -x/r3\n  v: -y/r3",
        start: &[0.5, 0.0, 0.0, 1.7],
        rates: |_, y, out| {
            let r3 = halfstep::arithmetic::elementary::pow(y[0] * y[0] + y[1] * y[1], 1.5);
            out[0] = y[2];
            out[1] = y[3];
            out[2] = -y[0] / r3;
            out[3] = -y[1] / r3;
        },
        h: 1e-3,
        steps: 100_000,
    },
];

struct Native(fn(f64, &[f64], &mut [f64]), usize);

impl Rates for Native {
    fn states(&self) -> usize {
        self.1
    }
    fn rates(&mut self, t: f64, y: &[f64], out: &mut [f64]) {
        (self.0)(t, y, out);
    }
}

fn plan(problem: &Problem) -> RunPlan {
    let text = format!(
        "---\nstudy: bench\n---\n\n```model m\n{}\n```\n\n```run r\nmodel: m\nscheme: rk4\nstep: 0.1\nuntil: 1\n```\n",
        problem.model
    );
    let mut sources = Sources::default();
    let file = sources.add("bench.md", text);
    let mut faults = Faults::new();
    check(&sources, file, None, &mut faults).unwrap().plan.runs.remove(0)
}

/// Integrates by RK4 through the stepper and gives the end.
fn through_stepper<R: Rates>(mut rates: R, problem: &Problem) -> Vec<f64> {
    let n = problem.start.len();
    let mut stepper = Stepper::new(find("rk4").unwrap(), n);
    let (mut y, mut f) = (problem.start.to_vec(), vec![0.0; n]);
    let (mut y_new, mut f_new) = (vec![0.0; n], vec![0.0; n]);
    rates.rates(0.0, &y, &mut f);
    for k in 0..problem.steps {
        let (t, t_new) = (f64::from(k) * problem.h, f64::from(k + 1) * problem.h);
        stepper.step(&mut rates, t, &y, &f, t_new, &mut y_new, &mut f_new).unwrap();
        std::mem::swap(&mut y, &mut y_new);
        std::mem::swap(&mut f, &mut f_new);
    }
    y
}

/// The same steps by a loop written for the purpose.
fn by_hand<const N: usize>(problem: &Problem) -> Vec<f64> {
    let rates = problem.rates;
    let mut y: [f64; N] = problem.start.try_into().unwrap();
    let mut k = [[0.0; N]; 4];
    for step in 0..problem.steps {
        let (t, t_new) = (f64::from(step) * problem.h, f64::from(step + 1) * problem.h);
        let h = t_new - t;
        rates(t, &y, &mut k[0]);
        let mut stage = [0.0; N];
        for (i, c) in [(1, 0.5), (2, 0.5), (3, 1.0)] {
            for j in 0..N {
                stage[j] = y[j] + h * (c * k[i - 1][j]);
            }
            rates(if i == 3 { t_new } else { t + c * h }, &stage, &mut k[i]);
        }
        for j in 0..N {
            y[j] += h * (k[0][j] / 6.0 + k[1][j] / 3.0 + k[2][j] / 3.0 + k[3][j] / 6.0);
        }
    }
    y.to_vec()
}

fn seconds(mut run: impl FnMut() -> Vec<f64>) -> f64 {
    let started = Instant::now();
    black_box(run());
    started.elapsed().as_secs_f64()
}

fn main() {
    println!(
        "| problem | compiled rates in our stepper, ns a step | native rates in our stepper | by hand | ratio to by hand |"
    );
    println!("| --- | ---: | ---: | ---: | ---: |");
    for problem in &PROBLEMS {
        let plan = plan(problem);
        let compiled = || through_stepper(System::new(&plan.graph, &plan.rates, &plan.parameters), problem);
        let native = || through_stepper(Native(problem.rates, problem.start.len()), problem);
        let hand = || match problem.start.len() {
            2 => by_hand::<2>(problem),
            3 => by_hand::<3>(problem),
            _ => by_hand::<4>(problem),
        };
        assert_eq!(compiled(), native(), "{}: the same bits", problem.name);
        for (a, b) in native().iter().zip(hand()) {
            // Lorenz is chaotic over so many steps: there the ends need not agree.
            assert!(problem.name == "Lorenz" || (a - b).abs() < 1e-6, "{}: {a} {b}", problem.name);
        }
        let mut times: Vec<[f64; 3]> =
            (0..PAIRS).map(|_| [seconds(compiled), seconds(native), seconds(hand)]).collect();
        let per_step = 1e9 / f64::from(problem.steps);
        times.sort_by(|a, b| (a[0] / a[2]).total_cmp(&(b[0] / b[2])));
        let [a, b, c] = times[PAIRS / 2];
        println!(
            "| {} | {:.1} | {:.1} | {:.1} | {:.2} |",
            problem.name,
            a * per_step,
            b * per_step,
            c * per_step,
            a / c
        );
    }
}
