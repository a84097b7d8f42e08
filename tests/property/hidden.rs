//! What meshes cannot see through must never earn a good grade: jumps and kinks hidden inside a step.

use halfstep::bound::Grade;
use halfstep::cli::pipeline::evaluate;
use halfstep::scheme::all;

use crate::common::random::Random;

fn study(model: &str, scheme: &str, step: f64, until: f64) -> String {
    format!(
        "---\nstudy: hidden\n---\n\n```model m\n{model}\n```\n\n```run r\nmodel: m\nscheme: {scheme}\nstep: {step}\nuntil: {until}\nquantities:\n  q: final x\n```\n"
    )
}

/// A jump that is written as a very steep but smooth function, so that no switch marks it.
/// Source of the problem: the relaxation of numerical practice, y' = -y + H(t - a); closed form elementary.
#[test]
fn a_jump_hidden_inside_a_step_is_at_most_indicated() {
    let mut random = Random::new(7);
    let mut misgraded = Vec::new();
    let mut violated = Vec::new();
    let mut count = 0;
    for scheme in all() {
        for _ in 0..60 {
            let (a, step) = (random.between(0.3, 1.7), random.between(0.03, 0.2));
            // The relaxation rate and size of the jump vary; the jump is 1e-9 wide.
            let (k, size) = (random.between(0.3, 2.0), random.between(0.2, 3.0));
            let model = format!("states: {{x: 1}}\nrates:\n  x: \"-{k}*x+{size}*(1+tanh(1e9*(t-{a})))/2\"");
            let exact = (-k * 2.0_f64).exp() + size / k * (1.0 - (-k * (2.0 - a)).exp());
            let (_, outcome) = evaluate("hidden.md", &study(&model, scheme.key, step, 2.0)).unwrap();
            let quantity = &outcome.runs[0].quantities[0];
            let error = (quantity.value.unwrap() - exact).abs();
            count += 1;
            let text = format!("{} step {step} jump at {a}: error {error:e} {quantity:?}", scheme.key);
            if quantity.grade < Grade::Indicated {
                misgraded.push(text.clone());
            }
            if quantity.bound.is_some_and(|bound| error > bound) {
                violated.push(text);
            }
        }
    }
    assert!(misgraded.is_empty(), "{} of {count}:\n{}", misgraded.len(), misgraded.join("\n"));
    assert!(violated.len() * 50 <= count, "{} of {count}:\n{}", violated.len(), violated.join("\n"));
}

/// A jump so small that its effect drowns in the error of the scheme may be overlooked: then the bound must hold.
#[test]
fn a_small_hidden_jump_breaks_no_good_bound() {
    let mut random = Random::new(17);
    let (mut good, mut broken) = (0, Vec::new());
    for scheme in all() {
        for _ in 0..200 {
            let (a, step) = (random.between(0.3, 1.7), random.between(0.03, 0.2));
            let (k, size) = (random.between(0.3, 2.0), 10.0_f64.powf(random.between(-6.0, -0.7)));
            let model = format!("states: {{x: 1}}\nrates:\n  x: \"-{k}*x+{size:e}*(1+tanh(1e9*(t-{a})))/2\"");
            let exact = (-k * 2.0_f64).exp() + size / k * (1.0 - (-k * (2.0 - a)).exp());
            let (_, outcome) = evaluate("hidden.md", &study(&model, scheme.key, step, 2.0)).unwrap();
            let quantity = &outcome.runs[0].quantities[0];
            let error = (quantity.value.unwrap() - exact).abs();
            if quantity.grade < Grade::Indicated {
                good += 1;
                if error > quantity.bound.unwrap() {
                    broken.push(format!(
                        "{} step {step} jump {size:e} at {a}: error {error:e} {quantity:?}",
                        scheme.key
                    ));
                }
            }
        }
    }
    assert!(broken.is_empty(), "{} of {good}:\n{}", broken.len(), broken.join("\n"));
}

