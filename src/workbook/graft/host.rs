//! The user's workbook part: its sheets, names and protection, and how sheets are added to it and taken out again.

use std::io::{Read, Seek};

use super::error::Error;
use super::package::{Package, Relationship, key};
use super::tree::{Edits, Element, PartText, escape, qualified};

/// The main namespace of the transitional variant of the standard.
pub const TRANSITIONAL: &str = "http://schemas.openxmlformats.org/spreadsheetml/2006/main";
/// The main namespace of the strict variant.
pub const STRICT: &str = "http://purl.oclc.org/ooxml/spreadsheetml/main";
const RELATIONSHIPS: [&str; 2] = [
    "http://schemas.openxmlformats.org/officeDocument/2006/relationships",
    "http://purl.oclc.org/ooxml/officeDocument/relationships",
];

/// The hidden name by which our sheets are known again after an office program has saved the workbook.
pub const MARKER: &str = "_risefall_sheet";

/// A sheet of the user's workbook.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Sheet {
    /// Its name.
    pub name: String,
    /// Its part, where the relationship leads to one.
    pub part: Option<String>,
    /// Whether Risefall made it.
    pub ours: bool,
}

/// The workbook part, read.
pub struct Host {
    /// The workbook part's name.
    pub part: String,
    /// Its text.
    pub text: PartText,
    /// Its tree.
    pub root: Element,
    /// Its relationships.
    pub relationships: Vec<Relationship>,
    /// The sheets in order.
    pub sheets: Vec<Sheet>,
    /// The content type of the workbook part, which tells a template and a macro-enabled workbook from others.
    pub content_type: String,
}

impl Host {
    /// Finds and reads the workbook part.
    pub fn read<R: Read + Seek>(package: &mut Package<R>) -> Result<Self, Error> {
        if !package.has("[Content_Types].xml") {
            return Err(Error::OtherKind(if package.has("mimetype") { "an OpenDocument file" } else { "a zip archive" }));
        }
        let of_package = package.relationships("")?;
        let main = of_package.iter().find(|relationship| relationship.is("officeDocument")).and_then(|found| found.part.clone());
        let part = main.filter(|part| package.has(part)).ok_or(Error::OtherKind("a package without a workbook"))?;
        let kind = package.content_type(&part)?.unwrap_or_default();
        if kind.contains("sheet.binary") {
            return Err(Error::OtherKind("a binary workbook (.xlsb)"));
        }
        if kind.contains("wordprocessingml") || kind.contains("presentationml") {
            return Err(Error::OtherKind("a document of another office program"));
        }
        let (text, root) = package.xml(&part)?;
        if root.local != "workbook" || ![TRANSITIONAL, STRICT].contains(&root.namespace.as_str()) {
            return Err(Error::OtherKind("a workbook of a form older than the standard"));
        }
        let relationships = package.relationships(&part)?;
        let target =
            |id: &str| relationships.iter().find(|relationship| relationship.id == id).and_then(|found| found.part.clone());
        let marked: Vec<u32> = names(&root)
            .filter(|name| name.attribute("name").is_some_and(|name| name.eq_ignore_ascii_case(MARKER)))
            .filter_map(|name| name.number("localSheetId"))
            .collect();
        let listed = root.child("sheets").map(|sheets| sheets.children.as_slice()).unwrap_or_default();
        let sheets = listed.iter().enumerate().map(|(index, sheet)| Sheet {
            name: sheet.attribute("name").unwrap_or_default().to_owned(),
            part: sheet.prefixed_attribute("id").and_then(target),
            ours: marked.contains(&(index as u32)),
        });
        let sheets = sheets.collect();
        Ok(Host { part, text, root, relationships, sheets, content_type: kind })
    }

    /// Whether the workbook is of the strict variant.
    pub fn is_strict(&self) -> bool {
        self.root.namespace == STRICT
    }

    /// Whether dates count from 1904.
    pub fn dates_from_1904(&self) -> bool {
        self.root.child("workbookPr").and_then(|properties| properties.attribute("date1904")).is_some_and(is_true)
    }

    /// Whether the structure is protected, so that no sheet may be added.
    pub fn is_protected(&self) -> bool {
        self.root.child("workbookProtection").and_then(|protection| protection.attribute("lockStructure")).is_some_and(is_true)
    }

    /// The part behind a relationship of a kind.
    pub fn related(&self, kind: &str) -> Option<String> {
        self.relationships.iter().find(|relationship| relationship.is(kind)).and_then(|found| found.part.clone())
    }

