//! A strict reader of the pages that the templates make, for tests: any slip in nesting is an error.

use std::collections::BTreeSet;

/// What a page holds.
#[derive(Debug, Default)]
pub(super) struct Markup {
    /// Every element that was opened: name and attributes.
    pub(super) elements: Vec<(String, Vec<(String, String)>)>,
    /// All text between tags, outside `style`.
    pub(super) text: String,
}

/// Elements without content.
const VOID: [&str; 6] = ["meta", "br", "hr", "img", "input", "link"];
/// Elements that end an open paragraph.
const BLOCK: [&str; 19] = [
    "p", "div", "table", "ul", "ol", "dl", "pre", "section", "article", "aside", "figure", "header",
    "footer", "nav", "main", "h1", "h2", "h3", "h4",
];

/// Reads a page, or says what is wrong with it and near which text.
pub(super) fn read(html: &str) -> Result<Markup, String> {
    let mut markup = Markup::default();
    let mut open: Vec<String> = Vec::new();
    let mut rest = html.strip_prefix("<!DOCTYPE html>").ok_or("no doctype")?;
    while let Some(at) = rest.find('<') {
        markup.text.push_str(&rest[..at]);
        rest = &rest[at + 1..];
        let near: String = rest.chars().take(60).collect();
        if let Some(after) = rest.strip_prefix('/') {
            let end = after.find('>').ok_or_else(|| format!("no end of </{near}"))?;
            let name = &after[..end];
            match open.pop() {
                Some(last) if last == name => {}
                other => return Err(format!("</{name}> closes {other:?}, near </{near}")),
            }
            rest = &after[end + 1..];
            continue;
        }
        let name_end = rest
            .find(|c: char| !(c.is_ascii_alphanumeric() || c == '-'))
            .ok_or_else(|| format!("no end of <{near}"))?;
        let name = rest[..name_end].to_owned();
        if name.is_empty() {
            return Err(format!("a bare < before {near}"));
        }
        let (attributes, closed, after) =
            attributes(&rest[name_end..]).map_err(|why| format!("{why}, near <{near}"))?;
        rest = after;
        // Words on both sides of these are words apart.
        if ["br", "dt", "dd", "td", "th", "li"].contains(&name.as_str()) {
            markup.text.push(' ');
        }
        if BLOCK.contains(&name.as_str()) && open.iter().any(|o| o == "p") {
            return Err(format!("<{name}> inside a paragraph, near <{near}"));
        }
        if name == "a" && open.iter().any(|o| o == "a") {
            return Err(format!("a link inside a link, near <{near}"));
        }
        if name == "style" {
            let end = rest.find("</style>").ok_or("no end of <style>")?;
            rest = &rest[end + "</style>".len()..];
        } else if !closed && !VOID.contains(&name.as_str()) {
            open.push(name.clone());
        }
        markup.elements.push((name, attributes));
    }
    markup.text.push_str(rest);
    if open.is_empty() { Ok(markup) } else { Err(format!("still open: {open:?}")) }
}

/// Attributes up to the end of the tag, whether it ends with `/>`, and what comes after.
#[expect(clippy::type_complexity, reason = "a triple that is taken apart at once")]
fn attributes(mut rest: &str) -> Result<(Vec<(String, String)>, bool, &str), String> {
    let mut list: Vec<(String, String)> = Vec::new();
    loop {
        rest = rest.trim_start();
        if let Some(after) = rest.strip_prefix("/>") {
            return Ok((list, true, after));
        }
        if let Some(after) = rest.strip_prefix('>') {
            return Ok((list, false, after));
        }
        let end = rest
            .find(|c: char| !(c.is_ascii_alphanumeric() || matches!(c, '-' | ':' | '_')))
            .ok_or("a tag without end")?;
        let name = rest[..end].to_owned();
        let quoted = rest[end..]
            .strip_prefix("=\"")
            .ok_or_else(|| format!("attribute `{name}` has no quoted value"))?;
        let close = quoted.find('"').ok_or("a value without end")?;
        if list.iter().any(|(known, _)| *known == name) {
            return Err(format!("attribute `{name}` twice"));
        }
        list.push((name, quoted[..close].to_owned()));
        rest = &quoted[close + 1..];
    }
}

impl Markup {
    /// The values of an attribute, in order.
    pub(super) fn values(&self, attribute: &str) -> Vec<&str> {
        let all = self.elements.iter().flat_map(|(_, attributes)| attributes);
        all.filter(|(name, _)| name == attribute).map(|(_, value)| value.as_str()).collect()
    }

    /// Asserts what every page must keep: no script, nothing fetched, unique ids, every inner link with its
    /// target, headings in order, heads of tables with their scope.
    pub(super) fn assert_sound(&self) {
        for (name, attributes) in &self.elements {
            assert!(
                !["script", "iframe", "object", "embed", "form", "base", "link"].contains(&name.as_str()),
                "<{name}>"
            );
            for (attribute, value) in attributes {
                assert!(!attribute.starts_with("on"), "a handler: {attribute}={value}");
                if attribute == "src" {
                    assert!(value.starts_with("data:image/"), "fetched: {value}");
                }
                assert!(!value.trim_start().to_lowercase().starts_with("javascript:"), "{value}");
            }
            if name == "th" {
                assert!(attributes.iter().any(|(attribute, _)| attribute == "scope"), "a head without scope");
            }
        }
        let ids = self.values("id");
        let unique: BTreeSet<&str> = ids.iter().copied().collect();
        let twice: Vec<&&str> =
            unique.iter().filter(|id| ids.iter().filter(|i| i == id).count() > 1).collect();
        assert!(twice.is_empty(), "ids given twice: {twice:?}");
        for attribute in ["href", "aria-labelledby"] {
            for value in self.values(attribute) {
                let target = if attribute == "href" { value.strip_prefix('#') } else { Some(value) };
                if let Some(target) = target {
                    assert!(unique.contains(target), "no target for {value}");
                }
            }
        }
        let mut last = 0;
        for (name, _) in &self.elements {
            if let Some(level) = name.strip_prefix('h').and_then(|level| level.parse::<u32>().ok()) {
                assert!(level <= last + 1, "h{level} after h{last}");
                last = level;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_are_found() {
        for (slip, why) in [
            ("<p><b></p></b>", "closes"),
            ("<p>", "still open"),
            ("<p><div></div></p>", "inside a paragraph"),
            ("<a href=\"#x\"><a href=\"#y\"></a></a>", "a link inside a link"),
            ("1 < 2", "bare"),
            ("<p id=x></p>", "quoted"),
            ("<p id=\"a\" id=\"b\"></p>", "twice"),
        ] {
            let message = read(&format!("<!DOCTYPE html>{slip}")).unwrap_err();
            assert!(message.contains(why), "{slip}: {message}");
        }
    }

    #[test]
    fn a_sound_page_is_read() {
        let page = read(
            "<!DOCTYPE html><p id=\"a\">1 &lt; 2<br><svg viewBox=\"0 0 1 1\"><path d=\"M0\"/></svg></p>",
        )
        .unwrap();
        assert_eq!(page.values("id"), ["a"]);
        assert_eq!(page.text, "1 &lt; 2 ");
    }
}