/// The same jump written with `signum` is located and made a mesh point: the order of the scheme is kept.
#[test]
fn a_located_jump_keeps_order_and_grade() {
    let mut random = Random::new(8);
    for scheme in all() {
        for _ in 0..20 {
            let (a, step) = (random.between(0.3, 1.7), random.between(0.01, 0.03));
            let (k, size) = (random.between(0.3, 2.0), random.between(0.2, 3.0));
            let model = format!("states: {{x: 1}}\nrates:\n  x: \"-{k}*x+{size}*(1+signum(t-{a}))/2\"");
            let exact = (-k * 2.0_f64).exp() + size / k * (1.0 - (-k * (2.0 - a)).exp());
            let (_, outcome) = evaluate("located.md", &study(&model, scheme.key, step, 2.0)).unwrap();
            let quantity = &outcome.runs[0].quantities[0];
            let error = (quantity.value.unwrap() - exact).abs();
            let text = format!("{} step {step} jump at {a}: error {error:e} {quantity:?}", scheme.key);
            assert!(error <= quantity.bound.unwrap(), "{text}");
            assert_eq!(outcome.runs[0].meshes[0].switches, 1, "{text}");
            assert!(quantity.grade <= Grade::Indicated, "{text}");
        }
    }
}

/// A jump in the rates at a level of the state itself: y' = 1 below 1, 1/2 above; y = t, then 1 + (t - 1)/2.
/// With a second state that relaxes toward the first, so that the jump matters to a curved solution.
#[test]
fn a_jump_at_a_level_of_a_state_is_located_and_bounded() {
    for scheme in all() {
        for step in [0.013, 0.05, 0.11] {
            let model = "states: {z: 0, x: 0}\nrates:\n  z: \"(3-signum(z-1))/4*1\"\n  x: \"z-x\"";
            // z = t until 1, then 1 + (t-1)/2; x' = z - x.
            // x = t - 1 + e^-t until 1; x(1) = e^-1; then with s = t-1: x = (1+s/2) - 1/2 + c e^-s.
            let c = (-1.0_f64).exp() - 0.5;
            let s = 2.0_f64;
            let exact = 1.0 + s / 2.0 - 0.5 + c * (-s).exp();
            let (_, outcome) = evaluate("level.md", &study(model, scheme.key, step, 3.0)).unwrap();
            let quantity = &outcome.runs[0].quantities[0];
            let error = (quantity.value.unwrap() - exact).abs();
            let text = format!("{} step {step}: error {error:e} {quantity:?}", scheme.key);
            assert!(error <= quantity.bound.unwrap(), "{text}");
            assert_eq!(outcome.runs[0].meshes[0].switches, 1, "{text}");
        }
    }
}

/// Functions that jump where nothing watches cap the grade from the start.
#[test]
fn floor_in_the_rates_caps_the_grade() {
    let text = study("states: {x: 1}\nrates: {x: \"floor(t)-x\"}", "rk4", 0.01, 3.3);
    let (_, outcome) = evaluate("floor.md", &text).unwrap();
    assert!(outcome.runs[0].quantities[0].grade >= Grade::Indicated);
    assert!(!outcome.runs[0].caps.is_empty());
}

/// Lorenz (1963), J. Atmos. Sci. 20, 130-141: beyond its horizon no number has a bound.
#[test]
fn a_chaotic_run_beyond_its_horizon_has_no_bound() {
    let model =
        "states: {x: 1, y: 1, z: 1}\nrates:\n  x: \"10*(y-x)\"\n  y: \"x*(28-z)-y\"\n  z: \"x*y-8/3*z\"";
    let (_, outcome) = evaluate("lorenz.md", &study(model, "rk4", 0.01, 40.0)).unwrap();
    let quantity = &outcome.runs[0].quantities[0];
    assert_eq!(quantity.grade, Grade::Unbounded, "{quantity:?}");
}

/// A pole between mesh points: the integral diverges, so no grade may be good.
#[test]
fn a_pole_stepped_over_is_at_most_indicated() {
    let mut random = Random::new(9);
    let mut misgraded = Vec::new();
    for scheme in all() {
        for _ in 0..40 {
            let (a, step) = (random.between(0.3, 0.9), random.between(0.01, 0.2));
            for rate in [
                format!("1/(t-{a})"),
                format!("1/(t-{a})^2"),
                format!("-x+1/abs(t-{a})"),
                format!("tan(t/{a})"),
            ] {
                let until = if rate.contains("tan") { 2.0 } else { 1.0 };
                let text =
                    study(&format!("states: {{x: 1}}\nrates:\n  x: \"{rate}\""), scheme.key, step, until);
                // A mesh point on the pole itself stops the run, which is as good.
                let Ok((_, outcome)) = evaluate("pole.md", &text) else { continue };
                let quantity = &outcome.runs[0].quantities[0];
                if quantity.grade < Grade::Indicated {
                    misgraded.push(format!("{} step {step}: {rate} {quantity:?}", scheme.key));
                }
            }
        }
    }
    assert!(misgraded.is_empty(), "{}:\n{}", misgraded.len(), misgraded.join("\n"));
}

