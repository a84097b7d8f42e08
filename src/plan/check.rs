//! Checks of a plan: steps and tolerances, and units as far as their text tells.

use super::lay_out::aims;
use super::{Nominal, Plan, QuantityPlan, StepsPlan};
use crate::fault::{Fault, Faults};
use crate::model::Model;
use crate::scheme::{self, Scheme};
use crate::study::Study;
use crate::study::block::run::{Control, RunBlock};
use crate::unit::Value;

/// Smallest and largest tolerance that make sense in binary64.
const TOLERANCES: (f64, f64) = (1e-14, 0.1);

/// The unit of time of a run, as its times carry it.
pub(super) fn time_unit(block: &RunBlock) -> Option<String> {
    block.until.unit.clone()
}

/// The fault of a value whose unit is another than the one known, by text.
pub(super) fn unit_differs(value: &Value, known: Option<&String>, of: &str) -> Fault {
    let name = |unit: Option<&String>| unit.map_or_else(|| "no unit".to_owned(), |unit| format!("`{unit}`"));
    Fault::error(
        "unit-differs",
        value.at,
        format!("this value carries {}, but {of} carries {}", name(value.unit.as_ref()), name(known)),
    )
    .help("units are compared as text and not converted: write the value in the same unit")
}

/// How the steps of a run are chosen.
pub(super) fn steps(
    block: &RunBlock,
    model: &Model,
    scheme: &'static Scheme,
    (from, until): (f64, f64),
    limit: u64,
    quantities: Option<&[QuantityPlan]>,
    faults: &mut Faults,
) -> Option<StepsPlan> {
    match &block.control {
        Control::Step(step) => {
            let span = until - from;
            if step.number <= 0.0 {
                faults.add(
                    Fault::error("step-not-positive", step.at, format!("the step is {}", step.digits))
                        .help("give a step above zero; time always runs forward"),
                );
                return None;
            }
            if step.number > span && span > 0.0 {
                faults.add(
                    Fault::error(
                        "step-beyond-span",
                        step.at,
                        format!("the step {} is longer than the run", step.digits),
                    )
                    .help(format!("the run lasts {span}")),
                );
                return None;
            }
            let count = Nominal::uniform(from, until, step.number).steps();
            if count > limit {
                faults.add(
                    Fault::error(
                        "too-many-steps",
                        step.at,
                        format!("the run would take {count} steps, the limit is {limit}"),
                    )
                    .help("take a larger step, or raise `limit` in the run or `--limit`"),
                );
                return None;
            }
            if from + step.number == from || until - step.number == until {
                faults.add(Fault::error("step-too-small", step.at, "the step is below the rounding of time"));
                return None;
            }
            Some(StepsPlan::Fixed(step.number))
        }
        Control::Tolerance(tolerance) => {
            if scheme.embedded_order.is_none() {
                let pairs: Vec<&str> = scheme::all()
                    .iter()
                    .filter(|scheme| scheme.embedded_order.is_some())
                    .map(|scheme| scheme.key)
                    .collect();
                faults.add(
                    Fault::error(
                        "no-error-estimate",
                        tolerance.at,
                        format!("`{}` has no error estimate to hold a tolerance with", scheme.key),
                    )
                    .also(block.scheme.at, "this scheme")
                    .help(format!("give a `step` or an `aim`, or take one of {}", pairs.join(", "))),
                );
                return None;
            }
            if tolerance.unit.is_some() {
                faults.add(
                    Fault::error(
                        "tolerance-with-unit",
                        tolerance.at,
                        "a tolerance is relative and carries no unit",
                    )
                    .help("write it as in `tolerance: 1e-6`; the typical size of a state is its `scale`"),
                );
                return None;
            }
            if tolerance.number < TOLERANCES.0 || tolerance.number > TOLERANCES.1 {
                faults.add(
                    Fault::error(
                        "wrong-tolerance",
                        tolerance.at,
                        format!("the tolerance is {}", tolerance.digits),
                    )
                    .help(format!("give one from {:e} to {}", TOLERANCES.0, TOLERANCES.1)),
                );
                return None;
            }
            let mut scales = Vec::new();
            for state in &model.states {
                if let Some(scale) = &state.entry.scale {
                    if scale.number <= 0.0 {
                        faults.add(Fault::error(
                            "scale-not-positive",
                            scale.at,
                            "a typical scale must be above zero",
                        ));
                    } else if scale.unit != state.unit {
                        faults.add(unit_differs(
                            scale,
                            state.unit.as_ref(),
                            &format!("`{}`", state.entry.name.value),
                        ));
                    }
                }
                scales.push(state.entry.scale.as_ref().map(|scale| scale.number));
            }
            Some(StepsPlan::Adaptive { tolerance: tolerance.number, scales })
        }
        Control::Aim(_) => {
            if block.bound == crate::study::block::run::BoundAsked::None {
                faults.add(
                    Fault::error("aim-without-bound", block.name.at, "an aim needs a bound")
                        .help("leave `bound: none` out"),
                );
                return None;
            }
            aims(block, quantities?, faults).map(StepsPlan::Aim)
        }
    }
}

/// The limits of criteria against the units of their quantities.
pub(super) fn criteria(study: &Study, plan: &Plan, faults: &mut Faults) {
    for entry in study.blocks.criteria.iter().flat_map(|block| &block.criteria) {
        let Some((run, name)) = entry.quantity.value.split_once('.') else {
            continue;
        };
        let quantity = plan
            .runs
            .iter()
            .find(|candidate| candidate.name == run)
            .and_then(|run| run.quantities.iter().find(|candidate| candidate.name == name));
        if let Some(quantity) = quantity
            && quantity.unit != entry.limit.unit
        {
            let of = format!("`{}`", entry.quantity.value);
            let mut fault =
                unit_differs(&entry.limit, quantity.unit.as_ref(), &of).also(quantity.at, "this quantity");
            if quantity.unit.is_none() {
                fault = fault.help("give the quantity its unit: `{take: ..., unit: ...}`");
            }
            faults.add(fault);
        }
    }
}
