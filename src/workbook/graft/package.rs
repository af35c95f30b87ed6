//! A zip of parts as ISO/IEC 29500-2 describes it: names, contents, content types, relationships.

use std::collections::HashMap;
use std::io::{Read, Seek, SeekFrom};

use zip::ZipArchive;

use super::error::Error;
use super::limits::Limits;
use super::tree::{Element, PartText, parse};

/// The namespace of content types.
const TYPES: &str = "[Content_Types].xml";

/// A package opened for reading, with parts that are to be replaced or left out.
pub struct Package<R> {
    archive: ZipArchive<R>,
    limits: Limits,
    entries: Vec<Entry>,
    by_name: HashMap<String, usize>,
    /// New contents of parts by entry; `None` leaves the part out.
    overlay: HashMap<usize, Option<Vec<u8>>>,
}

/// An entry of the zip.
struct Entry {
    /// The name as it stands in the zip.
    name: String,
    crc: u32,
    size: u64,
}

/// A relationship of a part or of the package.
#[derive(Clone, Debug)]
pub struct Relationship {
    /// Its id, unique in its part.
    pub id: String,
    /// The type's URI.
    pub kind: String,
    /// The part it leads to, normalised; `None` outside the package.
    pub part: Option<String>,
}

impl Relationship {
    /// Whether the type's last segment is `kind`, in either variant of the standard.
    pub fn is(&self, kind: &str) -> bool {
        self.kind.rsplit('/').next() == Some(kind)
    }
}

impl<R: Read + Seek> Package<R> {
    /// Opens a package and checks what can be checked without unpacking it.
    pub fn open(mut reader: R, limits: Limits) -> Result<Self, Error> {
        let declared = check_kind(&mut reader)?;
        let mut archive = ZipArchive::new(reader)?;
        if archive.len() > limits.entries {
            return Err(Error::TooLarge { what: "entries", have: archive.len() as u64, most: limits.entries as u64 });
        }
        let (mut entries, mut by_name, mut unpacked) = (Vec::new(), HashMap::new(), 0_u64);
        let mut places = Vec::new();
        for index in 0..archive.len() {
            let file = archive.by_index_raw(index)?;
            let name = file.name()?.into_owned();
            if file.encrypted() {
                return Err(Error::EncryptedPart(name));
            }
            let (size, packed) = (file.size(), file.compressed_size());
            unpacked = unpacked.saturating_add(size);
            if size > limits.ratio_from && size / packed.max(1) > limits.ratio {
                return Err(Error::TooLarge {
                    what: "ratio of a part unpacked to packed",
                    have: size / packed.max(1),
                    most: limits.ratio,
                });
            }
            if let Some(start) = file.data_start() {
                places.push((start, start + packed));
            }
            if !file.is_dir() && by_name.insert(key(&name), entries.len()).is_some() {
                return Err(Error::Twice(name));
            }
            entries.push(Entry { name, crc: file.crc32(), size });
        }
        if declared.is_some_and(|declared| declared > archive.len() as u64) {
            return Err(Error::Twice("the same".into()));
        }
        if unpacked > limits.unpacked {
            return Err(Error::TooLarge { what: "bytes unpacked", have: unpacked, most: limits.unpacked });
        }
        places.sort_unstable();
        if places.windows(2).any(|pair| pair[1].0 < pair[0].1) {
            return Err(Error::Damaged("parts overlap in the zip".into()));
        }
        Ok(Package { archive, limits, entries, by_name, overlay: HashMap::new() })
    }

    /// Whether a part is there, upper and lower case not told apart.
    pub fn has(&self, part: &str) -> bool {
        self.index(part).is_some()
    }

    fn index(&self, part: &str) -> Option<usize> {
        let index = *self.by_name.get(&key(part))?;
        (self.overlay.get(&index) != Some(&None)).then_some(index)
    }

    /// A part's bytes; only for parts that are edited or read whole, held to a limit.
    pub fn read(&mut self, part: &str) -> Result<Vec<u8>, Error> {
        let Some(index) = self.index(part) else {
            return Err(Error::Damaged(format!("the part {part} is missing")));
        };
        if let Some(Some(bytes)) = self.overlay.get(&index) {
            return Ok(bytes.clone());
        }
        let most = self.limits.edited_part;
        if self.entries[index].size > most {
            return Err(Error::TooLarge { what: "bytes of a part that must be read", have: self.entries[index].size, most });
        }
        let mut bytes = Vec::new();
        let file = self.archive.by_index(index)?;
        let read = file.take(most + 1).read_to_end(&mut bytes);
        read.map_err(|error| Error::Damaged(format!("the part {part} cannot be unpacked ({error})")))?;
        if bytes.len() as u64 > most {
            return Err(Error::TooLarge { what: "bytes of a part that must be read", have: bytes.len() as u64, most });
        }
        Ok(bytes)
    }

