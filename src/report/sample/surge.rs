//! The surge study as the stages before hand it on: model, blocks and figures.

use super::{STUDY, text};
use crate::fault::{FileId, Span};
use crate::model::graph::{Graph, NodeId};
use crate::model::{Expression, Model, State};
use crate::report::{ChartFigure, ColumnHead, Figures, RunFigures, TableCell, TableFigure};
use crate::study::Text;
use crate::study::block::Blocks;
use crate::study::block::chart::{ChartBlock, Shows};
use crate::study::block::criteria::{CriteriaBlock, CriterionEntry, Relation};
use crate::study::block::model::{ModelBlock, ParameterEntry, Start, StateEntry};
use crate::study::block::run::{BoundAsked, Control, RunBlock};
use crate::study::block::table::{Lists, TableBlock};
use crate::unit::Value;

fn value(number: f64, unit: &str) -> Value {
    Value { number, digits: number.to_string(), unit: Some(unit.to_owned()), at: Span::default() }
}

pub(super) fn shaft() -> Model {
    let place = |needle: &str| {
        let start = STUDY.find(needle).unwrap();
        Span::new(FileId(0), start, start + needle.len())
    };
    let parameter = |name: &str, at: &str, number: f64, unit: &str, source: Option<&str>| ParameterEntry {
        name: Text { at: place(at), ..text(name) },
        value: value(number, unit),
        plusminus: (name == "k").then(|| value(0.05, "s^2/m")),
        sd: None,
        source: source.map(text),
        about: (name == "k").then(|| text("friction of the headrace, both ways")),
    };
    let state = |name: &str, at: &str, number: f64, unit: &str, rate: &str, about: &str| State {
        entry: StateEntry {
            name: Text { at: place(at), ..text(name) },
            start: Start::Value(value(number, unit)),
            unit: None,
            scale: Some(value(10.0, unit)),
            source: (name == "z").then(|| text("station log")),
            about: Some(text(about)),
        },
        unit: Some(unit.to_owned()),
        start: NodeId(0),
        rate_text: text(rate),
        rate: NodeId(0),
        exact: (name == "z").then(|| (text("z0*cos(omega*t)"), NodeId(0))),
    };
    let named = |name: &str, expression: &str, unit: Option<&str>, about: Option<&str>| Expression {
        name: text(name),
        text: text(expression),
        unit: unit.map(str::to_owned),
        about: about.map(text),
        node: NodeId(0),
    };
    Model {
        name: text("shaft"),
        about: Some(text("Rigid water column between a reservoir and a surge shaft")),
        parameters: vec![
            parameter("L", "L:  {", 3200.0, "m", Some("survey sheet 4")),
            parameter("A", "A:  {", 7.07, "m^2", Some("drawing 12-C")),
            parameter("As", "As: ", 78.5, "m^2", None),
            parameter("g", "g:  {", 9.80665, "m/s^2", Some("standard gravity")),
            parameter("k", "k:  {", 0.35, "s^2/m", Some("friction test of the invented plant, run 7")),
        ],
        states: vec![
            state("z", "z: {start", -1.5, "m", "v*A/As", "level in the shaft above the reservoir"),
            state("v", "v: {start", 2.1, "m/s", "-(g/L)*(z + loss)", "velocity in the headrace"),
        ],
        derived: vec![named("loss", "k*v*abs(v)", Some("m"), Some("head lost to friction"))],
        invariants: vec![named("energy", "0.5*v^2 + 0.5*(g*As/(L*A))*z^2", None, None)],
        graph: Graph::default(),
        symbols: crate::model::Symbols::default(),
    }
}