/// `aim` finds a step whose bound meets the aim, and no larger step of two digits does.
#[test]
fn an_aim_is_met_by_the_largest_step_of_two_digits() {
    let model = "states: {x: 1, v: 0}\nrates: {x: v, v: -4*x - 0.2*v}";
    let text = |control: &str, scheme: &str| {
        format!(
            "---\nstudy: aim\n---\n\n```model m\n{model}\n```\n\n```run r\nmodel: m\nscheme: {scheme}\n{control}\nuntil: 5\nquantities:\n  q: lowest x\n```\n"
        )
    };
    for scheme in ["midpoint", "kutta3", "rk4", "dormand-prince"] {
        let (_, outcome) = evaluate("aim.md", &text("aim: 1e-5", scheme)).unwrap();
        let run = &outcome.runs[0];
        let halfstep::bound::Steps::Aimed { step, trials, .. } = &run.steps else {
            panic!("{:?}", run.steps)
        };
        assert!(run.quantities[0].bound.unwrap() <= 1e-5 && run.quantities[0].grade <= Grade::Converged);
        assert!(*trials < 40);
        // The next larger step of two digits does not meet it.
        let digits = format!("{step:.1e}");
        let (mantissa, exponent) = digits.split_once('e').unwrap();
        let larger = (mantissa.parse::<f64>().unwrap() * 10.0).round() as i64 + 1;
        let next = format!("{larger}e{}", exponent.parse::<i64>().unwrap() - 1);
        let (_, outcome) = evaluate("next.md", &text(&format!("step: {next}"), scheme)).unwrap();
        let quantity = &outcome.runs[0].quantities[0];
        assert!(
            quantity.bound.is_none_or(|bound| bound > 1e-5) || quantity.grade > Grade::Converged,
            "{scheme}: {step} was found, {next} meets the aim too: {quantity:?}"
        );
    }
}

/// Forcing that all three meshes meet in the same phase: with four periods a step, every point of every mesh sees a
/// crest. The exact integral over whole periods is zero.
#[test]
fn an_oscillation_in_step_with_the_meshes_is_seen() {
    for scheme in all() {
        for periods in [1, 2, 4, 8, 16, 32] {
            for bound in ["halving", "halving and companion"] {
                let model = format!("states: {{x: 1}}\nrates: {{x: \"cos(2*pi*{periods}*t/0.1)\"}}");
                let text = study(&model, scheme.key, 0.1, 2.0)
                    .replace("until: 2\n", &format!("until: 2\nbound: {bound}\n"));
                let (_, outcome) = evaluate("alias.md", &text).unwrap();
                let quantity = &outcome.runs[0].quantities[0];
                let error = (quantity.value.unwrap() - 1.0).abs();
                let held = quantity.bound.is_none_or(|bound| error <= bound);
                let text = format!("{} {periods} {bound}: error {error:e} {quantity:?}", scheme.key);
                assert!(held || quantity.grade >= Grade::Indicated, "{text}");
            }
        }
    }
}

/// Errors of an unstable solution grow by ten orders and more, roundings among them. Closed form: x = sin t.
#[test]
fn bounds_hold_where_the_equation_amplifies_every_error() {
    let mut random = Random::new(23);
    let (mut good, mut broken) = (0, Vec::new());
    for scheme in all() {
        for _ in 0..60 {
            let (k, until) = (random.between(2.0, 6.0), random.between(3.0, 6.0));
            let step = 10.0_f64.powf(random.between(-3.3, -0.8));
            let model = format!("states: {{x: 0}}\nrates:\n  x: \"{k}*(x-sin(t))+cos(t)\"");
            let text = study(&model, scheme.key, step, until);
            let Ok((_, outcome)) = evaluate("unstable.md", &text) else { continue };
            let quantity = &outcome.runs[0].quantities[0];
            let error = (quantity.value.unwrap() - until.sin()).abs();
            if let Some(bound) = quantity.bound.filter(|_| quantity.grade < Grade::Indicated) {
                good += 1;
                if error > bound {
                    broken.push(format!(
                        "{:.2} {} step {step} k {k} until {until}: {quantity:?}",
                        error / bound,
                        scheme.key
                    ));
                }
            }
        }
    }
    assert!(good > 100 && broken.is_empty(), "{} of {good}:\n{}", broken.len(), broken.join("\n"));
}