    /// A part's text and tree.
    pub fn xml(&mut self, part: &str) -> Result<(PartText, Element), Error> {
        let bytes = self.read(part)?;
        let wrong = |error| Error::Part { part: part.to_owned(), error };
        let text = PartText::decode(&bytes).map_err(wrong)?;
        let root = parse(&text.text).map_err(wrong)?;
        Ok((text, root))
    }

    /// The name of a part as the zip spells it.
    pub fn spelling(&self, part: &str) -> Option<&str> {
        self.index(part).map(|index| self.entries[index].name.as_str())
    }

    /// The checksum and size of a part, from the zip's directory or from its replacement.
    pub fn digest(&self, part: &str) -> Option<(u32, u64)> {
        let index = self.index(part)?;
        match self.overlay.get(&index) {
            Some(_) => None,
            None => Some((self.entries[index].crc, self.entries[index].size)),
        }
    }

    /// Replaces a part's contents.
    pub fn replace(&mut self, part: &str, bytes: Vec<u8>) {
        if let Some(index) = self.index(part) {
            self.overlay.insert(index, Some(bytes));
        }
    }

    /// Leaves a part out.
    pub fn leave_out(&mut self, part: &str) {
        if let Some(index) = self.index(part) {
            self.overlay.insert(index, None);
        }
    }

    /// The names of all parts, as the zip spells them.
    pub fn parts(&self) -> impl Iterator<Item = &str> {
        let kept = self.entries.iter().enumerate().filter(|(index, _)| self.overlay.get(index) != Some(&None));
        kept.map(|(_, entry)| entry.name.as_str())
    }

    /// The relationships of a part; of the package itself for an empty name.
    pub fn relationships(&mut self, part: &str) -> Result<Vec<Relationship>, Error> {
        let source = relationships_part(part);
        if !self.has(&source) {
            return Ok(Vec::new());
        }
        let (_, root) = self.xml(&source)?;
        Ok(relationships_of(&root, part))
    }

    /// The content type of a part.
    pub fn content_type(&mut self, part: &str) -> Result<Option<String>, Error> {
        let (_, root) = self.xml(TYPES)?;
        Ok(content_type_in(&root, part))
    }

    /// Copies everything to a new zip: untouched entries with their compressed bytes, in their order.
    pub fn copy_to<W: std::io::Write + Seek>(
        &mut self,
        zip: &mut zip::ZipWriter<W>,
        progress: &mut dyn FnMut(u64, u64),
    ) -> Result<(), Error> {
        let total = self.entries.len() as u64;
        let mut overlay = std::mem::take(&mut self.overlay);
        for index in 0..self.entries.len() {
            progress(index as u64, total);
            match overlay.remove(&index) {
                None => zip.raw_copy_file(self.archive.by_index_raw(index)?)?,
                Some(None) => {}
                Some(Some(bytes)) => write_part(zip, &self.entries[index].name, &bytes)?,
            }
        }
        Ok(())
    }
}

/// Unpacks every part once without keeping it: checksums must hold, and no XML part may declare a document type.
pub fn verify<R: Read + Seek>(reader: R) -> Result<(), Error> {
    const HEAD: usize = 1024;
    let mut archive = ZipArchive::new(reader)?;
    for index in 0..archive.len() {
        let mut file = archive.by_index(index)?;
        let name = file.name()?.into_owned();
        let damaged = |error: std::io::Error| Error::Damaged(format!("the part {name} cannot be unpacked ({error})"));
        let mut head = Vec::with_capacity(HEAD);
        file.by_ref().take(HEAD as u64).read_to_end(&mut head).map_err(damaged)?;
        let is_xml = name.ends_with(".xml") || name.ends_with(".rels");
        if is_xml && head.windows(9).any(|window| window == b"<!DOCTYPE") {
            return Err(Error::Part { part: name, error: super::tree::XmlError::DocType });
        }
        std::io::copy(&mut file, &mut std::io::sink()).map_err(damaged)?;
    }
    Ok(())
}

/// Writes a part, deflated, with a fixed time so that the same input gives the same bytes.
pub fn write_part<W: std::io::Write + Seek>(zip: &mut zip::ZipWriter<W>, name: &str, bytes: &[u8]) -> Result<(), Error> {
    let options = zip::write::SimpleFileOptions::default()
        .compression_method(zip::CompressionMethod::Deflated)
        .last_modified_time(zip::DateTime::default())
        .large_file(bytes.len() as u64 >= u64::from(u32::MAX));
    zip.start_file(name, options)?;
    std::io::Write::write_all(zip, bytes)?;
    Ok(())
}

