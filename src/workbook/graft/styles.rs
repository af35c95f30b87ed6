//! The new sheets' formats appended to the user's styles, each only once.
//!
//! What stands in the user's styles part stays as it is; new entries go behind the old ones, so that every number in the
//! user's sheets keeps its meaning. An entry that is there already is used again, so that repeated annotations do not
//! pile up.

use std::collections::HashMap;

use super::tree::{Edits, Element, escape, qualified};

/// The lists of a styles part in the order of the schema (ISO/IEC 29500-1, CT_Stylesheet).
const ORDER: [&str; 8] = ["numFmts", "fonts", "fills", "borders", "cellStyleXfs", "cellXfs", "cellStyles", "dxfs"];

/// Entries with which a list begins where the user's workbook has none, so that number 0 keeps meaning "nothing special".
fn beginning(list: &str) -> &'static [&'static str] {
    match list {
        "fonts" => &[r#"<{}font><{}sz val="11"/><{}name val="Calibri"/><{}family val="2"/></{}font>"#],
        "fills" => &[
            r#"<{}fill><{}patternFill patternType="none"/></{}fill>"#,
            r#"<{}fill><{}patternFill patternType="gray125"/></{}fill>"#,
        ],
        "borders" => &["<{}border><{}left/><{}right/><{}top/><{}bottom/><{}diagonal/></{}border>"],
        "cellStyleXfs" => &[r#"<{}xf numFmtId="0" fontId="0" fillId="0" borderId="0"/>"#],
        "cellXfs" => &[r#"<{}xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/>"#],
        _ => &[],
    }
}

/// The numbers that the new sheets' formats have in the user's workbook.
pub struct StyleNumbers {
    /// By the new sheets' own number: cell formats.
    pub cell_formats: Vec<u32>,
    /// By the new sheets' own number: differential formats.
    pub differential: Vec<u32>,
}

/// An empty styles part in the given namespace, for a workbook that has none.
pub fn empty(namespace: &str) -> String {
    format!("<?xml version=\"1.0\" encoding=\"UTF-8\" standalone=\"yes\"?>\n<styleSheet xmlns=\"{namespace}\"></styleSheet>")
}

/// Turns the new sheets' styles into the strict variant of the standard, where borders have a start and an end.
pub fn to_strict(styles: &mut Element) {
    fn rename(element: &mut Element) {
        for child in &mut element.children {
            if element.local == "border" {
                match child.local.as_str() {
                    "left" => child.local = "start".into(),
                    "right" => child.local = "end".into(),
                    _ => {}
                }
            }
            rename(child);
        }
    }
    rename(styles);
}

/// One list of the user's styles while entries are appended to it.
struct Growing {
    known: HashMap<String, u32>,
    count: u32,
    added: String,
}

impl Growing {
    fn new(host: &Element, list: &str, prefix: &str) -> Self {
        let mut growing = Growing { known: HashMap::new(), count: 0, added: String::new() };
        for entry in host.child(list).iter().flat_map(|list| &list.children) {
            growing.known.entry(write(entry, "", &mut |_, _| None)).or_insert(growing.count);
            growing.count += 1;
        }
        if growing.count == 0 {
            let name_prefix = if prefix.is_empty() { String::new() } else { format!("{prefix}:") };
            for entry in beginning(list) {
                growing.known.insert(entry.replace("{}", ""), growing.count);
                growing.added.push_str(&entry.replace("{}", &name_prefix));
                growing.count += 1;
            }
        }
        growing
    }

    /// The number of an entry, appended unless it is there.
    fn number(&mut self, entry: &Element, prefix: &str, renumber: &mut dyn FnMut(&str, &str) -> Option<String>) -> u32 {
        let plain = write(entry, "", renumber);
        if let Some(&number) = self.known.get(&plain) {
            return number;
        }
        self.added.push_str(&write(entry, prefix, renumber));
        self.known.insert(plain, self.count);
        self.count += 1;
        self.count - 1
    }
}

/// Merges the new sheets' styles into the user's: the edited text, and where each number went.
pub fn merge(host_text: &str, host: &Element, donor: &Element) -> (String, StyleNumbers) {
    let prefix = host.prefix.as_str();
    let mut lists: HashMap<&str, Growing> = ORDER.iter().map(|&list| (list, Growing::new(host, list, prefix))).collect();
    let mut formats = NumberFormats::new(host);
    let entries = |list: &'static str| donor.child(list).map(|list| list.children.as_slice()).unwrap_or_default();
    for entry in entries("numFmts") {
        let (Some(id), Some(code)) = (entry.number("numFmtId"), entry.attribute("formatCode")) else { continue };
        if let Some(new) = formats.place(id, code) {
            let growing = lists.get_mut("numFmts").expect("the list is in ORDER");
            let tag = qualified(prefix, "numFmt");
            growing.count += 1;
            growing.added.push_str(&format!("<{tag} numFmtId=\"{new}\" formatCode=\"{}\"/>", escape(code)));
        }
    }
    let mut numbers = |list: &'static str, renumber: &mut dyn FnMut(&str, &str) -> Option<String>| -> Vec<u32> {
        let growing = lists.get_mut(list).expect("the list is in ORDER");
        entries(list).iter().map(|entry| growing.number(entry, prefix, renumber)).collect()
    };
    let fonts = numbers("fonts", &mut |_, _| None);
    let fills = numbers("fills", &mut |_, _| None);
    let borders = numbers("borders", &mut |_, _| None);
    let moved = |to: &[u32], value: &str| value.parse::<usize>().ok().and_then(|old| to.get(old)).map(u32::to_string);
    let cell_formats = numbers("cellXfs", &mut |name, value| match name {
        "fontId" => moved(&fonts, value),
        "fillId" => moved(&fills, value),
        "borderId" => moved(&borders, value),
        "numFmtId" => formats.renumbered(value),
        "xfId" => Some("0".into()),
        _ => None,
    });
    let differential = numbers("dxfs", &mut |name, value| if name == "numFmtId" { formats.renumbered(value) } else { None });
    let text = append(host_text, host, &lists);
    (text, StyleNumbers { cell_formats, differential })
}

/// Numbers of custom number formats: those of the user stay, ours get free ones, equal codes share one.
struct NumberFormats {
    by_code: HashMap<String, u32>,
    moved: HashMap<u32, u32>,
    next: u32,
}

impl NumberFormats {
    /// Custom number formats begin at 164; the numbers below are built in.
    const FIRST_CUSTOM: u32 = 164;

    fn new(host: &Element) -> Self {
        let listed = host.child("numFmts").map(|list| list.children.as_slice()).unwrap_or_default();
        let mut formats = NumberFormats { by_code: HashMap::new(), moved: HashMap::new(), next: Self::FIRST_CUSTOM };
        for entry in listed {
            let Some(id) = entry.number("numFmtId") else { continue };
            formats.next = formats.next.max(id.saturating_add(1));
            if let Some(code) = entry.attribute("formatCode") {
                formats.by_code.entry(code.to_owned()).or_insert(id);
            }
        }
        formats
    }

    /// Places a format; the number if it is new and must be written.
    fn place(&mut self, id: u32, code: &str) -> Option<u32> {
        if let Some(&known) = self.by_code.get(code) {
            self.moved.insert(id, known);
            return None;
        }
        let new = self.next;
        self.next += 1;
        self.by_code.insert(code.to_owned(), new);
        self.moved.insert(id, new);
        Some(new)
    }

    fn renumbered(&self, value: &str) -> Option<String> {
        self.moved.get(&value.parse().ok()?).map(u32::to_string)
    }
}

/// Writes an element with another prefix. `renumber` may give an attribute of the element itself another value.
fn write(element: &Element, prefix: &str, renumber: &mut dyn FnMut(&str, &str) -> Option<String>) -> String {
    let tag = qualified(prefix, &element.local);
    let mut text = format!("<{tag}");
    for attribute in &element.attributes {
        let value = renumber(&attribute.local, &attribute.value).unwrap_or_else(|| attribute.value.clone());
        text.push_str(&format!(" {}=\"{}\"", qualified(&attribute.prefix, &attribute.local), escape(&value)));
    }
    if element.children.is_empty() && element.text.trim().is_empty() {
        text.push_str("/>");
        return text;
    }
    text.push('>');
    for child in &element.children {
        text.push_str(&write(child, prefix, renumber));
    }
    if element.children.is_empty() {
        text.push_str(&element.text);
    }
    text.push_str(&format!("</{tag}>"));
    text
}

fn append(text: &str, host: &Element, lists: &HashMap<&str, Growing>) -> String {
    let mut edits = Edits::default();
    let mut behind = host.inner.as_ref().map(|inner| inner.start);
    let mut opened = String::new();
    for list in ORDER {
        let growing = &lists[list];
        let there = host.child(list);
        if !growing.added.is_empty() {
            let tag = qualified(&host.prefix, list);
            match there {
                Some(there) => {
                    edits.set(there, "count", growing.count);
                    edits.append(there, &growing.added);
                }
                None => {
                    let whole = format!("<{tag} count=\"{}\">{}</{tag}>", growing.count, growing.added);
                    match behind {
                        Some(at) => edits.insert(at, whole),
                        None => opened.push_str(&whole),
                    }
                }
            }
        }
        if let Some(there) = there {
            behind = Some(there.span.end);
        }
    }
    if !opened.is_empty() {
        edits.append(host, &opened);
    }
    edits.apply(text)
}

#[cfg(test)]
mod tests {
    use super::super::tree::parse;
    use super::*;

    const DONOR: &str = r#"<styleSheet xmlns="urn:m"><numFmts count="1"><numFmt numFmtId="164" formatCode="0.00000"/></numFmts><fonts count="2"><font><sz val="11"/></font><font><b/><sz val="11"/></font></fonts><fills count="1"><fill><patternFill patternType="none"/></fill></fills><borders count="1"><border><left/></border></borders><cellStyleXfs count="1"><xf numFmtId="0"/></cellStyleXfs><cellXfs count="2"><xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/><xf numFmtId="164" fontId="1" fillId="0" borderId="0" xfId="0"/></cellXfs></styleSheet>"#;

    fn merged(host: &str) -> (String, StyleNumbers) {
        merge(host, &parse(host).unwrap(), &parse(DONOR).unwrap())
    }

    #[test]
    fn merging_twice_adds_nothing() {
        for host in [
            r#"<x:styleSheet xmlns:x="urn:m"><x:numFmts count="1"><x:numFmt numFmtId="164" formatCode="0.0"/></x:numFmts><x:fonts count="1"><x:font><x:sz val="10"/></x:font></x:fonts><x:cellXfs count="1"><x:xf numFmtId="164" fontId="0"/></x:cellXfs><x:dxfs count="0"/></x:styleSheet>"#,
            r#"<styleSheet xmlns="urn:m"/>"#,
            r#"<styleSheet xmlns="urn:m"><cellXfs/></styleSheet>"#,
        ] {
            let (once, numbers) = merged(host);
            let (twice, again) = merged(&once);
            assert_eq!(once, twice);
            assert_eq!(numbers.cell_formats, again.cell_formats);
            let root = parse(&once).unwrap();
            for list in ["numFmts", "fonts", "fills", "borders", "cellXfs"] {
                let list = root.child(list).unwrap();
                assert!(list.number("count").is_none_or(|count| count as usize == list.children.len()), "{once}");
            }
        }
    }

    #[test]
    fn a_taken_number_format_is_moved() {
        let (text, numbers) = merged(
            r#"<styleSheet xmlns="urn:m"><numFmts count="1"><numFmt numFmtId="164" formatCode="0.0"/></numFmts></styleSheet>"#,
        );
        let root = parse(&text).unwrap();
        let format = &root.child("cellXfs").unwrap().children[numbers.cell_formats[1] as usize];
        assert_eq!(format.attribute("numFmtId"), Some("165"));
    }
}
