//! A part's XML as a tree that remembers where everything stands, so that a part can be edited by inserting text and
//! everything else stays byte for byte.

use std::borrow::Cow;
use std::ops::Range;

use quick_xml::Reader;
use quick_xml::events::{BytesStart, Event};

/// How deeply elements may be nested; parts that are edited need fewer than twenty levels.
const DEEPEST: usize = 256;

/// What is wrong with a part's XML.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum XmlError {
    /// It is not well formed.
    #[error("is not well-formed XML ({0})")]
    NotWellFormed(String),
    /// It has a document type, which no part may have.
    #[error("has a document type declaration, which a workbook part must not have")]
    DocType,
    /// Its elements are nested absurdly deep.
    #[error("nests its elements more than {DEEPEST} levels deep")]
    TooDeep,
    /// It is neither UTF-8 nor UTF-16.
    #[error("is neither UTF-8 nor UTF-16")]
    Encoding,
}

/// A part's text, and how it is encoded.
pub struct PartText {
    /// The text without a byte-order mark.
    pub text: String,
    encoding: Encoding,
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Encoding {
    Utf8 { mark: bool },
    Utf16 { big_endian: bool },
}

impl PartText {
    /// Decodes a part.
    pub fn decode(bytes: &[u8]) -> Result<Self, XmlError> {
        let wide = |big_endian: bool, bytes: &[u8]| {
            let units = bytes.chunks_exact(2).map(|pair| {
                let pair = [pair[0], pair[1]];
                if big_endian { u16::from_be_bytes(pair) } else { u16::from_le_bytes(pair) }
            });
            let text: Result<String, _> = char::decode_utf16(units).collect();
            text.map(|text| PartText { text, encoding: Encoding::Utf16 { big_endian } }).map_err(|_| XmlError::Encoding)
        };
        match bytes {
            [0xFE, 0xFF, rest @ ..] => wide(true, rest),
            [0xFF, 0xFE, rest @ ..] => wide(false, rest),
            _ => {
                let (mark, rest) = match bytes.strip_prefix(b"\xEF\xBB\xBF") {
                    Some(rest) => (true, rest),
                    None => (false, bytes),
                };
                let text = std::str::from_utf8(rest).map_err(|_| XmlError::Encoding)?.to_owned();
                Ok(PartText { text, encoding: Encoding::Utf8 { mark } })
            }
        }
    }

    /// Encodes an edited text as the part was.
    pub fn encode(&self, text: &str) -> Vec<u8> {
        match self.encoding {
            Encoding::Utf8 { mark } => {
                let mark: &[u8] = if mark { b"\xEF\xBB\xBF" } else { b"" };
                [mark, text.as_bytes()].concat()
            }
            Encoding::Utf16 { big_endian } => {
                let units = std::iter::once(0xFEFF).chain(text.encode_utf16());
                units.flat_map(|unit| if big_endian { unit.to_be_bytes() } else { unit.to_le_bytes() }).collect()
            }
        }
    }
}

/// An element.
#[derive(Clone, Debug)]
pub struct Element {
    /// The namespace, empty if there is none.
    pub namespace: String,
    /// The prefix, empty if there is none.
    pub prefix: String,
    /// The name without its prefix.
    pub local: String,
    /// The attributes, namespace declarations left out.
    pub attributes: Vec<Attribute>,
    /// Prefixes that this element declares, with their namespaces.
    pub declared: Vec<(String, String)>,
    /// The elements within.
    pub children: Vec<Element>,
    /// The text directly within, where there are no elements.
    pub text: String,
    /// The whole element.
    pub span: Range<usize>,
    /// What stands between the start tag and the end tag; `None` for `<name/>`.
    pub inner: Option<Range<usize>>,
}

/// An attribute.
#[derive(Clone, Debug)]
pub struct Attribute {
    /// The prefix, empty if there is none.
    pub prefix: String,
    /// The name without its prefix.
    pub local: String,
    /// The value, references resolved.
    pub value: String,
    /// Where the value stands, quotes left out; `None` if that could not be told.
    pub span: Option<Range<usize>>,
}

impl Element {
    /// The value of an attribute without prefix.
    pub fn attribute(&self, local: &str) -> Option<&str> {
        self.attributes
            .iter()
            .find(|attribute| attribute.prefix.is_empty() && attribute.local == local)
            .map(|attribute| attribute.value.as_str())
    }

    /// An attribute without prefix as a number.
    pub fn number(&self, local: &str) -> Option<u32> {
        self.attribute(local)?.trim().parse().ok()
    }

