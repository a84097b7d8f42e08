//! What came of the surge study: invented numbers of a plausible size, with every grade and verdict.

use super::STUDY;
use crate::bound::{
    Companion, CriterionOutcome, Drift, Estimates, ExactError, Grade, Mesh, Outcome, Quantity, RunOutcome,
    Steps,
};
use crate::fault::{FileId, Span};
use crate::run::Rejections;
use crate::scheme::{Dense, ExactTableau, Scheme, Tableau};
use crate::study::block::criteria::{Relation, Verdict};
use std::sync::LazyLock;

/// A quantity of that grade with plausible evidence.
pub(in crate::report) fn quantity(
    name: &str,
    reads: &str,
    unit: &str,
    value: Option<f64>,
    bound: Option<f64>,
    grade: Grade,
) -> Quantity {
    let why = match grade {
        Grade::Corroborated => {
            "the companion agrees within a factor of 1.08 and the observed order is 3.97 of 4"
        }
        Grade::Converged => {
            "three meshes fall monotonically with observed order 3.94 of 4, and no companion was asked for"
        }
        Grade::Indicated => "the observed order 2.61 is far from the formal order 4",
        Grade::Unbounded if value.is_none() => "the level does not fall through −20 m before the run ends",
        Grade::Unbounded => "the run asks for no bound",
    };
    let error = bound.map(|bound| -bound / 1.6);
    Quantity {
        name: name.to_owned(),
        text: reads.to_owned(),
        about: (name == "z_max").then(|| "highest level of the first upsurge".to_owned()),
        unit: Some(unit.to_owned()),
        whole: false,
        value,
        bound,
        grade,
        why: why.to_owned(),
        estimates: Estimates {
            values: match (value, error) {
                (Some(v), Some(e)) => vec![Some(v), Some(v - e * 0.937), Some(v - e * 0.996)],
                (Some(v), None) => vec![Some(v)],
                (None, _) => vec![None, None, None],
            },
            observed_order: error.map(|_| if grade == Grade::Indicated { 2.61 } else { 3.97 }),
            formal_order: 4,
            halving: error,
            companion: error.filter(|_| grade == Grade::Corroborated).map(|e| e * 1.08),
            safety: 1.5,
            truncation: bound.map_or(0.0, |b| b * 0.98),
            interpolation: bound.map_or(0.0, |b| b * 0.0199),
            rounding: 3.1e-14,
        },
        time: (name == "z_max").then_some(96.137),
        true_error: error.filter(|_| name == "z_max").map(|e| e * 0.99),
        at: Span::new(FileId(0), STUDY.find("z_max: highest z").unwrap(), 0),
    }
}

/// A run of that name.
pub(in crate::report) fn run(name: &str, steps: Steps, quantities: Vec<Quantity>) -> RunOutcome {
    let mesh = |i: i32| Mesh {
        accepted: 1200 * 2_u64.pow(u32::try_from(i).unwrap()),
        smallest: 0.5 / f64::from(1 << i),
        largest: 0.5 / f64::from(1 << i),
        rejected: Rejections { local_error: 3, not_finite: 0, switch: 1 },
        evaluations: 7201 * 2_u64.pow(u32::try_from(i).unwrap()),
        switches: 9,
    };
    RunOutcome {
        name: name.to_owned(),
        model: 0,
        scheme: &RK4,
        steps,
        span: (0.0, 600.0),
        time_unit: Some("s".to_owned()),
        parameters: vec![3200.0, 7.07, 78.5, 9.80665, 0.35],
        start: vec![-1.5, 2.1],
        overrides: Vec::new(),
        meshes: (0..3).map(mesh).collect(),
        companion: None,
        quantities,
        rows: None,
        curves: Vec::new(),
        invariants: Vec::new(),
        exact: Vec::new(),
        spectrum: Vec::new(),
        caps: Vec::new(),
        remarks: Vec::new(),
    }
}