/// A kink that is smooth within 1e-10, so that no switch marks it, and rates with an infinite slope.
#[test]
fn hidden_kinks_and_roots_break_no_good_bound() {
    let mut random = Random::new(29);
    let (mut good, mut broken) = (0, Vec::new());
    for scheme in all() {
        for _ in 0..60 {
            let (a, step) = (random.between(0.3, 1.7), 10.0_f64.powf(random.between(-2.5, -0.7)));
            // x' = |t - a|: x = ((t-a)|t-a| + a^2)/2.  x' = |t - a|^(1/3): x = 3/4 (|t-a|^(4/3) + a^(4/3)) beyond a.
            for (rate, exact) in [
                (format!("sqrt((t-{a})^2+1e-20)"), 0.5 * (2.0 - a) * (2.0 - a) + 0.5 * a * a),
                (format!("((t-{a})^2)^(1/6)"), 0.75 * ((2.0 - a).powf(4.0 / 3.0) + a.powf(4.0 / 3.0))),
                (format!("sqrt((t-{a})^2+1e-20)-x"), {
                    // x' = |t-a| - x: particular solutions a-t+1 before and t-a-1 after, x(a) from the first.
                    let before = 1.0 - (a + 1.0) * (-a).exp();
                    (2.0 - a - 1.0) + (before + 1.0) * (-(2.0 - a)).exp()
                }),
            ] {
                let model = format!("states: {{x: 0}}\nrates:\n  x: \"{rate}\"");
                let (_, outcome) = evaluate("kink.md", &study(&model, scheme.key, step, 2.0)).unwrap();
                let quantity = &outcome.runs[0].quantities[0];
                let error = (quantity.value.unwrap() - exact).abs();
                if let Some(bound) = quantity.bound.filter(|_| quantity.grade < Grade::Indicated) {
                    good += 1;
                    if error > bound {
                        broken.push(format!(
                            "{:.2} {} step {step} a {a} {rate}: {quantity:?}",
                            error / bound,
                            scheme.key
                        ));
                    }
                }
            }
        }
    }
    assert!(broken.is_empty(), "{} of {good}:\n{}", broken.len(), broken.join("\n"));
}

/// A pulse after a long quiet spell, of nothing before and after it: an adaptive run must not step over it unawares.
/// The narrowest is 1/250 of the span wide.
#[test]
fn a_pulse_after_a_quiet_spell_is_not_stepped_over() {
    let mut random = Random::new(31);
    let (mut count, mut broken) = (0, Vec::new());
    for scheme in all().iter().filter(|scheme| scheme.embedded_order.is_some()) {
        for _ in 0..80 {
            let (a, width) = (random.between(1.0, 9.0), random.between(0.02, 0.3));
            for tolerance in ["1e-3", "1e-5"] {
                let model = format!("states: {{x: 0}}\nrates:\n  x: \"max(0, 1-((t-{a})/{width})^2)\"");
                let text = study(&model, scheme.key, 0.1, 10.0)
                    .replace("step: 0.1", &format!("tolerance: {tolerance}"));
                let (_, outcome) = evaluate("pulse.md", &text).unwrap();
                let quantity = &outcome.runs[0].quantities[0];
                // The area of a parabola.
                let error = (quantity.value.unwrap() - 4.0 / 3.0 * width).abs();
                count += 1;
                if quantity.grade < Grade::Indicated && error > quantity.bound.unwrap() {
                    broken.push(format!(
                        "{} {tolerance} at {a} width {width}: error {error:e} {quantity:?}",
                        scheme.key
                    ));
                }
            }
        }
    }
    assert!(broken.is_empty(), "{} of {count}:\n{}", broken.len(), broken.join("\n"));
}
