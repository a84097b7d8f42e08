//! The prose of a study as HTML: Markdown by pulldown-cmark, quoted quantities and blocks by templates.

use std::collections::BTreeMap;

use pulldown_cmark::{CowStr, Event, HeadingLevel, Tag, TagEnd, html};

use super::drawings::{self, Drawing};
use super::ledger::{line, overrides, quantity_id, span_text, steps_text};
use super::number::{align, parts, shown, split, value_alone};
use super::templates::{TemplateError, Templates};
use super::view::{
    CellView, ChartView, CriteriaView, CriterionView, EquationView, HeadView, ModelView, QuoteView, RunView,
    StateView, TableView,
};
use crate::arithmetic::larger;
use crate::bound::{Grade, Outcome, RowColumn};
use crate::figure::digits::{MOST_DIGITS, decade, rough, shown_at, size};
use crate::model::Model;
use crate::study::block::chart::ChartBlock;
use crate::study::block::criteria::{CriteriaBlock, Verdict};
use crate::study::block::model::Start;
use crate::study::block::table::{Lists, TableBlock};
use crate::study::{BlockRef, Part, Study};

/// Most rows of a run that a table shows; all stand in the data file.
const MOST_ROWS: usize = 200;

/// The places that quote each quantity, by its name.
pub(super) type Cites = BTreeMap<String, Vec<String>>;

/// Renders the prose of a study.
pub(super) struct Prose<'a> {
    pub(super) study: &'a Study,
    pub(super) models: &'a [Model],
    pub(super) outcome: &'a Outcome,
    pub(super) templates: &'a Templates,
    pub(super) charts: Vec<Option<Drawing>>,
}

