//! `data/RUN.csv`: the rows of a run as comma-separated values.
//!
//! RFC 4180 but for the line end, which is a line feed. Time first, then value, bound and grade of every
//! column; a missing bound is an empty cell.

use super::number::{RecordError, decimal, finite};
use crate::bound::Rows;

/// The rows of a run as text: `t [s],z [m],z bound,z grade`, then one line a time.
///
/// Numbers are the shortest decimals that read back to the same bits. The bound has the unit of its value.
///
/// # Errors
/// [`RecordError::NotFinite`] for a NaN or an infinity, [`RecordError::Uneven`] where a column is not as long
/// as the times.
pub fn compose(run: &str, rows: &Rows, time_unit: Option<&str>) -> Result<String, RecordError> {
    let n = rows.times.len();
    let mut text = escape(&with_unit("t", time_unit));
    for column in &rows.columns {
        if column.values.len() != n || column.bounds.len() != n || column.grades.len() != n {
            return Err(RecordError::Uneven(format!("{} of the rows of run {run}", column.name)));
        }
        for head in [
            with_unit(&column.name, column.unit.as_deref()),
            format!("{} bound", column.name),
            format!("{} grade", column.name),
        ] {
            text.push(',');
            text.push_str(&escape(&head));
        }
    }
    text.push('\n');
    for (i, &time) in rows.times.iter().enumerate() {
        text.push_str(&decimal(finite(time, &format!("time of row {i} of run {run}"))?));
        for column in &rows.columns {
            let place = || format!("{} in row {i} of run {run}", column.name);
            text.push(',');
            text.push_str(&decimal(finite(column.values[i], &place())?));
            text.push(',');
            if let Some(bound) = column.bounds[i] {
                text.push_str(&decimal(finite(bound, &place())?));
            }
            text.push(',');
            text.push_str(column.grades[i].word());
        }
        text.push('\n');
    }
    Ok(text)
}

fn with_unit(name: &str, unit: Option<&str>) -> String {
    unit.map_or_else(|| name.to_owned(), |unit| format!("{name} [{unit}]"))
}

/// RFC 4180, section 2: a field with a comma, a quote or a line break stands in quotes, quotes doubled.
fn escape(field: &str) -> String {
    if field.contains([',', '"', '\n', '\r']) {
        format!("\"{}\"", field.replace('"', "\"\""))
    } else {
        field.to_owned()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::bound::{Grade, RowColumn};

    fn rows() -> Rows {
        Rows {
            every: "1 s".to_owned(),
            columns: vec![
                RowColumn {
                    name: "z".to_owned(),
                    unit: Some("m".to_owned()),
                    values: vec![-1.5, 0.1],
                    bounds: vec![Some(0.0), None],
                    grades: vec![Grade::Corroborated, Grade::Unbounded],
                },
                RowColumn {
                    name: "v".to_owned(),
                    unit: None,
                    values: vec![2.0, 1e-7],
                    bounds: vec![Some(1e-9), Some(0.25)],
                    grades: vec![Grade::Converged, Grade::Indicated],
                },
            ],
            times: vec![0.0, 1.0],
        }
    }

    #[test]
    fn rows_become_one_line_each() {
        assert_eq!(
            compose("reject", &rows(), Some("s")).unwrap(),
            "t [s],z [m],z bound,z grade,v,v bound,v grade\n\
             0,-1.5,0,corroborated,2,1e-9,converged\n\
             1,0.1,,unbounded,1e-7,0.25,indicated\n"
        );
    }

    #[test]
    fn a_unit_with_a_comma_or_a_quote_is_quoted() {
        let mut rows = rows();
        rows.columns.truncate(1);
        rows.columns[0].unit = Some("m, \"gauge\"".to_owned());
        let text = compose("reject", &rows, None).unwrap();
        assert!(text.starts_with("t,\"z [m, \"\"gauge\"\"]\",z bound,z grade\n"), "{text}");
    }

    #[test]
    fn a_number_that_is_not_finite_is_refused() {
        let mut rows = rows();
        rows.columns[1].values[1] = f64::NAN;
        let place = "v in row 1 of run reject".to_owned();
        assert_eq!(compose("reject", &rows, None), Err(RecordError::NotFinite(place)));
        rows.columns[1].values[1] = 0.0;
        rows.columns[0].bounds[0] = Some(f64::INFINITY);
        assert!(compose("reject", &rows, None).is_err());
    }

    #[test]
    fn columns_of_unequal_length_are_refused() {
        let mut rows = rows();
        rows.columns[0].grades.pop();
        assert!(matches!(compose("reject", &rows, None), Err(RecordError::Uneven(_))));
    }
}
