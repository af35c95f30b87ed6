//! The workbook that holds the new sheets: what is taken over from it, and with which numbers.

use std::io::Cursor;

use quick_xml::Reader;
use quick_xml::events::{BytesStart, Event};

use super::error::Error;
use super::limits::Limits;
use super::package::{Package, Relationship, relationships_part};
use super::styles::StyleNumbers;
use super::tree::Element;

/// The new sheets' workbook, opened.
pub struct Donor<'a> {
    pub package: Package<Cursor<&'a [u8]>>,
    /// The sheets by name, each with its part.
    sheets: Vec<(String, String)>,
    /// The inner XML of each shared string.
    strings: Vec<String>,
    /// The names that belong to a sheet.
    names: Vec<DefinedName>,
    workbook: String,
}

/// A defined name that belongs to one sheet.
#[derive(Clone, Debug)]
pub struct DefinedName {
    pub name: String,
    pub hidden: bool,
    pub sheet: usize,
    pub refers_to: String,
}

fn ours(error: impl std::fmt::Display) -> Error {
    Error::Donor(error.to_string())
}

impl<'a> Donor<'a> {
    pub fn open(bytes: &'a [u8]) -> Result<Self, Error> {
        let limits = Limits { edited_part: 1 << 30, ratio: u64::MAX, ..Limits::default() };
        let mut package = Package::open(Cursor::new(bytes), limits).map_err(ours)?;
        let workbook = "xl/workbook.xml".to_owned();
        let (_, root) = package.xml(&workbook).map_err(ours)?;
        let relationships = package.relationships(&workbook).map_err(ours)?;
        let target =
            |id: &str| relationships.iter().find(|relationship| relationship.id == id).and_then(|found| found.part.clone());
        let mut sheets = Vec::new();
        for sheet in root.child("sheets").into_iter().flat_map(|sheets| &sheets.children) {
            let name = sheet.attribute("name").unwrap_or_default().to_owned();
            let part =
                sheet.prefixed_attribute("id").and_then(target).ok_or_else(|| ours(format!("the sheet {name} has no part")))?;
            sheets.push((name, part));
        }
        let names = root.child("definedNames").into_iter().flat_map(|names| &names.children).filter_map(|name| {
            Some(DefinedName {
                name: name.attribute("name")?.to_owned(),
                hidden: name.attribute("hidden") == Some("1"),
                sheet: name.number("localSheetId")? as usize,
                refers_to: name.text.clone(),
            })
        });
        let names = names.collect();
        if package.has("xl/metadata.xml") {
            return Err(ours("dynamic arrays cannot be moved into another workbook"));
        }
        let strings = if package.has("xl/sharedStrings.xml") { shared_strings(&mut package)? } else { Vec::new() };
        Ok(Donor { package, sheets, strings, names, workbook })
    }

    /// The part of a sheet.
    pub fn part(&self, name: &str) -> Result<String, Error> {
        let found = self.sheets.iter().find(|(sheet, _)| sheet == name);
        found.map(|(_, part)| part.clone()).ok_or_else(|| ours(format!("there is no sheet named {name}")))
    }

    /// The defined names that belong to a sheet.
    pub fn names_of(&self, name: &str) -> Vec<DefinedName> {
        let index = self.sheets.iter().position(|(sheet, _)| sheet == name);
        self.names.iter().filter(|defined| Some(defined.sheet) == index).cloned().collect()
    }

    /// The root of the styles part.
    pub fn styles(&mut self) -> Result<Element, Error> {
        self.package.xml("xl/styles.xml").map(|(_, root)| root).map_err(ours)
    }

    /// All parts that a part leads to, itself first, each once.
    pub fn reach(&mut self, part: &str) -> Result<Vec<String>, Error> {
        let mut found = vec![part.to_owned()];
        let mut next = 0;
        while next < found.len() {
            for target in self.package.relationships(&found[next].clone()).map_err(ours)?.into_iter().filter_map(|r| r.part) {
                if target != self.workbook && !found.contains(&target) {
                    found.push(target);
                }
            }
            next += 1;
        }
        Ok(found)
    }