pub(super) fn outcome() -> Outcome {
    let mut reject = run(
        "reject",
        Steps::Fixed { step: 0.5 },
        vec![
            quantity(
                "z_max",
                "highest z",
                "m",
                Some(12.408_731_224_517_3),
                Some(2.94e-5),
                Grade::Corroborated,
            ),
            quantity("t_max", "time of highest z", "s", Some(96.137_442_1), Some(0.0018), Grade::Converged),
            quantity("z_min", "lowest z", "m", Some(-9.882_11), Some(0.031), Grade::Indicated),
            quantity("t_low", "time when z falls through -20 m", "s", None, None, Grade::Unbounded),
        ],
    );
    reject.companion = Some(Companion { steps: 1200, evaluations: 21_604 });
    reject.invariants = vec![Drift {
        name: "energy".into(),
        expression: "0.5*v^2 + 0.5*(g*As/(L*A))*z^2".into(),
        start: 2.243_1,
        largest: 3.2e-9,
        at_end: -1.1e-9,
    }];
    reject.exact = vec![ExactError { state: "z".into(), largest: 1.83e-5, time: 96.0 }];
    let mut rough = run(
        "rough",
        Steps::Adaptive { tolerance: 1e-6, scales: vec![10.0, 2.0] },
        vec![quantity("z_max", "highest z", "m", Some(11.02), None, Grade::Unbounded)],
    );
    rough.meshes.truncate(1);
    rough.overrides = vec![("k".into(), "0.45 s^2/m".into())];
    rough.caps = vec!["the rate of `v` has a kink at v = 0, which was placed on the mesh 9 times".into()];
    let aims = vec!["z_max: 0.01 m".to_owned()];
    let mut sized = run("sized", Steps::Aimed { step: 2.5, aims, trials: 6 }, Vec::new());
    sized.meshes.truncate(1);
    let criterion = |name: &str, quantity: &str, relation, limit: f64, verdict, margin| CriterionOutcome {
        name: name.to_owned(),
        text: format!("{quantity} {} {limit} m", if relation == Relation::LessOrEqual { "<=" } else { ">=" }),
        quantity: quantity.to_owned(),
        relation,
        limit,
        limit_text: format!("{limit} m").replace('-', "−"),
        verdict,
        margin,
        expect: None,
    };
    let expected = |verdict, because: &str| Some((verdict, because.to_owned()));
    Outcome {
        runs: vec![reject, rough, sized],
        criteria: vec![
            criterion(
                "freeboard",
                "reject.z_max",
                Relation::LessOrEqual,
                12.5,
                Verdict::Met,
                Some(0.091_268_8),
            ),
            criterion(
                "drawdown",
                "reject.z_min",
                Relation::GreaterOrEqual,
                -9.9,
                Verdict::Undecided,
                Some(0.017_89),
            ),
            CriterionOutcome {
                expect: expected(Verdict::NotMet, "shows what too small a shaft would do"),
                ..criterion(
                    "settled",
                    "reject.t_max",
                    Relation::LessOrEqual,
                    90.0,
                    Verdict::NotMet,
                    Some(-6.137_4),
                )
            },
            CriterionOutcome {
                expect: expected(Verdict::Met, "the level should pass"),
                ..criterion(
                    "first-pass",
                    "reject.t_low",
                    Relation::LessOrEqual,
                    30.0,
                    Verdict::Undecided,
                    None,
                )
            },
        ],
    }
}

static RK4: LazyLock<Scheme> = LazyLock::new(|| Scheme {
    key: "rk4",
    name: "Kutta's classical scheme",
    source: "W. Kutta (1901), Z. Math. Phys. 46; Hairer, Nørsett & Wanner I (2nd ed. 1993), sect. II.1",
    serves: "",
    drawing: "",
    order: 4,
    embedded_order: None,
    tableau: Tableau {
        c: vec![0.0, 0.5, 0.5, 1.0],
        a: vec![vec![], vec![0.5], vec![0.0, 0.5], vec![0.0, 0.0, 1.0]],
        b: vec![1.0 / 6.0, 1.0 / 3.0, 1.0 / 3.0, 1.0 / 6.0],
        error: None,
        first_same_as_last: false,
        exact: ExactTableau { c: Vec::new(), a: Vec::new(), b: Vec::new(), b_hat: None, b_theta: None },
    },
    dense: Dense::Hermite { lifts: 0 },
});
