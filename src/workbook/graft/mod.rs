//! The new sheets moved into the user's package, with nothing else disturbed.
//!
//! Parts are copied with their compressed bytes. Only the content types, the workbook part, its relationships and the
//! styles are edited, by inserting text into what stood there. New sheets hold their strings in their cells, so that the
//! user's shared strings stay as they are.
//!
//! So that a second annotation replaces the first, the edited parts' original bytes are kept in one small part of our own
//! together with digests of what was written: as long as nobody else has changed those parts, undoing restores them
//! exactly. After an office program has saved the workbook, our sheets are found by a hidden name that each carries, and
//! are taken out one by one.
//!
//! Standards: ISO/IEC 29500-1 (SpreadsheetML, both variants) and 29500-2 (packages).

mod donor;
mod error;
mod host;
mod limits;
mod package;
mod styles;
mod tree;
mod undo;

use std::collections::HashMap;
use std::io::{Read, Seek, Write};

pub use error::Error;
pub use host::Sheet;
pub use limits::Limits;
pub use package::verify;

use donor::Donor;
use host::{AddedSheet, Host, MARKER};
use package::{Package, folder, key, relationships_part, relative, write_part};
use tree::{Edits, PartText, escape};

use super::package_kind::PackageKind;

const TYPES: &str = "[Content_Types].xml";
/// The first segments of relationship types and namespaces, transitional and strict.
const VARIANTS: [(&str, &str); 3] = [
    (
        "http://schemas.openxmlformats.org/officeDocument/2006/relationships",
        "http://purl.oclc.org/ooxml/officeDocument/relationships",
    ),
    ("http://schemas.openxmlformats.org/spreadsheetml/2006/main", "http://purl.oclc.org/ooxml/spreadsheetml/main"),
    ("http://schemas.openxmlformats.org/drawingml/2006/", "http://purl.oclc.org/ooxml/drawingml/"),
];

/// A workbook opened to be annotated: our own sheets of an earlier time are already taken out of view.
pub struct Workbook<R> {
    package: Package<R>,
    host: Host,
    signed: bool,
    earlier: Vec<Sheet>,
}

/// What is taken over from the donor.
pub struct Plan<'a> {
    /// The new sheets' workbook.
    pub donor: &'a [u8],
    /// The names of the sheets to take over, in order. All others are placeholders and stay behind.
    pub sheets: &'a [String],
}

impl<R: Read + Seek> Workbook<R> {
    /// Opens a workbook, checks it, and undoes an earlier annotation.
    pub fn open(reader: R, limits: Limits) -> Result<Self, Error> {
        let mut package = Package::open(reader, limits)?;
        let before = Host::read(&mut package)?;
        let earlier: Vec<Sheet> = before.sheets.iter().filter(|sheet| sheet.ours).cloned().collect();
        let host = if undo::restore(&mut package, &before)? || undo::take_out(&mut package, &before)? {
            Host::read(&mut package)?
        } else {
            before
        };
        let signed = package.relationships("")?.iter().any(|relationship| relationship.kind.contains("/digital-signature/"));
        Ok(Workbook { package, host, signed, earlier })
    }

    /// The user's sheets in order.
    pub fn sheets(&self) -> &[Sheet] {
        &self.host.sheets
    }

    /// The sheets of an earlier annotation, which will be replaced.
    pub fn earlier_sheets(&self) -> &[Sheet] {
        &self.earlier
    }

    /// What kind of package it is.
    pub fn package_kind(&self) -> PackageKind {
        PackageKind::of_part(&self.host.content_type)
    }

    /// Whether dates count from 1904.
    pub fn dates_from_1904(&self) -> bool {
        self.host.dates_from_1904()
    }

    /// Whether the structure is protected against adding sheets.
    pub fn is_protected(&self) -> bool {
        self.host.is_protected()
    }

    /// Whether the package carries a digital signature, which any change makes void.
    pub fn is_signed(&self) -> bool {
        self.signed
    }

    /// Writes the workbook without our sheets.
    ///
    /// # Errors
    /// There are none.
    pub fn remove<W: Write + Seek>(mut self, out: W) -> Result<(), Error> {
        if self.earlier.is_empty() {
            return Err(Error::NothingToRemove);
        }
        let mut zip = zip::ZipWriter::new(out);
        self.package.copy_to(&mut zip, &mut |_, _| {})?;
        zip.finish()?.flush()?;
        Ok(())
    }