    /// The relationships part of a part, if it has one, and its relationships.
    pub fn relationships(&mut self, part: &str) -> Result<Option<(Element, Vec<Relationship>)>, Error> {
        let source = relationships_part(part);
        if !self.package.has(&source) {
            return Ok(None);
        }
        let (_, root) = self.package.xml(&source).map_err(ours)?;
        let listed = super::package::relationships_of(&root, part);
        Ok(Some((root, listed)))
    }

    /// A sheet's XML with its formats renumbered, its strings written where they stand, and no tab selected.
    pub fn sheet(&mut self, part: &str, numbers: &StyleNumbers) -> Result<Vec<u8>, Error> {
        let bytes = self.package.read(part).map_err(ours)?;
        let text = std::str::from_utf8(&bytes).map_err(ours)?;
        let mut reader = Reader::from_str(text);
        let mut new = String::with_capacity(text.len() * 5 / 4);
        let mut in_shared_cell = false;
        loop {
            let start = reader.buffer_position() as usize;
            let event = reader.read_event().map_err(ours)?;
            let whole = &text[start..reader.buffer_position() as usize];
            match event {
                Event::Eof => break,
                Event::Start(tag) | Event::Empty(tag) => {
                    let name = tag.local_name();
                    match name.as_ref() {
                        "v" if in_shared_cell => {}
                        name @ ("c" | "row" | "col" | "cfRule" | "sheetView") => {
                            in_shared_cell |= self.write_tag(&mut new, name, &tag, whole.ends_with("/>"), numbers)?;
                        }
                        _ => new.push_str(whole),
                    }
                }
                Event::Text(index) if in_shared_cell => {
                    let index: usize = index.trim().parse().map_err(ours)?;
                    let string = self.strings.get(index).ok_or_else(|| ours(format!("there is no shared string {index}")))?;
                    new.push_str(&format!("<is>{string}</is>"));
                }
                Event::End(tag) if in_shared_cell => {
                    if tag.local_name().as_ref() == "c" {
                        in_shared_cell = false;
                        new.push_str(whole);
                    }
                }
                _ => new.push_str(whole),
            }
        }
        Ok(new.into_bytes())
    }

    /// Writes a start tag with its format numbers moved; tells whether it opens a cell that holds a shared string.
    fn write_tag(
        &self,
        new: &mut String,
        name: &str,
        tag: &BytesStart<'_>,
        empty: bool,
        numbers: &StyleNumbers,
    ) -> Result<bool, Error> {
        let moved = |to: &[u32], value: &str| {
            let found = value.parse::<usize>().ok().and_then(|old| to.get(old));
            found.map(u32::to_string).ok_or_else(|| ours(format!("there is no format {value}")))
        };
        let mut opens_shared = false;
        new.push_str(&format!("<{}", tag.name().as_ref()));
        for attribute in tag.attributes() {
            let attribute = attribute.map_err(ours)?;
            let (key, value) = (attribute.key.as_ref(), attribute.value.as_ref());
            let value = match (name, key) {
                ("c" | "row", "s") | ("col", "style") => moved(&numbers.cell_formats, value)?,
                ("cfRule", "dxfId") => moved(&numbers.differential, value)?,
                ("c", "t") if value == "s" => {
                    opens_shared = true;
                    "inlineStr".to_owned()
                }
                ("sheetView", "tabSelected") => continue,
                ("c", "cm") => return Err(ours("dynamic arrays cannot be moved into another workbook")),
                _ => value.to_owned(),
            };
            new.push_str(&format!(" {key}=\"{value}\""));
        }
        new.push_str(if empty { "/>" } else { ">" });
        Ok(opens_shared)
    }
}

/// The inner XML of each shared string, rich text included.
fn shared_strings(package: &mut Package<Cursor<&[u8]>>) -> Result<Vec<String>, Error> {
    let (part, root) = package.xml("xl/sharedStrings.xml").map_err(ours)?;
    let inner = |item: &Element| item.inner.clone().map(|inner| part.text[inner].to_owned()).unwrap_or_default();
    Ok(root.children.iter().map(inner).collect())
}
