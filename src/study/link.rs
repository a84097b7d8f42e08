//! Which links of a study may stand in a report: those that a reader may follow without harm.

/// Whether a link may go there: `http`, `https`, `mailto`, a place in the report, or a relative path. Any other
/// scheme (`javascript:`, `data:`, `file:`), an absolute path and a path to another host are refused.
pub(super) fn is_safe(target: &str) -> bool {
    if target.chars().any(|c| c.is_control() || c == '\\') || target.starts_with(char::is_whitespace) {
        return false;
    }
    if target.starts_with('#') {
        return true;
    }
    let scheme_end = target.find([':', '/', '?', '#']);
    match scheme_end.map(|i| (&target[..i], target.as_bytes()[i])) {
        Some((scheme, b':')) => {
            ["http", "https", "mailto"].iter().any(|safe| safe.eq_ignore_ascii_case(scheme))
        }
        _ => !target.starts_with('/'),
    }
}

#[cfg(test)]
mod tests {
    use super::is_safe;

    #[test]
    fn schemes_are_allowed_by_name() {
        let check = |target: &str, expect: bool| assert_eq!(is_safe(target), expect, "{target:?}");
        for target in [
            "http://example.org",
            "HTTPS://example.org/a?b#c",
            "mailto:a@example.org",
            "#ledger",
            "notes/survey.md",
            "survey.md#part",
            "a@example.org",
            "",
            "../up.md",
            "a/b:c",
            "?q=a:b",
        ] {
            check(target, true);
        }
        for target in [
            "javascript:alert(1)",
            "JavaScript:alert(1)",
            " javascript:alert(1)",
            "java\nscript:alert(1)",
            "data:text/html,x",
            "vbscript:x",
            "file:///etc/passwd",
            "//example.org/x",
            "/etc/passwd",
            "\\\\host\\x",
            "http\u{0}://x",
            ":x",
            "blob:x",
            "\u{1}javascript:x",
        ] {
            check(target, false);
        }
    }
}