    /// The value of a prefixed attribute by its local name, whatever the prefix.
    pub fn prefixed_attribute(&self, local: &str) -> Option<&str> {
        self.attributes
            .iter()
            .find(|attribute| !attribute.prefix.is_empty() && attribute.local == local)
            .map(|attribute| attribute.value.as_str())
    }

    /// The first child in this element's own namespace with a given name.
    pub fn child(&self, local: &str) -> Option<&Element> {
        self.children.iter().find(|child| child.local == local && child.namespace == self.namespace)
    }

    /// The element's name with the prefix that the part uses.
    pub fn tag(&self) -> String {
        qualified(&self.prefix, &self.local)
    }
}

/// A name with its prefix, if it has one.
pub fn qualified(prefix: &str, local: &str) -> String {
    if prefix.is_empty() { local.to_owned() } else { format!("{prefix}:{local}") }
}

/// Parses a part into its root element.
pub fn parse(text: &str) -> Result<Element, XmlError> {
    let wrong = |error: &dyn std::fmt::Display| XmlError::NotWellFormed(error.to_string());
    let mut reader = Reader::from_str(text);
    let mut open: Vec<Element> = Vec::new();
    let mut root = None;
    loop {
        let start = reader.buffer_position() as usize;
        let event = reader.read_event().map_err(|error| wrong(&error))?;
        let end = reader.buffer_position() as usize;
        match event {
            Event::Start(tag) => {
                if open.len() >= DEEPEST {
                    return Err(XmlError::TooDeep);
                }
                let mut element = element(&tag, text, &open)?;
                element.span = start..end;
                element.inner = Some(end..end);
                open.push(element);
            }
            Event::Empty(tag) => {
                let mut element = element(&tag, text, &open)?;
                element.span = start..end;
                close(element, &mut open, &mut root);
            }
            Event::End(_) => {
                let Some(mut element) = open.pop() else { return Err(wrong(&"an end tag too many")) };
                element.span.end = end;
                if let Some(inner) = &mut element.inner {
                    inner.end = start;
                }
                close(element, &mut open, &mut root);
            }
            Event::Text(words) => {
                if let Some(element) = open.last_mut() {
                    element.text.push_str(&words);
                }
            }
            Event::GeneralRef(reference) => {
                if let Some(element) = open.last_mut() {
                    element.text.push_str(&format!("&{};", &*reference));
                }
            }
            Event::CData(words) => {
                if let Some(element) = open.last_mut() {
                    element.text.push_str(&escape(&words));
                }
            }
            Event::DocType(_) => return Err(XmlError::DocType),
            Event::Eof => break,
            Event::Decl(_) | Event::PI(_) | Event::Comment(_) => {}
        }
    }
    if !open.is_empty() {
        return Err(wrong(&"an element is not closed"));
    }
    root.ok_or_else(|| wrong(&"there is no element"))
}

fn close(element: Element, open: &mut [Element], root: &mut Option<Element>) {
    match open.last_mut() {
        Some(parent) => parent.children.push(element),
        None => {
            root.get_or_insert(element);
        }
    }
}

fn element(tag: &BytesStart<'_>, text: &str, open: &[Element]) -> Result<Element, XmlError> {
    let mut attributes = Vec::new();
    let mut declared = Vec::new();
    for attribute in tag.attributes() {
        let attribute = attribute.map_err(|error| XmlError::NotWellFormed(error.to_string()))?;
        let (prefix, local) = split(attribute.key.as_ref());
        let span = match &attribute.value {
            Cow::Borrowed(value) => offset(value, text).map(|at| at..at + value.len()),
            Cow::Owned(_) => None,
        };
        let value = unescape(&attribute.value);
        match (prefix, local) {
            ("xmlns", prefix) => declared.push((prefix.to_owned(), value)),
            ("", "xmlns") => declared.push((String::new(), value)),
            (prefix, local) => attributes.push(Attribute { prefix: prefix.to_owned(), local: local.to_owned(), value, span }),
        }
    }
    let name = tag.name();
    let (prefix, local) = split(name.as_ref());
    let mut scopes = open.iter().flat_map(|element| &element.declared).chain(&declared);
    let namespace = scopes.rfind(|(declared, _)| declared == prefix).map(|(_, namespace)| namespace.clone());
    Ok(Element {
        namespace: namespace.unwrap_or_default(),
        prefix: prefix.to_owned(),
        local: local.to_owned(),
        attributes,
        declared,
        children: Vec::new(),
        text: String::new(),
        span: 0..0,
        inner: None,
    })
}

/// Where a slice of the text begins in it.
fn offset(slice: &str, text: &str) -> Option<usize> {
    let at = (slice.as_ptr() as usize).checked_sub(text.as_ptr() as usize)?;
    (at + slice.len() <= text.len()).then_some(at)
}

fn split(name: &str) -> (&str, &str) {
    name.split_once(':').unwrap_or(("", name))
}

/// Resolves the five named references and numeric ones; others stay as they are.
pub fn unescape(text: &str) -> String {
    quick_xml::escape::unescape(text).map(Cow::into_owned).unwrap_or_else(|_| text.to_owned())
}

/// Writes text so that it can stand in content or in an attribute.
pub fn escape(text: &str) -> String {
    quick_xml::escape::escape(text).into_owned()
}

/// Changes to a text: each replaces a range, an empty range being an insertion.
#[derive(Default)]
pub struct Edits(Vec<(Range<usize>, String)>);

impl Edits {
    /// Replaces a range.
    pub fn replace(&mut self, range: Range<usize>, text: impl Into<String>) {
        self.0.push((range, text.into()));
    }