    /// Writes the workbook with the new sheets behind its own. `progress` gets entries copied and entries in all.
    pub fn graft<W: Write + Seek>(mut self, plan: &Plan, out: W, progress: &mut dyn FnMut(u64, u64)) -> Result<(), Error> {
        let mut donor = Donor::open(plan.donor)?;
        let base = folder(&self.host.part).to_owned();
        let (types_text, types) = self.package.xml(TYPES)?;
        let mut taken: Vec<String> = self.package.parts().map(key).collect();
        taken.extend(types.children.iter().filter_map(|child| child.attribute("PartName")).map(key));

        let mut originals = vec![undo::Original::read(&mut self.package, TYPES)?];
        let mut new_types = Vec::new();
        let mut new_relationships = Vec::new();
        let mut ids: Vec<String> = self.host.relationships.iter().map(|relationship| relationship.id.to_lowercase()).collect();
        let mut relate = |kind: String, target: &str| {
            let id = (1..).map(|n| format!("rIdTrend{n}")).find(|id| !ids.contains(&id.to_lowercase())).unwrap_or_default();
            ids.push(id.to_lowercase());
            new_relationships.push((id.clone(), kind, target.to_owned()));
            id
        };

        // Styles: appended to the user's, or a part of our own where there is none.
        let mut new_styles = donor.styles()?;
        if self.host.is_strict() {
            styles::to_strict(&mut new_styles);
        }
        let styles_part = self.host.related("styles").filter(|part| self.package.has(part));
        let (numbers, own_styles) = match &styles_part {
            Some(part) => {
                originals.push(undo::Original::read(&mut self.package, part)?);
                let (text, root) = self.package.xml(part)?;
                let (merged, numbers) = styles::merge(&text.text, &root, &new_styles);
                self.package.replace(part, text.encode(&merged));
                (numbers, None)
            }
            None => {
                let bare = styles::empty(&self.host.root.namespace);
                let root = tree::parse(&bare).map_err(|error| Error::Donor(error.to_string()))?;
                let (merged, numbers) = styles::merge(&bare, &root, &new_styles);
                (numbers, Some(merged))
            }
        };
        let mut written: Vec<(String, Vec<u8>)> = Vec::new();
        if let Some(text) = own_styles {
            let part = free(&base, "styles.xml", &mut taken);
            relate(self.kind("styles"), &part);
            new_types.push((part.clone(), format!("{SPREADSHEET_TYPE}styles+xml")));
            written.push((part, text.into_bytes()));
        }

        // Sheets and all parts that they lead to, under free names.
        let mut added = Vec::new();
        for name in plan.sheets {
            let sheet = donor.part(name)?;
            let parts = donor.reach(&sheet)?;
            let mut moves = HashMap::new();
            for part in &parts {
                let inner = part.strip_prefix("xl/").unwrap_or(part);
                moves.insert(part.clone(), free(&base, inner, &mut taken));
            }
            for part in &parts {
                let bytes = if *part == sheet { donor.sheet(part, &numbers)? } else { finished(donor.package.read(part)?) };
                written.push((moves[part].clone(), self.in_our_variant(part, bytes)));
                let kind = donor.package.content_type(part)?.unwrap_or_default();
                new_types.push((moves[part].clone(), kind));
                if let Some(text) = self.moved_relationships(&mut donor, part, &moves)? {
                    let links = relationships_part(&moves[part]);
                    if package::content_type_in(&types, &links).is_none() {
                        new_types.push((links.clone(), "application/vnd.openxmlformats-package.relationships+xml".into()));
                    }
                    written.push((links, text.into_bytes()));
                }
            }
            let relationship = relate(self.kind("worksheet"), &moves[&sheet]);
            let mut names = donor.names_of(name);
            let refers_to = escape(&format!("{}!$A$1", super::reference::quote_sheet(name)));
            names.push(donor::DefinedName { name: MARKER.into(), hidden: true, sheet: 0, refers_to });
            added.push(AddedSheet { name: name.clone(), relationship, names });
        }

        // What was there before, kept for undoing.
        let kept = free(&base, "risefall/before.bin", &mut taken);
        relate(undo::RELATIONSHIP.into(), &kept);
        new_types.push((kept.clone(), undo::CONTENT_TYPE.into()));

        originals.push(undo::Original::read(&mut self.package, &self.host.part)?);
        let workbook = self.host.with_sheets(&added);
        self.package.replace(&self.host.part.clone(), self.host.text.encode(&workbook));
        let links = relationships_part(&self.host.part);
        originals.push(undo::Original::read(&mut self.package, &links)?);
        let (text, root) = self.package.xml(&links)?;
        let mut edits = Edits::default();
        let tag = tree::qualified(&root.prefix, "Relationship");
        let listed = new_relationships.iter().map(|(id, kind, target)| {
            format!("<{tag} Id=\"{id}\" Type=\"{kind}\" Target=\"{}\"/>", escape(&relative(&self.host.part, target)))
        });
        edits.append(&root, &listed.collect::<String>());
        let bytes = text.encode(&edits.apply(&text.text));
        self.package.replace(&links, bytes);
        let typed = with_types(&types_text, &types, &new_types);
        self.package.replace(TYPES, typed);

        let parts: Vec<String> = written.iter().map(|(part, _)| part.clone()).collect();
        let digests = undo::digests(&mut self.package, &originals)?;
        let mut zip = zip::ZipWriter::new(out);
        self.package.copy_to(&mut zip, progress)?;
        for (part, bytes) in &written {
            write_part(&mut zip, part, bytes)?;
        }
        write_part(&mut zip, &kept, &undo::pack(&originals, &digests, &parts)?)?;
        zip.finish()?.flush()?;
        Ok(())
    }

