//! How wide a text is, roughly: enough to leave room for it.

/// Width of a text at a font size, in the same unit.
///
/// The advances are those of Helvetica (Adobe font metrics, from memory), and more by 18 %, as
/// the reader's font may be a wider one.
pub(super) fn text_width(text: &str, size: f64) -> f64 {
    text.chars().map(advance).sum::<f64>() * size * 1.18 / 1000.0
}

/// A text and a font size with which it fits into `room`: smaller where it must be, and cut short where that is not
/// enough.
pub(super) fn fit(text: &str, room: f64, size: f64) -> (String, f64) {
    let width = text_width(text, size);
    if width <= room {
        return (text.to_owned(), size);
    }
    let least = 0.8 * size;
    if width * 0.8 <= room {
        return (text.to_owned(), size * room / width);
    }
    (cut(text, room, least), least)
}

/// As much of a text as fits into `room`, with an ellipsis.
fn cut(text: &str, room: f64, size: f64) -> String {
    let mut short = String::new();
    for c in text.chars() {
        short.push(c);
        if text_width(&short, size) > room - size {
            short.pop();
            break;
        }
    }
    format!("{}\u{2026}", short.trim_end())
}

/// The same for the title of an axis, whose symbol and unit are kept whatever is cut: `Level in the … z / m`.
pub(super) fn fit_title(title: &str, room: f64, size: f64) -> (String, f64) {
    let (text, fitted) = fit(title, room, size);
    let Some((quantity, unit)) = title.rsplit_once(" / ").filter(|_| text != title) else {
        return (text, fitted);
    };
    let (about, symbol) = quantity.rsplit_once(' ').unwrap_or(("", quantity));
    let tail = format!(" {symbol} / {unit}");
    let about = cut(about, room - text_width(&tail, fitted), fitted);
    let short = format!("{about}{tail}");
    // A symbol and a unit that fill the room by themselves are cut like any text.
    if text_width(&short, fitted) > room { (text, fitted) } else { (short, fitted) }
}

/// Advance in thousandths of the font size.
fn advance(c: char) -> f64 {
    match c {
        'i' | 'j' | 'l' | '\'' => 222.0,
        ' ' | '!' | ',' | '.' | '/' | ':' | ';' | 'I' | '[' | ']' | '\\' | 'f' | 't' | '|' => 278.0,
        '(' | ')' | '-' | '`' | 'r' | '{' | '}' => 334.0,
        '"' | '*' | '\u{2070}'..='\u{207f}' | '\u{b2}' | '\u{b3}' | '\u{b9}' | '\u{b7}' => 389.0,
        'c' | 'k' | 's' | 'v' | 'x' | 'y' | 'z' | 'J' => 500.0,
        'a'..='h' | 'n'..='q' | 'u' | '0'..='9' | '?' | '_' | '#' | '$' | 'L' | '^' => 556.0,
        'F' | 'T' | 'Z' | '+' | '=' | '<' | '>' | '~' | '\u{2212}' | '\u{b1}' | '\u{d7}' => 611.0,
        'w' | 'C' | 'D' | 'G' | 'H' | 'N' | 'O' | 'Q' | 'R' | 'U' => 750.0,
        'm' | 'M' | 'W' | '%' | '\u{2026}' => 944.0,
        '@' => 1015.0,
        c if u32::from(c) > 0x2e80 => 1000.0,
        _ => 667.0,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_long_text_is_made_smaller_and_then_cut() {
        assert_eq!(fit("z / m", 100.0, 13.0), ("z / m".to_owned(), 13.0));
        let (text, size) = fit("Level in the shaft z / m", 130.0, 13.0);
        assert!(text.ends_with("z / m") && size < 13.0 && text_width(&text, size) < 130.001);
        let (text, size) = fit(&"wide ".repeat(40), 130.0, 13.0);
        assert!(text.ends_with('\u{2026}') && text_width(&text, size) < 131.0, "{text}");
        let (title, size) = fit_title(&format!("{}x / m", "wide ".repeat(40)), 200.0, 13.0);
        assert!(title.ends_with("\u{2026} x / m") && text_width(&title, size) <= 200.0, "{title}");
        assert_eq!(fit_title("z / m", 100.0, 13.0).0, "z / m");
        assert!(fit("wide", 1.0, 13.0).0.ends_with('\u{2026}'));
    }
}
