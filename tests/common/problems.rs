//! Random smooth problems whose solution is known, as texts of studies.
//!
//! The families are textbook equations with closed forms (Hairer, Norsett & Wanner I, ch. I), and systems made
//! to have a chosen solution (method of manufactured solutions; Salari & Knupp 2000, SAND2000-1444).

use super::random::Random;

/// A problem: the body of a model block, its span, and quantities to read.
pub struct Problem {
    /// Which family.
    pub family: &'static str,
    /// The body of the model block.
    pub model: String,
    /// End of time.
    pub until: f64,
    /// A time over which the solution changes by its own size.
    pub scale: f64,
    /// Quantities.
    pub quantities: Vec<String>,
}

/// Problem number `i`.
pub fn problem(i: u64) -> Problem {
    let mut r = Random::new(i);
    match r.below(14) {
        0 => {
            let (a, y0) = (r.between(-1.5, 0.6), r.between(0.5, 3.0));
            make(
                "exponential",
                r.between(1.0, 5.0),
                1.0,
                format!("states: {{x: {y0}}}\nrates: {{x: \"{a}*x\"}}\nexact: {{x: \"{y0}*exp({a}*t)\"}}"),
                &[],
            )
        }
        1 => {
            let (rate, k, y0) = (r.between(0.4, 2.0), r.between(1.0, 20.0), r.between(0.1, 0.5));
            make(
                "logistic",
                r.between(3.0, 10.0),
                1.0 / rate,
                format!(
                    "states: {{x: {y0}}}\nrates: {{x: \"{rate}*x*(1-x/{k})\"}}\nexact: {{x: \"{k}/(1+({k}/{y0}-1)*exp(-{rate}*t))\"}}"
                ),
                &[&format!("time when x rises through {}", 0.8 * y0 + 0.1 * k)],
            )
        }
        2 => {
            let (w, d, x0) = (r.between(0.5, 3.0), r.between(0.0, 0.4), r.between(0.5, 2.0));
            let wd = format!("sqrt({w}^2-{d}^2)");
            make(
                "damped oscillator",
                r.between(4.0, 14.0),
                1.0 / w,
                format!(
                    "states: {{x: {x0}, v: 0}}\nrates: {{x: v, v: \"-{w}^2*x-2*{d}*v\"}}\nexact:\n  x: \"{x0}*exp(-{d}*t)*(cos({wd}*t)+{d}/{wd}*sin({wd}*t))\"\n  v: \"-{x0}*exp(-{d}*t)*{w}^2/{wd}*sin({wd}*t)\""
                ),
                &[
                    "time when x falls through 0",
                    "lowest x",
                    "time of lowest x",
                    "highest v",
                    "count of x crosses 0.01",
                ],
            )
        }
        3 => {
            let (a, w, y0) = (r.between(0.3, 4.0), r.between(0.5, 3.0), r.between(-1.0, 2.0));
            make(
                "relaxation toward a wave",
                r.between(3.0, 9.0),
                1.0 / (a + w),
                format!(
                    "states: {{x: {y0}}}\nrates: {{x: \"-{a}*(x-cos({w}*t))-{w}*sin({w}*t)\"}}\nexact: {{x: \"cos({w}*t)+({y0}-1)*exp(-{a}*t)\"}}"
                ),
                &["lowest x", "time of lowest x"],
            )
        }
        4 => {
            let y0 = r.between(0.3, 3.0);
            make(
                "Riccati",
                r.between(2.0, 12.0),
                1.0 / y0,
                format!("states: {{x: {y0}}}\nrates: {{x: \"-x^2\"}}\nexact: {{x: \"1/(1/{y0}+t)\"}}"),
                &[],
            )
        }
        5 => {
            let (a, y0) = (r.between(0.4, 1.6), r.between(0.5, 2.0));
            make(
                "periodic growth",
                r.between(4.0, 14.0),
                1.0,
                format!(
                    "states: {{x: {y0}}}\nrates: {{x: \"{a}*x*cos(t)\"}}\nexact: {{x: \"{y0}*exp({a}*sin(t))\"}}"
                ),
                &["lowest x", "time of highest x", &format!("time when x falls through {y0}")],
            )
        }
        6 => {
            let y0 = r.between(0.05, 0.5);
            make(
                "Bernoulli",
                r.between(3.0, 8.0),
                1.0,
                format!(
                    "states: {{x: {y0}}}\nrates: {{x: \"x-x^3\"}}\nexact: {{x: \"{y0}*exp(t)/sqrt(1+{y0}^2*(exp(2*t)-1))\"}}"
                ),
                &["time when x rises through 0.6"],
            )
        }
        7 => {
            let (w, c) = (r.between(0.5, 2.5), r.between(-0.8, 0.3));
            let (b, k) = (r.between(-0.5, 0.5), r.between(0.2, 1.2));
            make(
                "coupled pair",
                r.between(3.0, 10.0),
                1.0 / (1.0 + w),
                format!(
                    "states: {{x: 0, y: 1}}\nderived: {{X: \"sin({w}*t)\", Y: \"exp(-{k}*t)+0.5*sin(t)\"}}\nrates:\n  x: \"{w}*cos({w}*t)+{c}*(x-X)+{b}*sin(y-Y)+0.3*(x-X)*(y-Y)\"\n  y: \"-{k}*exp(-{k}*t)+0.5*cos(t)-0.5*(y-Y)+{b}*(x-X)\"\nexact: {{x: \"sin({w}*t)\", y: \"exp(-{k}*t)+0.5*sin(t)\"}}"
                ),
                &["time of highest x", "lowest x", "highest x*y", "mean y", "time when y falls through 0.5"],
            )
        }
        8 => {
            // A feed against a loss that turns its sign with the state: a kink of the rate where x = 0.
            let (k, a) = (r.between(0.5, 2.0), r.between(0.4, 1.5));
            let y0 = -r.between(0.2, 0.8) * k / a;
            let turn = format!("(ln({k}/{a}/({y0}+{k}/{a}))/{a})");
            let before = format!("(-{k}/{a}+({y0}+{k}/{a})*exp({a}*min(t,{turn})))");
            let after = format!("({k}/{a}*(1-exp(-{a}*max(t-{turn},0))))");
            make(
                "kink at a level",
                r.between(3.0, 8.0),
                1.0 / a,
                format!(
                    "states: {{x: {y0:?}}}\nrates: {{x: \"{k}-{a}*abs(x)\"}}\nexact: {{x: \"{before}+{after}\"}}"
                ),
                &["time when x rises through 0", &format!("time when x rises through {}", 0.4 * k / a)],
            )
        }
        9 => {
            // A shot upward against quadratic drag: tan on the way up, tanh on the way down.
            let (vt, v0) = (r.between(10.0, 40.0), r.between(8.0, 40.0));
            let turn = format!("({vt}/9.81*atan({v0}/{vt}))");
            let up = format!("({vt}*tan(max(atan({v0}/{vt})-9.81*t/{vt},0)))");
            let down = format!("({vt}*tanh(9.81*max(t-{turn},0)/{vt}))");
            make(
                "shot against drag",
                r.between(2.0, 8.0),
                vt / 9.81,
                format!(
                    "states: {{x: {v0}}}\nrates: {{x: \"-9.81*(1+x*abs(x)/{vt}^2)\"}}\nexact: {{x: \"{up}-{down}\"}}"
                ),
                &["time when x falls through 0", "lowest x", "integral of abs(x)"],
            )
        }
        10 => {
            // A source that is switched on.
            let (k, size, on) = (r.between(0.3, 2.0), r.between(0.2, 3.0), r.between(0.4, 2.0));
            let after = format!("max(t-{on},0)");
            make(
                "jump in time",
                r.between(3.0, 6.0),
                1.0 / k,
                format!(
                    "states: {{x: 1}}\nrates: {{x: \"-{k}*x+{size}*(1+signum(t-{on}))/2\"}}\nexact: {{x: \"exp(-{k}*t)+{size}/{k}*(1-exp(-{k}*{after}))\"}}"
                ),
                &["lowest x", "time of lowest x"],
            )
        }
        11 => {
            // A fill at constant speed, then a relaxation.
            let (a, b) = (r.between(0.2, 0.8), r.between(1.2, 3.0));
            let turn = format!("(({b}-{a})/{a})");
            make(
                "saturated fill",
                r.between(4.0, 14.0),
                1.0,
                format!(
                    "states: {{x: 0, y: 1}}\nrates: {{x: \"min({a},{b}-x)\", y: \"-y*x\"}}\nexact:\n  x: \"{a}*min(t,{turn})+{a}*(1-exp(-max(t-{turn},0)))\"\n  y: \"exp(-({a}*min(t,{turn})^2/2+{b}*max(t-{turn},0)-{a}*(1-exp(-max(t-{turn},0)))))\""
                ),
                &[&format!("time when x rises through {}", b - 0.5 * a), "integral of y", "final y"],
            )
        }
        12 => {
            // The speed halves when a level is reached; a second state follows.
            let level = r.between(0.5, 2.0);
            let (before, after) = (format!("min(t,{level})"), format!("max(t-{level},0)"));
            make(
                "jump at a level",
                level + r.between(1.0, 5.0),
                1.0,
                format!(
                    "states: {{z: 0, x: 0}}\nrates: {{z: \"(3-signum(z-{level}))/4\", x: \"z-x\"}}\nexact:\n  z: \"{before}+{after}/2\"\n  x: \"({before}-1+exp(-{before}))*exp(-{after})+({level}-1/2)*(1-exp(-{after}))+{after}/2\""
                ),
                &["final z", &format!("time when z rises through {}", level + 0.3)],
            )
        }
        _ => {
            let (w, a) = (r.between(0.4, 2.0), r.between(0.2, 1.0));
            make(
                "turning vector",
                r.between(4.0, 14.0),
                1.0 / w,
                format!(
                    "states: {{x: 1, y: 0, z: 0.5}}\nrates:\n  x: \"-{w}*y*(x^2+y^2)\"\n  y: \"{w}*x*(x^2+y^2)\"\n  z: \"-{a}*z+x^2+y^2\"\nexact: {{x: \"cos({w}*t)\", y: \"sin({w}*t)\", z: \"1/{a}+(0.5-1/{a})*exp(-{a}*t)\"}}"
                ),
                &["time when y falls through 0", "highest y", "final z", "2nd time when x falls through 0.2"],
            )
        }
    }
}

fn make(family: &'static str, until: f64, scale: f64, model: String, more: &[&str]) -> Problem {
    let mut quantities: Vec<String> = vec![
        "final x".to_owned(),
        "highest x".to_owned(),
        "integral of x".to_owned(),
        "mean x".to_owned(),
        format!("x at {:.3}", 0.37 * until),
    ];
    quantities.extend(more.iter().map(|text| (*text).to_owned()));
    Problem { family, model, until, scale, quantities }
}

impl Problem {
    /// The study that integrates the problem: `control` is a line such as `step: 0.1`.
    pub fn study(&self, scheme: &str, control: &str) -> String {
        let mut text = format!(
            "---\nstudy: {}\n---\n\n```model m\n{}\n```\n\n```run r\nmodel: m\nscheme: {scheme}\n{control}\nuntil: {}\nrows: every {:.5}\nquantities:\n",
            self.family,
            self.model,
            self.until,
            self.until / 23.7
        );
        for (i, quantity) in self.quantities.iter().enumerate() {
            text.push_str(&format!("  q{i}: \"{quantity}\"\n"));
        }
        text.push_str("```\n");
        text
    }
}
