//! A strict reader of small XML: every tag closed in order, attributes quoted and once, entities known, no forbidden character.

use std::collections::BTreeMap;

/// An element with the text inside it, markup left out.
#[derive(Debug, Clone)]
pub struct Element {
    pub name: String,
    pub attributes: BTreeMap<String, String>,
    pub text: String,
    /// Place of the element around it in the list.
    pub parent: Option<usize>,
}

impl Element {
    pub fn get(&self, name: &str) -> &str {
        self.attributes.get(name).map_or("", String::as_str)
    }

    pub fn has_class(&self, class: &str) -> bool {
        self.get("class").split(' ').any(|word| word == class)
    }

    pub fn number(&self, name: &str) -> f64 {
        self.get(name).parse().unwrap_or_else(|_| panic!("{name} of {self:?}"))
    }
}

/// All elements in the order in which they open.
///
/// # Panics
/// On anything that is not well-formed.
pub fn read(xml: &str) -> Vec<Element> {
    assert!(xml.chars().all(|c| !c.is_control() || c == '\n'), "a control character");
    let mut elements: Vec<Element> = Vec::new();
    let mut open: Vec<usize> = Vec::new();
    let mut rest = xml.trim_end();
    while !rest.is_empty() {
        let at = rest.find('<').unwrap_or(rest.len());
        let (text, tag) = rest.split_at(at);
        let text = unescape(text);
        assert!(!open.is_empty() || text.trim().is_empty(), "text outside: {text}");
        for &element in &open {
            elements[element].text.push_str(&text);
        }
        if tag.is_empty() {
            break;
        }
        let end = closing(tag);
        let inside = &tag[1..end];
        rest = &tag[end + 1..];
        if let Some(name) = inside.strip_prefix('/') {
            let last = open.pop().expect("an end without a beginning");
            assert_eq!(elements[last].name, name);
            continue;
        }
        let (inside, empty) = inside.strip_suffix('/').map_or((inside, false), |inside| (inside, true));
        let (name, attributes) = inside.split_at(inside.find(char::is_whitespace).unwrap_or(inside.len()));
        assert!(!open.is_empty() || elements.is_empty(), "two roots");
        elements.push(Element {
            name: name.to_owned(),
            attributes: self::attributes(attributes),
            text: String::new(),
            parent: open.last().copied(),
        });
        if !empty {
            open.push(elements.len() - 1);
        }
    }
    assert!(open.is_empty(), "not closed: {:?}", elements[open[0]]);
    elements
}

/// Place of the `>` that ends a tag, outside quotes.
fn closing(tag: &str) -> usize {
    let mut quoted = false;
    let end = tag.char_indices().find(|(_, c)| {
        quoted ^= *c == '"';
        *c == '>' && !quoted
    });
    end.expect("a tag without an end").0
}

fn attributes(mut text: &str) -> BTreeMap<String, String> {
    let mut attributes = BTreeMap::new();
    while let Some((name, after)) = text.split_once("=\"") {
        let (value, after) = after.split_once('"').expect("a quote not closed");
        assert!(!value.contains('<'), "a < inside {value}");
        assert!(name.starts_with(char::is_whitespace), "no blank before {name}");
        let again = attributes.insert(name.trim().to_owned(), unescape(value));
        assert!(again.is_none(), "{name} twice");
        text = after;
    }
    assert!(text.trim().is_empty(), "not an attribute: {text}");
    attributes
}

fn unescape(text: &str) -> String {
    let mut plain = String::new();
    let mut rest = text;
    while let Some((before, after)) = rest.split_once('&') {
        let (name, after) = after.split_once(';').expect("a bare &");
        plain.push_str(before);
        plain.push(match name {
            "amp" => '&',
            "lt" => '<',
            "gt" => '>',
            "quot" => '"',
            "apos" | "#39" => '\'',
            other => panic!("unknown entity {other}"),
        });
        rest = after;
    }
    plain.push_str(rest);
    plain
}