    /// Inserts at a place.
    pub fn insert(&mut self, at: usize, text: impl Into<String>) {
        self.replace(at..at, text);
    }

    /// Inserts at the end of an element's content, opening it up if it is written as `<name/>`.
    pub fn append(&mut self, element: &Element, text: &str) {
        match &element.inner {
            Some(inner) => self.insert(inner.end, text),
            None => {
                let slash = element.span.end - 2;
                self.replace(slash..element.span.end, format!(">{text}</{}>", element.tag()));
            }
        }
    }

    /// Sets an attribute that is there; one that is not stays away.
    pub fn set(&mut self, element: &Element, local: &str, value: impl ToString) {
        let found = element.attributes.iter().find(|attribute| attribute.prefix.is_empty() && attribute.local == local);
        if let Some(span) = found.and_then(|attribute| attribute.span.clone()) {
            self.replace(span, value.to_string());
        }
    }

    /// The text with all changes made. Insertions at one place keep the order in which they came.
    pub fn apply(mut self, text: &str) -> String {
        self.0.sort_by_key(|(range, _)| (range.start, range.end));
        let mut result = String::with_capacity(text.len() + self.0.iter().map(|(_, new)| new.len()).sum::<usize>());
        let mut at = 0;
        for (range, new) in self.0 {
            if range.start >= at {
                result.push_str(&text[at..range.start]);
                at = range.end;
            }
            result.push_str(&new);
        }
        result.push_str(&text[at..]);
        result
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spans_and_namespaces_are_found() {
        let text = r#"<?xml version="1.0"?><x:a xmlns:x="urn:n" k="1 &amp; 2"><x:b/><c xmlns="urn:n">hi</c><d/></x:a>"#;
        let root = parse(text).unwrap();
        assert_eq!((root.namespace.as_str(), root.attribute("k")), ("urn:n", Some("1 & 2")));
        assert_eq!(&text[root.child("b").unwrap().span.clone()], "<x:b/>");
        assert_eq!(root.child("c").unwrap().text, "hi");
        assert!(root.child("d").is_none(), "another namespace is another element");
    }

    #[test]
    fn edits_keep_everything_else() {
        let text = r#"<x:a xmlns:x="urn:n" count='0'><x:b/></x:a>"#;
        let root = parse(text).unwrap();
        let mut edits = Edits::default();
        edits.set(&root, "count", 1);
        edits.append(root.child("b").unwrap(), "<x:c/>");
        edits.append(&root, "<x:d/>");
        assert_eq!(edits.apply(text), r#"<x:a xmlns:x="urn:n" count='1'><x:b><x:c/></x:b><x:d/></x:a>"#);
    }

    #[test]
    fn encodings_come_back_as_they_were() {
        for text in ["<a/>", "<ä/>"] {
            let wide: Vec<u8> = std::iter::once(0xFEFF_u16).chain(text.encode_utf16()).flat_map(u16::to_le_bytes).collect();
            let part = PartText::decode(&wide).unwrap();
            assert_eq!((part.text.as_str(), part.encode(&part.text)), (text, wide));
        }
        let marked = [b"\xEF\xBB\xBF".as_slice(), b"<a/>"].concat();
        assert_eq!(PartText::decode(&marked).unwrap().encode("<a/>"), marked);
    }

    #[test]
    fn hostile_xml_is_refused() {
        assert_eq!(parse("<!DOCTYPE a [<!ENTITY b 'c'>]><a>&b;</a>").unwrap_err(), XmlError::DocType);
        assert_eq!(parse(&"<a>".repeat(100_000)).unwrap_err(), XmlError::TooDeep);
        assert!(matches!(parse("<a><b></a>"), Err(XmlError::NotWellFormed(_))));
        assert!(matches!(parse(""), Err(XmlError::NotWellFormed(_))));
    }
}