impl Prose<'_> {
    /// The body as HTML, and the places that quote each quantity.
    pub(super) fn render(&self) -> Result<(String, Cites), TemplateError> {
        let mut cites = Cites::new();
        let mut events: Vec<Event<'_>> = Vec::new();
        let (mut figures, mut tables, mut criteria) = (0, 0, 0);
        for part in &self.study.body {
            match part {
                Part::Markdown(event) => events.push(lower_heading(event.clone())),
                Part::Quote(quote) => {
                    let name = &quote.quantity.value;
                    let html = self.quote(name, quote.plain, &mut cites)?;
                    events.push(Event::InlineHtml(CowStr::from(html)));
                }
                Part::Block(block) => {
                    let html = match *block {
                        BlockRef::Model(i) => self.model(i)?,
                        BlockRef::Run(i) => self.run(i)?,
                        BlockRef::Chart(i) => {
                            figures += 1;
                            self.chart(i, figures)?
                        }
                        BlockRef::Table(i) => {
                            tables += 1;
                            self.table(&self.study.blocks.tables[i], tables)?
                        }
                        BlockRef::Criteria(i) => {
                            let block = &self.study.blocks.criteria[i];
                            let html = self.criteria(block, criteria)?;
                            criteria += block.criteria.len();
                            html
                        }
                    };
                    events.push(Event::Html(CowStr::from(html)));
                }
            }
        }
        let mut body = String::new();
        html::push_html(&mut body, events.into_iter());
        Ok((body, cites))
    }

    fn quote(&self, name: &str, plain: bool, cites: &mut Cites) -> Result<String, TemplateError> {
        let Some((run, quantity)) = self.outcome.quantity(name) else {
            return Ok(String::new());
        };
        let list = cites.entry(name.to_owned()).or_default();
        let target = quantity_id(&run.name, &quantity.name);
        let id = format!("cite-{}-{}", target, list.len() + 1);
        list.push(id.clone());
        let html = self.templates.render(
            "quote.html",
            &QuoteView {
                id,
                target,
                text: if plain { value_alone(quantity) } else { shown(quantity) },
                grade: quantity.grade.word().to_owned(),
                weak: quantity.grade >= Grade::Indicated,
            },
        )?;
        // The end of the template's file is no blank in the sentence.
        Ok(html.trim().to_owned())
    }

    fn model(&self, i: usize) -> Result<String, TemplateError> {
        let model = &self.models[i];
        let text =
            |text: &Option<crate::study::Text>| text.as_ref().map_or_else(String::new, |t| t.value.clone());
        let equation = |expression: &crate::model::Expression| EquationView {
            name: expression.name.value.clone(),
            text: expression.text.value.clone(),
            unit: expression.unit.clone().unwrap_or_default(),
            about: text(&expression.about),
        };
        self.templates.render(
            "model.html",
            &ModelView {
                name: model.name.value.clone(),
                about: text(&model.about),
                states: model
                    .states
                    .iter()
                    .map(|state| StateView {
                        name: state.entry.name.value.clone(),
                        rate: state.rate_text.value.clone(),
                        start: match &state.entry.start {
                            Start::Value(value) => value.digits.clone(),
                            Start::Expression(text) => text.value.clone(),
                        },
                        unit: state.unit.clone().unwrap_or_default(),
                        about: text(&state.entry.about),
                        exact: state.exact.as_ref().map_or_else(String::new, |(text, _)| text.value.clone()),
                    })
                    .collect(),
                derived: model.derived.iter().map(equation).collect(),
                invariants: model.invariants.iter().map(equation).collect(),
            },
        )
    }

    fn run(&self, i: usize) -> Result<String, TemplateError> {
        let run = &self.outcome.runs[i];
        let weakest = run.quantities.iter().map(|quantity| quantity.grade).max();
        self.templates.render(
            "run.html",
            &RunView {
                name: run.name.clone(),
                id: format!("run-{}", run.name),
                model: self.models[run.model].name.value.clone(),
                scheme: run.scheme.name.to_owned(),
                steps: steps_text(run),
                span: span_text(run),
                weakest: weakest.map_or_else(String::new, |grade| grade.word().to_owned()),
                overrides: overrides(run),
            },
        )
    }

    fn chart(&self, i: usize, number: usize) -> Result<String, TemplateError> {
        let block: &ChartBlock = &self.study.blocks.charts[i];
        let (svg, note) = match &self.charts[i] {
            Some(drawing) => (drawing.svg.clone(), drawing.note.clone()),
            None => (String::new(), "nothing can be drawn: see the ledger".to_owned()),
        };
        let id = format!("figure-{}", block.name.value);
        self.templates
            .render("chart.html", &ChartView { id, number, title: drawings::title(block), svg, note })
    }

    fn table(&self, block: &TableBlock, number: usize) -> Result<String, TemplateError> {
        let title =
            block.title.as_ref().map_or_else(|| block.name.value.clone(), |title| title.value.clone());
        let mut view = TableView {
            id: format!("table-{}", block.name.value),
            number,
            title,
            quantities: Vec::new(),
            heads: Vec::new(),
            rows: Vec::new(),
        };
        match &block.lists {
            Lists::Quantities(names) => {
                let found = names.iter().filter_map(|name| self.outcome.quantity(&name.value));
                view.quantities = found.map(|(run, quantity)| line(run, quantity, &|_| Vec::new())).collect();
                let (mut values, mut bounds) = (Vec::new(), Vec::new());
                for quantity in &mut view.quantities {
                    values.push(&mut quantity.value);
                    bounds.push(&mut quantity.bound);
                }
                align(&mut values);
                align(&mut bounds);
            }
            Lists::Rows { run, columns } => self.rows(&mut view, &run.value, columns),
        }
        self.templates.render("table.html", &view)
    }

    fn rows(&self, view: &mut TableView, run: &str, columns: &[crate::study::Text]) {
        let Some(run) = self.outcome.runs.iter().find(|candidate| candidate.name == run) else {
            return;
        };
        let Some(rows) = &run.rows else {
            return;
        };
        let states = self.models[run.model].states.len();
        let wanted: Vec<_> = if columns.is_empty() {
            rows.columns.iter().take(states).collect()
        } else {
            let find =
                |name: &crate::study::Text| rows.columns.iter().find(|column| column.name == name.value);
            columns.iter().filter_map(find).collect()
        };
        view.heads.push(HeadView { name: "t".to_owned(), unit: run.time_unit.clone().unwrap_or_default() });
        for column in &wanted {
            view.heads
                .push(HeadView { name: column.name.clone(), unit: column.unit.clone().unwrap_or_default() });
        }
        // One place for a whole column: that which its largest bound supports.
        let place_of = |column: &RowColumn| {
            let largest = column.bounds.iter().flatten().fold(0.0, |largest, bound| larger(largest, *bound));
            let size = column.values.iter().fold(0.0, |size, value| larger(size, value.abs()));
            let coarsest = if size > 0.0 { decade(size) - MOST_DIGITS + 1 } else { i32::MIN };
            (largest > 0.0).then(|| (decade(largest) - 1).max(coarsest))
        };
        let places: Vec<Option<i32>> = wanted.iter().map(|column| place_of(column)).collect();
        let stride = rows.times.len().div_ceil(MOST_ROWS).max(1);
        for k in (0..rows.times.len()).step_by(stride) {
            let time =
                CellView { value: size_plain(rows.times[k]), bound: String::new(), grade: String::new() };
            let mut cells = vec![time];
            for (column, place) in wanted.iter().zip(&places) {
                let number = match (column.bounds[k], place) {
                    (Some(bound), Some(place)) => split(shown_at(column.values[k], bound, *place), None),
                    (bound, _) => parts(Some(column.values[k]), bound, false, None),
                };
                cells.push(CellView {
                    value: format!("{}{}", number.value, tail(&number.unit)),
                    bound: number.bound,
                    grade: column.grades[k].word().to_owned(),
                });
            }
            view.rows.push(cells);
        }
        for c in 0..view.heads.len() {
            let mut values: Vec<&mut String> = view.rows.iter_mut().map(|row| &mut row[c].value).collect();
            align(&mut values);
            let mut bounds: Vec<&mut String> = view.rows.iter_mut().map(|row| &mut row[c].bound).collect();
            align(&mut bounds);
        }
    }

    fn criteria(&self, block: &CriteriaBlock, first: usize) -> Result<String, TemplateError> {
        let mut rows = Vec::new();
        for (entry, criterion) in block.criteria.iter().zip(&self.outcome.criteria[first..]) {
            let quantity = self.outcome.quantity(&entry.quantity.value);
            let unit = entry.limit.unit.as_ref().map_or_else(String::new, |unit| format!(" {unit}"));
            rows.push(CriterionView {
                name: criterion.name.clone(),
                text: criterion.text.clone(),
                target: quantity.map_or_else(String::new, |(run, q)| quantity_id(&run.name, &q.name)),
                shown: quantity.map_or_else(String::new, |(_, quantity)| shown(quantity)),
                margin: criterion.margin.map_or_else(
                    || "\u{2013}".to_owned(),
                    |margin| format!("{}{unit}", rough_or_plain(margin)),
                ),
                verdict: criterion.verdict.words().to_owned(),
                class: match criterion.verdict {
                    Verdict::Met => "met",
                    Verdict::Undecided => "undecided",
                    Verdict::NotMet => "not-met",
                }
                .to_owned(),
                expect: criterion
                    .expect
                    .as_ref()
                    .map_or_else(String::new, |(verdict, _)| verdict.words().to_owned()),
                because: criterion.expect.as_ref().map_or_else(String::new, |(_, because)| because.clone()),
                as_expected: criterion.is_in_order(),
            });
        }
        self.templates.render("criteria.html", &CriteriaView { rows })
    }
}

