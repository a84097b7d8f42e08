//! The tables of a study as cells of text.

use super::{ColumnHead, TableCell, TableFigure};
use crate::arithmetic::larger;
use crate::bound::{Grade, Outcome, Quantity, RowColumn};
use crate::figure::digits::{MOST_DIGITS, Shown, decade, plain, rough, shown, shown_at, superscript};
use crate::model::Model;
use crate::study::Study;
use crate::study::block::table::{Lists, TableBlock};

/// Most rows of a run that a table shows; all stand in the data file.
const MOST_ROWS: usize = 120;

/// The tables in the order of the study.
pub(super) fn tables(study: &Study, models: &[Model], outcome: &Outcome) -> Vec<TableFigure> {
    study.blocks.tables.iter().map(|block| table(block, models, outcome)).collect()
}

fn table(block: &TableBlock, models: &[Model], outcome: &Outcome) -> TableFigure {
    let mut figure = TableFigure {
        name: block.name.value.clone(),
        caption: block.title.as_ref().map_or_else(|| block.name.value.clone(), |title| title.value.clone()),
        ..TableFigure::default()
    };
    match &block.lists {
        Lists::Quantities(names) => {
            let found =
                names.iter().filter_map(|name| outcome.quantity(&name.value).map(|(_, q)| (&name.value, q)));
            figure.columns = ["quantity", "what", "value", "± bound", "unit", "grade"]
                .into_iter()
                .map(|name| head(name, None, name == "value" || name == "± bound"))
                .collect();
            figure.rows = found.map(|(name, quantity)| quantity_row(name, quantity)).collect();
        }
        Lists::Rows { run, columns } => {
            let names: Vec<&str> = columns.iter().map(|column| column.value.as_str()).collect();
            rows(&mut figure, &run.value, &names, models, outcome);
        }
    }
    align(&mut figure);
    figure
}

fn head(name: &str, unit: Option<&str>, number: bool) -> ColumnHead {
    ColumnHead { name: name.to_owned(), unit: unit.map(str::to_owned), number }
}

fn cell(text: impl Into<String>) -> TableCell {
    TableCell { text: text.into(), ..TableCell::default() }
}

fn quantity_row(name: &str, quantity: &Quantity) -> Vec<TableCell> {
    let number = match (quantity.value, quantity.bound) {
        (Some(value), Some(_)) if quantity.whole => {
            Shown { value: plain(value), bound: "0".to_owned(), exponent: None }
        }
        (Some(value), Some(bound)) => shown(value, bound),
        (Some(value), None) => rough(value),
        (None, _) => Shown { value: "\u{2013}".to_owned(), bound: String::new(), exponent: None },
    };
    let what = quantity.about.as_ref().unwrap_or(&quantity.text);
    let power = number.exponent.map_or_else(String::new, |n| format!("× 10{} ", superscript(n)));
    let mut value = cell(number.value);
    value.unbounded = quantity.bound.is_none().then(|| quantity.why.clone());
    vec![
        TableCell { text: name.to_owned(), quantity: Some(name.to_owned()), unbounded: None },
        cell(what),
        value,
        cell(number.bound),
        cell(format!("{power}{}", quantity.unit.as_deref().unwrap_or(""))),
        cell(quantity.grade.word()),
    ]
}

/// The rows of a run: time, then value, bound and grade of each column.
fn rows(figure: &mut TableFigure, run: &str, wanted: &[&str], models: &[Model], outcome: &Outcome) {
    let Some((run, rows)) = outcome
        .runs
        .iter()
        .find(|candidate| candidate.name == run)
        .and_then(|run| run.rows.as_ref().map(|rows| (run, rows)))
    else {
        return;
    };
    let columns: Vec<&RowColumn> = if wanted.is_empty() {
        rows.columns.iter().take(models[run.model].states.len()).collect()
    } else {
        wanted.iter().filter_map(|name| rows.columns.iter().find(|column| column.name == *name)).collect()
    };
    figure.columns.push(head("t", run.time_unit.as_deref(), true));
    for column in &columns {
        figure.columns.push(head(&column.name, column.unit.as_deref(), true));
        figure.columns.push(head("± bound", None, true));
        figure.columns.push(head("grade", None, false));
    }
    let stride = rows.times.len().div_ceil(MOST_ROWS).max(1);
    if stride > 1 {
        figure.note = Some(format!(
            "Every {stride}th of {} rows; all stand in data/{}.csv",
            rows.times.len(),
            run.name
        ));
    }
    let places: Vec<Option<i32>> = columns.iter().map(|column| place(column)).collect();
    for k in (0..rows.times.len()).step_by(stride) {
        // Times of rows are multiples of the interval; their last binary digits are no news.
        let time: f64 = format!("{:.11e}", rows.times[k]).parse().unwrap_or(rows.times[k]);
        let mut cells = vec![cell(plain(time))];
        for (column, place) in columns.iter().zip(&places) {
            let number = match (column.bounds[k], place) {
                (Some(bound), Some(place)) => shown_at(column.values[k], bound, *place),
                (Some(bound), None) => shown(column.values[k], bound),
                (None, _) => rough(column.values[k]),
            };
            let power = number.exponent.map_or_else(String::new, |n| format!(" × 10{}", superscript(n)));
            let mut value = cell(format!("{}{power}", number.value));
            value.unbounded = (column.grades[k] == Grade::Unbounded).then(|| "no bound".to_owned());
            cells.extend([value, cell(number.bound), cell(column.grades[k].word())]);
        }
        figure.rows.push(cells);
    }
}

/// One place for a whole column: that which its largest bound supports.
fn place(column: &RowColumn) -> Option<i32> {
    let largest = column.bounds.iter().flatten().fold(0.0, |largest, bound| larger(largest, *bound));
    let size = column.values.iter().fold(0.0, |size, value| larger(size, value.abs()));
    let coarsest = if size > 0.0 { decade(size) - MOST_DIGITS + 1 } else { i32::MIN };
    (largest > 0.0).then(|| (decade(largest) - 1).max(coarsest))
}

/// Pads the numbers of each column behind their decimal mark with spaces as wide as digits, so that a column set to
/// the right aligns at the mark.
fn align(figure: &mut TableFigure) {
    let behind = |text: &str| text.rsplit_once('.').map_or(0, |(_, behind)| behind.chars().count() + 1);
    let is_number = |text: &str| text.contains(|c: char| c.is_ascii_digit());
    for (c, head) in figure.columns.iter().enumerate() {
        if !head.number {
            continue;
        }
        let texts = figure.rows.iter().map(|row| row[c].text.as_str()).filter(|text| is_number(text));
        let most = texts.map(behind).max().unwrap_or(0);
        for row in &mut figure.rows {
            let text = &mut row[c].text;
            if is_number(text) {
                for k in behind(text)..most {
                    // U+2008 is as wide as a point, U+2007 as a digit.
                    text.push(if k == 0 { '\u{2008}' } else { '\u{2007}' });
                }
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_align_at_the_decimal_mark() {
        let mut figure = TableFigure { columns: vec![head("value", None, true)], ..TableFigure::default() };
        figure.rows = ["10.38", "4", "0.5"].into_iter().map(|text| vec![cell(text)]).collect();
        align(&mut figure);
        let texts: Vec<&str> = figure.rows.iter().map(|row| row[0].text.as_str()).collect();
        assert_eq!(texts, ["10.38", "4\u{2008}\u{2007}\u{2007}", "0.5\u{2007}"]);
    }
}