    /// The workbook part with sheets added: their names, relationship ids, and names that belong to them.
    pub fn with_sheets(&self, added: &[AddedSheet]) -> String {
        let mut edits = Edits::default();
        let prefix = &self.root.prefix;
        let listed = self.root.child("sheets");
        let known = listed.map(|sheets| sheets.children.as_slice()).unwrap_or_default();
        let first_id = known.iter().filter_map(|sheet| sheet.number("sheetId")).max().unwrap_or(0) + 1;
        let mut sheets = String::new();
        let mut defined = String::new();
        let namespace = RELATIONSHIPS[usize::from(self.is_strict())];
        for (place, sheet) in added.iter().enumerate() {
            let sheet_id = first_id as usize + place;
            let tag = qualified(prefix, "sheet");
            let (name, id) = (escape(&sheet.name), &sheet.relationship);
            sheets.push_str(&format!("<{tag} name=\"{name}\" sheetId=\"{sheet_id}\" r:id=\"{id}\" xmlns:r=\"{namespace}\"/>"));
            for name in &sheet.names {
                let tag = qualified(prefix, "definedName");
                let hidden = if name.hidden { " hidden=\"1\"" } else { "" };
                let index = known.len() + place;
                let (label, refers_to) = (escape(&name.name), &name.refers_to);
                defined.push_str(&format!("<{tag} name=\"{label}\" localSheetId=\"{index}\"{hidden}>{refers_to}</{tag}>"));
            }
        }
        if let Some(listed) = listed {
            edits.append(listed, &sheets);
        }
        match self.root.child("definedNames") {
            Some(names) => edits.append(names, &defined),
            None => {
                let before = ["externalReferences", "functionGroups", "sheets"];
                if let Some(behind) = before.iter().find_map(|name| self.root.child(name)) {
                    let tag = qualified(prefix, "definedNames");
                    edits.insert(behind.span.end, format!("<{tag}>{defined}</{tag}>"));
                }
            }
        }
        edits.apply(&self.text.text)
    }

    /// The workbook part without our sheets and the names that belong to them; other names keep their sheets.
    pub fn without_our_sheets(&self) -> String {
        let mut edits = Edits::default();
        let gone: Vec<usize> = self.sheets.iter().enumerate().filter(|(_, sheet)| sheet.ours).map(|(index, _)| index).collect();
        let moved = |index: u32| index - gone.iter().filter(|&&gone| (gone as u32) < index).count() as u32;
        let listed = self.root.child("sheets").map(|sheets| sheets.children.as_slice()).unwrap_or_default();
        for &index in &gone {
            edits.replace(listed[index].span.clone(), "");
        }
        let all: Vec<&Element> = names(&self.root).collect();
        let stay: Vec<&&Element> =
            all.iter().filter(|name| name.number("localSheetId").is_none_or(|sheet| !gone.contains(&(sheet as usize)))).collect();
        if let (Some(list), true) = (self.root.child("definedNames"), stay.is_empty() && !all.is_empty()) {
            edits.replace(list.span.clone(), "");
        } else {
            for name in all {
                match name.number("localSheetId") {
                    Some(sheet) if gone.contains(&(sheet as usize)) => edits.replace(name.span.clone(), ""),
                    Some(sheet) => edits.set(name, "localSheetId", moved(sheet)),
                    None => {}
                }
            }
        }
        for view in self.root.child("bookViews").iter().flat_map(|views| &views.children) {
            for tab in ["activeTab", "firstSheet"] {
                if let Some(index) = view.number(tab) {
                    let new = if gone.contains(&(index as usize)) { 0 } else { moved(index) };
                    edits.set(view, tab, new);
                }
            }
        }
        edits.apply(&self.text.text)
    }
}

/// A sheet to be listed in the workbook part.
pub struct AddedSheet {
    pub name: String,
    pub relationship: String,
    pub names: Vec<super::donor::DefinedName>,
}

fn names(root: &Element) -> impl Iterator<Item = &Element> {
    root.child("definedNames").into_iter().flat_map(|names| &names.children)
}

fn is_true(value: &str) -> bool {
    ["1", "true", "on"].contains(&value.trim())
}

/// A relationships part without the relationships that lead to any of the given parts.
pub fn without_relationships(text: &str, root: &Element, part: &str, gone: &[String]) -> String {
    let mut edits = Edits::default();
    for (element, relationship) in root.children.iter().zip(super::package::relationships_of(root, part)) {
        if relationship.part.is_some_and(|target| gone.iter().any(|gone| key(gone) == key(&target))) {
            edits.replace(element.span.clone(), "");
        }
    }
    edits.apply(text)
}

/// A content types part without entries for any of the given parts.
pub fn without_types(text: &str, root: &Element, gone: &[String]) -> String {
    let mut edits = Edits::default();
    for entry in root.children.iter().filter(|child| child.local == "Override") {
        let name = key(entry.attribute("PartName").unwrap_or_default());
        if gone.iter().any(|gone| key(gone) == name) {
            edits.replace(entry.span.clone(), "");
        }
    }
    edits.apply(text)
}