/// Looks at the first bytes, and at how many entries the zip's end record declares.
fn check_kind<R: Read + Seek>(reader: &mut R) -> Result<Option<u64>, Error> {
    let length = reader.seek(SeekFrom::End(0))?;
    if length == 0 {
        return Err(Error::Empty);
    }
    reader.seek(SeekFrom::Start(0))?;
    let mut head = Vec::new();
    reader.by_ref().take(8).read_to_end(&mut head)?;
    if head.starts_with(&[0xD0, 0xCF, 0x11, 0xE0]) {
        return Err(Error::Compound);
    }
    if !head.starts_with(b"PK") {
        return Err(Error::NotAZip);
    }
    const END_RECORD: u64 = 22;
    let tail_length = length.min(END_RECORD + u64::from(u16::MAX));
    reader.seek(SeekFrom::End(-(tail_length as i64)))?;
    let mut tail = Vec::new();
    reader.by_ref().take(tail_length).read_to_end(&mut tail)?;
    reader.seek(SeekFrom::Start(0))?;
    let end = tail.windows(4).rposition(|four| four == b"PK\x05\x06");
    let count = end.and_then(|at| tail.get(at + 10..at + 12)).map(|two| u16::from_le_bytes([two[0], two[1]]));
    Ok(count.filter(|&count| count != u16::MAX).map(u64::from))
}

/// How part names are compared: forward slashes, no slash in front, case not told apart.
pub fn key(name: &str) -> String {
    normal(name).to_lowercase()
}

/// A part name with forward slashes and no slash in front.
pub fn normal(name: &str) -> String {
    name.replace('\\', "/").trim_start_matches("./").trim_start_matches('/').to_owned()
}

/// The part that holds the relationships of a part.
pub fn relationships_part(part: &str) -> String {
    let (folder, file) = part.rsplit_once('/').unwrap_or(("", part));
    if folder.is_empty() { format!("_rels/{file}.rels") } else { format!("{folder}/_rels/{file}.rels") }
}

/// The folder of a part.
pub fn folder(part: &str) -> &str {
    part.rsplit_once('/').map_or("", |(folder, _)| folder)
}

/// Where a relationship's target leads from a part.
pub fn resolve(part: &str, target: &str) -> String {
    let target = target.split('#').next().unwrap_or_default().replace('\\', "/");
    let mut segments: Vec<&str> = if target.starts_with('/') { Vec::new() } else { folder(part).split('/').collect() };
    for segment in target.split('/') {
        match segment {
            "" | "." => {}
            ".." => {
                segments.pop();
            }
            other => segments.push(other),
        }
    }
    segments.retain(|segment| !segment.is_empty());
    segments.join("/")
}

/// The shortest target that leads from one part to another.
pub fn relative(from: &str, to: &str) -> String {
    let (from, to): (Vec<&str>, Vec<&str>) = (from.split('/').collect(), to.split('/').collect());
    let shared = from[..from.len() - 1].iter().zip(&to[..to.len() - 1]).take_while(|(a, b)| a == b).count();
    let up = std::iter::repeat_n("..", from.len() - 1 - shared);
    up.chain(to[shared..].iter().copied()).collect::<Vec<_>>().join("/")
}

/// The relationships in a relationships part.
pub fn relationships_of(root: &Element, part: &str) -> Vec<Relationship> {
    let listed = root.children.iter().filter(|child| child.local == "Relationship");
    listed
        .map(|child| {
            let target = child.attribute("Target").unwrap_or_default();
            let outside = child.attribute("TargetMode") == Some("External");
            Relationship {
                id: child.attribute("Id").unwrap_or_default().to_owned(),
                kind: child.attribute("Type").unwrap_or_default().to_owned(),
                part: (!outside).then(|| resolve(part, target)),
            }
        })
        .collect()
}

/// The content type of a part by its own entry, else by its extension.
pub fn content_type_in(root: &Element, part: &str) -> Option<String> {
    let mut own = root.children.iter().filter(|child| child.local == "Override");
    let found = own.rfind(|child| key(child.attribute("PartName").unwrap_or_default()) == key(part));
    let extension = part.rsplit('.').next().unwrap_or_default();
    let usual = || {
        let mut defaults = root.children.iter().filter(|child| child.local == "Default");
        defaults.rfind(|child| child.attribute("Extension").is_some_and(|ext| ext.eq_ignore_ascii_case(extension)))
    };
    found.or_else(usual)?.attribute("ContentType").map(str::to_owned)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn targets_lead_both_ways() {
        assert_eq!(resolve("xl/worksheets/sheet1.xml", "../drawings/drawing1.xml"), "xl/drawings/drawing1.xml");
        assert_eq!(resolve("xl/workbook.xml", "/xl/styles.xml"), "xl/styles.xml");
        assert_eq!(resolve("", "xl/workbook.xml"), "xl/workbook.xml");
        assert_eq!(relative("xl/worksheets/sheet1.xml", "xl/drawings/drawing1.xml"), "../drawings/drawing1.xml");
        assert_eq!(relative("xl/workbook.xml", "xl/worksheets/sheet1.xml"), "worksheets/sheet1.xml");
        assert_eq!(relative("workbook.xml", "worksheets/sheet1.xml"), "worksheets/sheet1.xml");
        assert_eq!(relationships_part("xl/workbook.xml"), "xl/_rels/workbook.xml.rels");
        assert_eq!(relationships_part(""), "_rels/.rels");
    }
}
