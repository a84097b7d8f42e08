//! Verdicts of acceptance criteria.

use super::outcome::{CriterionOutcome, Quantity};
use crate::study::block::criteria::{CriterionEntry, Relation, Verdict};

/// The verdict on `value` with its `bound` against `limit`.
///
/// Met when the value and its bound lie on the right side of the limit, not met when both lie on the wrong side,
/// undecided when the limit lies within the bound, or when there is no bound.
pub fn verdict(value: f64, bound: Option<f64>, relation: Relation, limit: f64) -> Verdict {
    let Some(bound) = bound else {
        return Verdict::Undecided;
    };
    // The interval is widened outward by one rounding each.
    let (low, high) = ((value - bound).next_down(), (value + bound).next_up());
    let (low, high) = if bound == 0.0 { (value, value) } else { (low, high) };
    let (right, wrong) = match relation {
        Relation::Less => (high < limit, low >= limit),
        Relation::LessOrEqual => (high <= limit, low > limit),
        Relation::Greater => (low > limit, high <= limit),
        Relation::GreaterOrEqual => (low >= limit, high < limit),
    };
    match (right, wrong) {
        (true, _) => Verdict::Met,
        (_, true) => Verdict::NotMet,
        _ => Verdict::Undecided,
    }
}

/// What came of a criterion on `quantity`.
pub(super) fn decide(entry: &CriterionEntry, quantity: &Quantity) -> CriterionOutcome {
    let limit = entry.limit.number;
    let (verdict, margin) = match quantity.value {
        Some(value) => {
            let margin = match entry.relation {
                Relation::Less | Relation::LessOrEqual => limit - value,
                Relation::Greater | Relation::GreaterOrEqual => value - limit,
            };
            (verdict(value, quantity.bound, entry.relation, limit), Some(margin))
        }
        None => (Verdict::Undecided, None),
    };
    let unit = entry.limit.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
    CriterionOutcome {
        name: entry.name.value.clone(),
        text: entry.text.value.clone(),
        quantity: entry.quantity.value.clone(),
        relation: entry.relation,
        limit,
        limit_text: format!("{}{unit}", entry.limit.digits),
        verdict,
        margin,
        expect: entry.expect.as_ref().map(|(verdict, because)| (*verdict, because.value.clone())),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_bound_decides() {
        let check = |value, bound| verdict(value, bound, Relation::LessOrEqual, 12.5);
        assert_eq!(check(12.0, Some(0.4)), Verdict::Met);
        assert_eq!(check(12.0, Some(0.6)), Verdict::Undecided);
        assert_eq!(check(13.0, Some(0.4)), Verdict::NotMet);
        assert_eq!(check(12.0, None), Verdict::Undecided);
        assert_eq!(check(12.5, Some(0.0)), Verdict::Met);
        assert_eq!(verdict(3.0, Some(0.0), Relation::GreaterOrEqual, 3.0), Verdict::Met);
        assert_eq!(verdict(3.0, Some(0.0), Relation::Greater, 3.0), Verdict::NotMet);
    }
}