pub(super) fn blocks() -> Blocks {
    let run = |name: &str| RunBlock {
        name: text(name),
        model: text("shaft"),
        scheme: text("rk4"),
        control: Control::Step(value(0.5, "s")),
        from: None,
        until: value(600.0, "s"),
        with: Vec::new(),
        rows: None,
        quantities: Vec::new(),
        bound: BoundAsked::default(),
        limit: None,
    };
    let criterion = |name: &str| CriterionEntry {
        name: text(name),
        text: text(""),
        quantity: text(""),
        relation: Relation::Less,
        limit: value(0.0, "m"),
        expect: None,
    };
    Blocks {
        models: vec![ModelBlock {
            name: text("shaft"),
            about: None,
            parameters: Vec::new(),
            states: Vec::new(),
            derived: Vec::new(),
            rates: Vec::new(),
            invariants: Vec::new(),
            exact: Vec::new(),
        }],
        runs: vec![run("reject"), run("rough"), run("sized")],
        charts: vec![ChartBlock {
            name: text("level"),
            title: None,
            shows: Shows::Stability(text("reject")),
            x_axis: None,
            y_axis: None,
        }],
        tables: vec![TableBlock {
            name: text("extremes"),
            title: None,
            lists: Lists::Quantities(Vec::new()),
        }],
        criteria: vec![CriteriaBlock {
            name: None,
            at: Span::default(),
            criteria: ["freeboard", "drawdown", "settled", "first-pass"].map(criterion).to_vec(),
        }],
    }
}

pub(super) fn figures() -> Figures {
    let cell = |text: &str, quantity: Option<&str>, unbounded: Option<&str>| TableCell {
        text: text.to_owned(),
        quantity: quantity.map(str::to_owned),
        unbounded: unbounded.map(str::to_owned),
    };
    let head = |name: &str, number| ColumnHead { name: name.to_owned(), unit: None, number };
    let chart = |name: &str, caption: &str| ChartFigure {
        name: name.to_owned(),
        svg: wave(name),
        caption: caption.to_owned(),
        note: Some(
            "Estimated bound over the curve at most 0.000029 m, weakest grade corroborated.".to_owned(),
        ),
    };
    Figures {
        charts: vec![chart("level", "Level in the shaft after load rejection")],
        tables: vec![TableFigure {
            name: "extremes".into(),
            caption: "Extremes of the level and when they occur".into(),
            note: Some("Bounds are estimated bounds of the numerical error.".into()),
            columns: vec![
                head("Quantity", false),
                head("Reads", false),
                head("Value and estimated bound", true),
            ],
            rows: vec![
                vec![
                    cell("reject.z_max", None, None),
                    cell("highest z", None, None),
                    cell("12.408731 ± 0.000029 m", Some("reject.z_max"), None),
                ],
                vec![
                    cell("rough.z_max", None, None),
                    cell("highest z", None, None),
                    cell("11.02 m", Some("rough.z_max"), Some("the run asks for no bound")),
                ],
                vec![
                    cell("reject.t_low", None, None),
                    cell("time when z falls through -20 m", None, None),
                    cell(
                        "",
                        Some("reject.t_low"),
                        Some("the level does not fall through −20 m before the run ends"),
                    ),
                ],
            ],
        }],
        runs: vec![RunFigures {
            convergence: Some(chart("reject-error", "Error of reject.z_max against the step")),
            stability: Some(chart(
                "reject-region",
                "Step times eigenvalue in the region of stability of rk4",
            )),
        }],
    }
}

/// A damped wave as a chart.
fn wave(name: &str) -> String {
    let points: Vec<String> = (0..=240)
        .map(|i| {
            let x = f64::from(i) / 240.0;
            let y =
                crate::arithmetic::elementary::exp(-2.0 * x) * crate::arithmetic::elementary::sin(24.0 * x);
            format!("{:.1},{:.1}", 60.0 + 620.0 * x, 200.0 - 150.0 * y)
        })
        .collect();
    format!(
        "<svg viewBox=\"0 0 720 400\" role=\"img\" aria-labelledby=\"{name}-title\" xmlns=\"http://www.w3.org/2000/svg\">\
         <title id=\"{name}-title\">Level</title><path d=\"M60 20V370H690\" fill=\"none\" stroke=\"#333\"/>\
         <text x=\"60\" y=\"390\" font-size=\"13\" font-family=\"sans-serif\">0</text>\
         <polyline points=\"{}\" fill=\"none\" stroke=\"#0072B2\" stroke-width=\"1.6\"/></svg>",
        points.join(" ")
    )
}