/// A margin to two significant digits: it inherits the bound of its quantity.
fn rough_or_plain(value: f64) -> String {
    if value.fract() == 0.0 && value.abs() < 1e6 { rough(value).text(None) } else { size(value) }
}

fn size_plain(value: f64) -> String {
    // Times of rows are multiples of the interval; their last binary digits are no news.
    let short: f64 = format!("{value:.11e}").parse().unwrap_or(value);
    crate::figure::digits::plain(short)
}

fn tail(unit: &str) -> String {
    if unit.is_empty() { String::new() } else { format!(" {}", unit.trim_end()) }
}

/// The title is the heading of level 1, so those of the prose go down by one where they start there.
fn lower_heading(event: Event<'static>) -> Event<'static> {
    let down = |level: HeadingLevel| match level {
        HeadingLevel::H1 | HeadingLevel::H2 => HeadingLevel::H2,
        HeadingLevel::H3 => HeadingLevel::H3,
        HeadingLevel::H4 => HeadingLevel::H4,
        HeadingLevel::H5 => HeadingLevel::H5,
        HeadingLevel::H6 => HeadingLevel::H6,
    };
    match event {
        Event::Start(Tag::Heading { level, id, classes, attrs }) => {
            Event::Start(Tag::Heading { level: down(level), id, classes, attrs })
        }
        Event::End(TagEnd::Heading(level)) => Event::End(TagEnd::Heading(down(level))),
        event => event,
    }
}