    /// A relationship type of the workbook's variant of the standard.
    fn kind(&self, last: &str) -> String {
        let (transitional, strict) = VARIANTS[0];
        format!("{}/{last}", if self.host.is_strict() { strict } else { transitional })
    }

    /// A part of the donor with the namespaces of the workbook's variant of the standard.
    fn in_our_variant(&self, part: &str, bytes: Vec<u8>) -> Vec<u8> {
        if !self.host.is_strict() || !part.ends_with(".xml") {
            return bytes;
        }
        match String::from_utf8(bytes) {
            Ok(text) => strict(&text).into_bytes(),
            Err(error) => error.into_bytes(),
        }
    }

    /// The relationships of a donor's part, leading to the new names.
    fn moved_relationships(
        &self,
        donor: &mut Donor,
        part: &str,
        moves: &HashMap<String, String>,
    ) -> Result<Option<String>, Error> {
        let Some((root, listed)) = donor.relationships(part)? else { return Ok(None) };
        let mut text = String::from("<?xml version=\"1.0\" encoding=\"UTF-8\" standalone=\"yes\"?>\n");
        text.push_str("<Relationships xmlns=\"http://schemas.openxmlformats.org/package/2006/relationships\">");
        for (element, relationship) in root.children.iter().zip(&listed) {
            let kind = if self.host.is_strict() { strict(&relationship.kind) } else { relationship.kind.clone() };
            let (target, mode) = match &relationship.part {
                Some(target) => {
                    let moved = moves.get(target).ok_or_else(|| Error::Donor(format!("{target} was not taken over")))?;
                    (relative(&moves[part], moved), "")
                }
                None => (element.attribute("Target").unwrap_or_default().to_owned(), " TargetMode=\"External\""),
            };
            let (id, target) = (escape(&relationship.id), escape(&target));
            text.push_str(&format!("<Relationship Id=\"{id}\" Type=\"{}\" Target=\"{target}\"{mode}/>", escape(&kind)));
        }
        text.push_str("</Relationships>");
        Ok(Some(text))
    }
}

const SPREADSHEET_TYPE: &str = "application/vnd.openxmlformats-officedocument.spreadsheetml.";

/// A text in the strict variant: other namespaces, and percentages written with their sign.
fn strict(text: &str) -> String {
    let mut text = VARIANTS.iter().fold(text.to_owned(), |text, (transitional, strict)| text.replace(transitional, strict));
    for element in ["<c:lblOffset val=\"", "<c:gapWidth val=\"", "<c:overlap val=\""] {
        let mut from = 0;
        while let Some(at) = text[from..].find(element) {
            from += at + element.len();
            if let Some(quote) = text[from..].find('"') {
                text.insert(from + quote, '%');
            }
        }
    }
    text
}

/// A part of the donor as it goes into the workbook. The line series of a chart say that their lines are straight, since LibreOffice
/// smooths those that say nothing; and the brackets fall that kept ranges from being remembered cell by cell.
fn finished(bytes: Vec<u8>) -> Vec<u8> {
    let mut text = match String::from_utf8(bytes) {
        Ok(text) if text.contains("<c:lineChart>") => text,
        Ok(text) => return text.into_bytes(),
        Err(error) => return error.into_bytes(),
    };
    if !text.contains("<c:smooth") {
        text = text.replace("</c:ser>", "<c:smooth val=\"0\"/></c:ser>");
    }
    text.replace("<c:f>(", "<c:f>").replace(")</c:f>", "</c:f>").into_bytes()
}

/// The content types with an entry for each new part.
fn with_types(text: &PartText, root: &tree::Element, new: &[(String, String)]) -> Vec<u8> {
    let mut edits = Edits::default();
    let tag = tree::qualified(&root.prefix, "Override");
    let listed = new.iter().map(|(part, kind)| format!("<{tag} PartName=\"/{}\" ContentType=\"{kind}\"/>", escape(part)));
    edits.append(root, &listed.collect::<String>());
    text.encode(&edits.apply(&text.text))
}

/// A free part name like the given one, with another number if it is taken.
fn free(base: &str, inner: &str, taken: &mut Vec<String>) -> String {
    let joined = |inner: &str| if base.is_empty() { inner.to_owned() } else { format!("{base}/{inner}") };
    let (stem, extension) = inner.rsplit_once('.').unwrap_or((inner, ""));
    let stem = stem.trim_end_matches(|c: char| c.is_ascii_digit());
    let numbered = (1_u32..).map(|n| joined(&format!("{stem}{n}.{extension}")));
    let candidates = std::iter::once(joined(inner)).chain(numbered);
    let is_free = |name: &String| !taken.contains(&key(name)) && !taken.contains(&key(&relationships_part(name)));
    let name = candidates.into_iter().find(is_free).unwrap_or_default();
    taken.push(key(&name));
    name
}
