//! How wide a text is, roughly: enough to leave room for it.

/// Width of a text at a font size, in the same unit. Mean advances of common sans serif faces.
pub(super) fn text_width(text: &str, size: f64) -> f64 {
    text.chars().map(advance).sum::<f64>() * size
}

fn advance(c: char) -> f64 {
    match c {
        'i' | 'j' | 'l' | '.' | ',' | ':' | ';' | '\'' | '|' | 'I' => 0.32,
        'f' | 't' | 'r' | '(' | ')' | '[' | ']' | ' ' | '/' | '-' => 0.4,
        'm' | 'w' | 'M' | 'W' | '@' | '%' => 0.9,
        'A'..='Z' | '\u{2212}' | '+' | '=' | '\u{b1}' | '\u{d7}' => 0.7,
        '\u{2070}'..='\u{207f}' | '\u{b2}' | '\u{b3}' | '\u{b9}' => 0.38,
        c if c as u32 > 0x2e80 => 1.0,
        _ => 0.62,
    }
}
