//! Taking our sheets out again: exactly, as long as nobody else has changed the edited parts, else sheet by sheet.

use std::io::{Cursor, Read, Seek};

use super::error::Error;
use super::host::{Host, without_relationships, without_types};
use super::package::{Package, key, relationships_part, write_part};

/// The relationship from the workbook part to what stood there before.
pub const RELATIONSHIP: &str = "urn:risefall:before";
/// The content type of that part.
pub const CONTENT_TYPE: &str = "application/vnd.risefall.before";

const TYPES: &str = "[Content_Types].xml";
const INDEX: &str = "index";

/// A part as it was before it was edited.
pub struct Original {
    part: String,
    bytes: Vec<u8>,
}

impl Original {
    pub fn read<R: Read + Seek>(package: &mut Package<R>, part: &str) -> Result<Self, Error> {
        let bytes = package.read(part)?;
        let part = package.spelling(part).unwrap_or(part).to_owned();
        Ok(Original { part, bytes })
    }
}

/// The checksum and size of each edited part as it is now.
pub fn digests<R: Read + Seek>(package: &mut Package<R>, originals: &[Original]) -> Result<Vec<(u32, u64)>, Error> {
    originals
        .iter()
        .map(|original| {
            let bytes = package.read(&original.part)?;
            Ok((checksum(&bytes), bytes.len() as u64))
        })
        .collect()
}

/// The CRC-32 that zip directories carry (ISO 3309, reversed polynomial 0xEDB88320).
fn checksum(bytes: &[u8]) -> u32 {
    let mut crc = u32::MAX;
    for &byte in bytes {
        crc ^= u32::from(byte);
        for _ in 0..8 {
            crc = (crc >> 1) ^ (0xEDB8_8320 & (crc & 1).wrapping_neg());
        }
    }
    !crc
}

/// Packs the originals, the digests of what replaced them, and the names of the parts that were added.
pub fn pack(originals: &[Original], digests: &[(u32, u64)], added: &[String]) -> Result<Vec<u8>, Error> {
    let mut zip = zip::ZipWriter::new(Cursor::new(Vec::new()));
    let mut index = String::new();
    for (number, (original, (crc, size))) in originals.iter().zip(digests).enumerate() {
        index.push_str(&format!("edited\t{number}\t{crc:08x}\t{size}\t{}\n", original.part));
        write_part(&mut zip, &number.to_string(), &original.bytes)?;
    }
    for part in added {
        index.push_str(&format!("added\t{part}\n"));
    }
    write_part(&mut zip, INDEX, index.as_bytes())?;
    Ok(zip.finish()?.into_inner())
}

/// Restores what stood there before, if the edited parts are still exactly what was written. Tells whether it did.
pub fn restore<R: Read + Seek>(package: &mut Package<R>, host: &Host) -> Result<bool, Error> {
    let Some(kept) = host.relationships.iter().find(|link| link.kind == RELATIONSHIP).and_then(|link| link.part.clone()) else {
        return Ok(false);
    };
    if !package.has(&kept) {
        return Ok(false);
    }
    let bytes = package.read(&kept)?;
    let Ok(mut inner) = Package::open(Cursor::new(bytes), super::Limits::default()) else { return Ok(false) };
    let Ok(index) = inner.read(INDEX) else { return Ok(false) };
    let index = String::from_utf8_lossy(&index).into_owned();
    let mut edited = Vec::new();
    let mut added = vec![kept];
    for line in index.lines() {
        match line.split('\t').collect::<Vec<_>>()[..] {
            ["edited", number, crc, size, part] => {
                let written = (u32::from_str_radix(crc, 16).ok(), size.parse::<u64>().ok());
                let now = package.digest(part);
                if now.map(|(crc, size)| (Some(crc), Some(size))) != Some(written) {
                    return Ok(false);
                }
                edited.push((part.to_owned(), inner.read(number)?));
            }
            ["added", part] => added.push(part.to_owned()),
            _ => return Ok(false),
        }
    }
    for (part, bytes) in edited {
        package.replace(&part, bytes);
    }
    for part in added {
        package.leave_out(&part);
    }
    Ok(true)
}

/// Takes our sheets out by the hidden name that each carries. Tells whether there were any.
pub fn take_out<R: Read + Seek>(package: &mut Package<R>, host: &Host) -> Result<bool, Error> {
    let ours: Vec<String> = host.sheets.iter().filter(|sheet| sheet.ours).filter_map(|sheet| sheet.part.clone()).collect();
    if ours.is_empty() {
        return Ok(false);
    }
    let mut gone = ours.clone();
    gone.extend(host.relationships.iter().filter(|link| link.kind == RELATIONSHIP).filter_map(|link| link.part.clone()));
    // A calculation chain names the cells of sheets that are gone; programs make a new one.
    gone.extend(host.related("calcChain"));
    let theirs: Vec<String> = host.sheets.iter().filter(|sheet| !sheet.ours).filter_map(|sheet| sheet.part.clone()).collect();
    let kept = reach(package, &theirs, &host.part)?;
    for part in reach(package, &ours, &host.part)? {
        if !kept.iter().any(|kept| key(kept) == key(&part))
            && !host.relationships.iter().any(|link| link.part.as_deref() == Some(&part) && !link.is("worksheet"))
        {
            gone.push(part);
        }
    }
    let workbook = host.without_our_sheets();
    package.replace(&host.part, host.text.encode(&workbook));
    let links = relationships_part(&host.part);
    let (text, root) = package.xml(&links)?;
    let bytes = text.encode(&without_relationships(&text.text, &root, &host.part, &gone));
    package.replace(&links, bytes);
    let (text, root) = package.xml(TYPES)?;
    let bytes = text.encode(&without_types(&text.text, &root, &gone));
    package.replace(TYPES, bytes);
    for part in gone {
        package.leave_out(&relationships_part(&part));
        package.leave_out(&part);
    }
    Ok(true)
}

/// All parts that the given ones lead to, themselves included; the workbook part is no way on.
fn reach<R: Read + Seek>(package: &mut Package<R>, from: &[String], workbook: &str) -> Result<Vec<String>, Error> {
    let mut found = from.to_vec();
    let mut next = 0;
    while next < found.len() {
        let part = found[next].clone();
        next += 1;
        for link in package.relationships(&part)? {
            if let Some(target) = link.part.filter(|target| package.has(target) && key(target) != key(workbook))
                && !found.iter().any(|known| key(known) == key(&target))
            {
                found.push(target);
            }
        }
    }
    Ok(found)
}
