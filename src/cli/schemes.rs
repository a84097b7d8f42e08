//! `schemes`: lists the schemes, or shows one.

use super::console::Console;
use super::stages;
use super::status::Status;
use crate::fault::nearest;
use crate::scheme::Scheme;

/// The command `schemes`.
pub(super) fn schemes(name: Option<&str>, console: &Console) -> Status {
    let all = stages::schemes();
    let Some(name) = name else {
        console.print(&list(all));
        return Status::Well;
    };
    if let Some(scheme) = all.iter().find(|scheme| scheme.key == name) {
        console.print(&page(scheme));
        return Status::Well;
    }
    let near = nearest(name, all.iter().map(|scheme| scheme.key));
    let near = near.first().map_or_else(String::new, |near| format!("; do you mean `{near}`?"));
    console.fault(&format!("there is no scheme `{name}`{near}\n  `halfstep schemes` lists them all"));
    Status::Wrong
}

/// One line a scheme: key, name, order, embedded order, stages, source.
fn list(all: &[Scheme]) -> String {
    let head = ["KEY", "NAME", "ORDER", "EMBEDDED", "STAGES", "SOURCE"].map(str::to_owned);
    let line = |scheme: &Scheme| {
        [
            scheme.key.to_owned(),
            scheme.name.to_owned(),
            scheme.order.to_string(),
            scheme.embedded_order.map_or_else(|| "-".to_owned(), |order| order.to_string()),
            scheme.tableau.stages().to_string(),
            scheme.source.to_owned(),
        ]
    };
    lined_up(&std::iter::once(head).chain(all.iter().map(line)).collect::<Vec<_>>())
}

/// Cells in columns as wide as their widest, two blanks between, nothing behind the last.
fn lined_up<const N: usize>(lines: &[[String; N]]) -> String {
    let width = |i: usize| lines.iter().map(|cells| cells[i].chars().count()).max().unwrap_or(0);
    let widths: Vec<usize> = (0..N).map(width).collect();
    let mut text = String::new();
    for cells in lines {
        let padded: Vec<String> =
            cells.iter().zip(&widths).map(|(cell, width)| format!("{cell:width$}")).collect();
        text.push_str(padded.join("  ").trim_end());
        text.push('\n');
    }
    text
}

/// All that is known of a scheme.
fn page(scheme: &Scheme) -> String {
    let mut lines = vec![
        format!("{} (`{}`)", scheme.name, scheme.key),
        format!("Source: {}", scheme.source),
        scheme.serves.to_owned(),
        String::new(),
        scheme.drawing.trim_matches('\n').to_owned(),
        String::new(),
        format!("Order: {}", scheme.order),
    ];
    lines.extend(scheme.embedded_order.map(|order| format!("Order of the embedded weights: {order}")));
    lines.push(format!("Stages: {}", scheme.tableau.stages()));
    if scheme.tableau.first_same_as_last {
        lines.push("The last stage of a step is the first of the next.".to_owned());
    }
    lines.extend(stages::properties(scheme));
    lines.join("\n") + "\n"
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cells_stand_under_their_heads() {
        let lines = [["A", "B", "C"], ["long", "é", "x"]].map(|cells| cells.map(str::to_owned));
        assert_eq!(lined_up(&lines), "A     B  C\nlong  é  x\n");
    }
}
