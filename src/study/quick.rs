//! Temporary.
#![allow(
    warnings,
    clippy::all,
    clippy::pedantic,
    clippy::allow_attributes_without_reason,
    clippy::unwrap_used,
    clippy::panic
)]
use super::block::criteria::*;
use super::block::model::*;
use super::block::run::*;
use super::block::*;
use super::*;
use crate::fault::*;
use crate::unit::Value as V;
use serde_yaml::Value;
fn text(s: &str) -> Text {
    Text { value: s.to_owned(), at: Span::default(), exact: false }
}
fn st(v: &Value) -> String {
    match v {
        Value::String(s) => s.clone(),
        Value::Number(n) => n.to_string(),
        _ => panic!("{v:?}"),
    }
}
fn val(v: &Value) -> Option<V> {
    let s = st(v);
    let (n, u) = match s.split_once(' ') {
        Some((n, u)) => (n.to_owned(), Some(u.to_owned())),
        None => (s.clone(), None),
    };
    let number: f64 = n.parse().ok()?;
    Some(V { number, digits: n, unit: u, at: Span::default() })
}
fn pairs(v: &Value, k: &str) -> Vec<(String, Value)> {
    v.get(k)
        .and_then(|m| m.as_mapping())
        .map(|m| m.iter().map(|(a, b)| (st(a), b.clone())).collect())
        .unwrap_or_default()
}
fn passage(s: &str) -> Passage {
    for (w, d) in [
        (" falls through ", Direction::Falls),
        (" rises through ", Direction::Rises),
        (" crosses ", Direction::Crosses),
    ] {
        if let Some((a, b)) = s.split_once(w) {
            return Passage {
                expression: text(a),
                direction: d,
                level: match val(&Value::String(b.to_owned())) {
                    Some(v) => Level::Value(v),
                    None => Level::Expression(text(b)),
                },
            };
        }
    }
    panic!()
}
pub fn reading(s: &str) -> Reading {
    if let Some(r) = s.strip_prefix("final ") {
        return Reading::Final(text(r));
    }
    if let Some(r) = s.strip_prefix("highest ") {
        return Reading::Highest(text(r));
    }
    if let Some(r) = s.strip_prefix("lowest ") {
        return Reading::Lowest(text(r));
    }
    if let Some(r) = s.strip_prefix("mean ") {
        return Reading::Mean(text(r));
    }
    if let Some(r) = s.strip_prefix("integral of ") {
        return Reading::Integral(text(r));
    }
    if let Some(r) = s.strip_prefix("time of highest ") {
        return Reading::TimeOfHighest(text(r));
    }
    if let Some(r) = s.strip_prefix("time of lowest ") {
        return Reading::TimeOfLowest(text(r));
    }
    if let Some(r) = s.strip_prefix("time when ") {
        return Reading::TimeWhen(Occurrence::Nth(1), passage(r));
    }
    if let Some(r) = s.strip_prefix("2nd time when ") {
        return Reading::TimeWhen(Occurrence::Nth(2), passage(r));
    }
    if let Some(r) = s.strip_prefix("last time when ") {
        return Reading::TimeWhen(Occurrence::Last, passage(r));
    }
    if let Some(r) = s.strip_prefix("count of ") {
        return Reading::Count(passage(r));
    }
    let (a, b) = s.rsplit_once(" at ").unwrap();
    Reading::At(text(a), val(&Value::String(b.to_owned())).unwrap())
}
pub fn read(sources: &Sources, file: FileId, faults: &mut Faults) -> Option<Study> {
    let t = &sources.file(file).text;
    let mut blocks = Blocks::default();
    let mut rest = t.as_str();
    while let Some(i) = rest.find("\n```") {
        let r = &rest[i + 4..];
        let e = r.find("\n```").unwrap();
        let (info, body) = r[..e].split_once('\n').unwrap();
        rest = &r[e + 4..];
        let (kind, name) = info.split_once(' ').unwrap_or((info, ""));
        let v: Value = serde_yaml::from_str(body).unwrap_or_else(|e| panic!("{e}\n{body}"));
        match kind {
            "model" => blocks.models.push(ModelBlock {
                name: text(name),
                about: None,
                parameters: pairs(&v, "parameters")
                    .iter()
                    .map(|(n, v)| ParameterEntry {
                        name: text(n),
                        value: val(v.get("value").unwrap_or(v)).unwrap(),
                        plusminus: None,
                        sd: None,
                        source: None,
                        about: None,
                    })
                    .collect(),
                states: pairs(&v, "states")
                    .iter()
                    .map(|(n, v)| {
                        let s = v.get("start").unwrap_or(v);
                        StateEntry {
                            name: text(n),
                            start: val(s).map_or_else(|| Start::Expression(text(&st(s))), Start::Value),
                            unit: None,
                            scale: None,
                            source: None,
                            about: None,
                        }
                    })
                    .collect(),
                derived: pairs(&v, "derived")
                    .iter()
                    .map(|(n, v)| DerivedEntry {
                        name: text(n),
                        expression: text(&st(v)),
                        unit: None,
                        about: None,
                    })
                    .collect(),
                rates: pairs(&v, "rates").iter().map(|(n, v)| (text(n), text(&st(v)))).collect(),
                invariants: pairs(&v, "invariants").iter().map(|(n, v)| (text(n), text(&st(v)))).collect(),
                exact: pairs(&v, "exact").iter().map(|(n, v)| (text(n), text(&st(v)))).collect(),
            }),
            "run" => {
                let control = if let Some(s) = v.get("step") {
                    Control::Step(val(s).unwrap())
                } else if let Some(s) = v.get("tolerance") {
                    Control::Tolerance(val(s).unwrap())
                } else {
                    Control::Aim(vec![Aim { quantity: None, bound: val(v.get("aim").unwrap()).unwrap() }])
                };
                blocks.runs.push(RunBlock {
                    name: text(name),
                    model: text(&st(&v["model"])),
                    scheme: text(&st(&v["scheme"])),
                    control,
                    from: v.get("from").and_then(val),
                    until: val(&v["until"]).unwrap(),
                    with: vec![],
                    rows: None,
                    quantities: pairs(&v, "quantities")
                        .iter()
                        .map(|(n, v)| QuantityEntry {
                            name: text(n),
                            text: text(&st(v)),
                            reading: reading(&st(v)),
                            unit: None,
                            about: None,
                        })
                        .collect(),
                    bound: BoundAsked::HalvingAndCompanion,
                    limit: None,
                })
            }
            _ => {}
        }
    }
    Some(Study { front: FrontMatter { title: text("x"), entries: vec![] }, body: vec![], blocks })
}
