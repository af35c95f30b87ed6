//! The macro project of the macro-enabled copy, written as [MS-OVBA] sets it out: a compound file whose streams hold the
//! list of modules and their source, without the machine code that an office program makes for itself.

use std::io::{Cursor, Write};
use std::time::SystemTime;

use cfb::{CompoundFile, Version};

use super::vba_compression::compress;

/// What a module belongs to.
#[derive(Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// The workbook itself.
    Workbook,
    /// One of its sheets.
    Sheet,
    /// Neither: a module of its own.
    Plain,
}

/// A module: the name by which the project knows it, and its source. Plain modules state their name in the source.
pub struct Module<'a> {
    pub name: &'a str,
    pub kind: Kind,
    pub source: &'a str,
}

const PROJECT_ID: &str = "{6B1C6C1E-7C1D-4C43-9A55-7D0B3A5E2026}";
const HOST_EXTENDER: &str = "{3832D640-CF90-11CF-8E43-00A0C911005A}";
const TYPE_LIBRARY: &str = "*\\G{00020430-0000-0000-C000-000000000046}#2.0#0#C:\\Windows\\System32\\stdole2.tlb#OLE Automation";

/// The bytes of `vbaProject.bin`. Names and sources must be ASCII; the same modules give the same bytes.
///
/// # Errors
/// The compound file cannot be laid out.
pub fn build(modules: &[Module]) -> std::io::Result<Vec<u8>> {
    let mut file = CompoundFile::create_with_version(Version::V3, Cursor::new(Vec::new()))?;
    file.create_storage("/VBA")?;
    // The version 0xFFFF says that there is no machine code (section 2.3.4.1).
    let cache: &[u8] = &[0xCC, 0x61, 0xFF, 0xFF, 0x00, 0x00, 0x00];
    file.create_stream("/VBA/_VBA_PROJECT")?.write_all(cache)?;
    file.create_stream("/VBA/dir")?.write_all(&compress(&directory(modules)))?;
    for module in modules {
        file.create_stream(format!("/VBA/{}", module.name))?.write_all(&compress(source(module).as_bytes()))?;
    }
    file.create_stream("/PROJECT")?.write_all(project(modules).as_bytes())?;
    file.create_stream("/PROJECTwm")?.write_all(&names(modules))?;
    for storage in ["/", "/VBA"] {
        file.set_created_time(storage, SystemTime::UNIX_EPOCH)?;
        file.set_modified_time(storage, SystemTime::UNIX_EPOCH)?;
    }
    file.flush()?;
    Ok(file.into_inner().into_inner())
}

/// The source with the attributes that tell what the module belongs to (section 2.3.4.3).
fn source(module: &Module) -> String {
    let base = match module.kind {
        Kind::Workbook => "0{00020819-0000-0000-C000-000000000046}",
        Kind::Sheet => "0{00020820-0000-0000-C000-000000000046}",
        Kind::Plain => return windows_lines(module.source),
    };
    let attributes = [
        format!("VB_Name = \"{}\"", module.name),
        format!("VB_Base = \"{base}\""),
        "VB_GlobalNameSpace = False".into(),
        "VB_Creatable = False".into(),
        "VB_PredeclaredId = True".into(),
        "VB_Exposed = True".into(),
        "VB_TemplateDerived = False".into(),
        "VB_Customizable = True".into(),
    ];
    attributes.iter().map(|line| format!("Attribute {line}\r\n")).collect::<String>() + &windows_lines(module.source)
}

fn windows_lines(text: &str) -> String {
    text.lines().map(|line| format!("{line}\r\n")).collect()
}

/// The `dir` stream before compression (section 2.3.4.2): records of a number, a length and the content.
fn directory(modules: &[Module]) -> Vec<u8> {
    let mut records = Records(Vec::new());
    let long = |value: u32| value.to_le_bytes();
    let short = |value: u16| value.to_le_bytes();
    records.add(0x0001, &long(3)).add(0x0002, &long(0x0409)).add(0x0014, &long(0x0409)).add(0x0003, &short(1252));
    records.add(0x0004, b"VBAProject").add(0x0005, b"").add(0x0040, b"").add(0x0006, b"").add(0x003D, b"");
    records.add(0x0007, &long(0)).add(0x0008, &long(0));
    // The version's stated length covers only its first part; the minor number follows.
    records.add(0x0009, &long(1));
    records.0.extend(short(0));
    records.add(0x000C, b"").add(0x003C, b"");
    records.add(0x0016, b"stdole").add(0x003E, &wide("stdole"));
    let library = [&long(TYPE_LIBRARY.len() as u32), TYPE_LIBRARY.as_bytes(), &[0; 6]].concat();
    records.add(0x000D, &library);
    records.add(0x000F, &short(modules.len() as u16)).add(0x0013, &short(0xFFFF));
    for module in modules {
        let (name, wide_name) = (module.name.as_bytes(), wide(module.name));
        records.add(0x0019, name).add(0x0047, &wide_name).add(0x001A, name).add(0x0032, &wide_name);
        records.add(0x001C, b"").add(0x0048, b"").add(0x0031, &long(0)).add(0x001E, &long(0)).add(0x002C, &short(0xFFFF));
        records.add(if module.kind == Kind::Plain { 0x0021 } else { 0x0022 }, b"").add(0x002B, b"");
    }
    records.add(0x0010, b"");
    records.0
}

struct Records(Vec<u8>);

impl Records {
    fn add(&mut self, number: u16, content: &[u8]) -> &mut Self {
        self.0.extend(number.to_le_bytes());
        self.0.extend((content.len() as u32).to_le_bytes());
        self.0.extend(content);
        self
    }
}

fn wide(text: &str) -> Vec<u8> {
    text.encode_utf16().flat_map(u16::to_le_bytes).collect()
}

/// The `PROJECTwm` stream: each name in bytes and in UTF-16 (section 2.3.3).
fn names(modules: &[Module]) -> Vec<u8> {
    let each = modules.iter().flat_map(|module| [module.name.as_bytes(), &[0], &wide(module.name), &[0, 0]].concat());
    each.chain([0, 0]).collect()
}

/// The `PROJECT` stream (section 2.3.1).
fn project(modules: &[Module]) -> String {
    let mut text = format!("ID=\"{PROJECT_ID}\"\r\n");
    for module in modules {
        text += &match module.kind {
            Kind::Plain => format!("Module={}\r\n", module.name),
            _ => format!("Document={}/&H00000000\r\n", module.name),
        };
    }
    text += "Name=\"VBAProject\"\r\nHelpContextID=\"0\"\r\nVersionCompatible32=\"393222000\"\r\n";
    // Nobody is locked out, no password is set, and the project may be seen (sections 2.3.1.15 to 2.3.1.17).
    for (name, seed, data) in [("CMG", 0x0F, [0; 4].as_slice()), ("DPB", 0x1E, &[0]), ("GC", 0x2D, &[0xFF])] {
        text += &format!("{name}=\"{}\"\r\n", masked(seed, data));
    }
    text += &format!("\r\n[Host Extender Info]\r\n&H00000001={HOST_EXTENDER};VBE;&H00000000\r\n\r\n[Workspace]\r\n");
    for module in modules {
        text += &format!("{}=0, 0, 0, 0, C\r\n", module.name);
    }
    text
}

/// Data masked with the project's identity, in hexadecimal (section 2.4.3.2).
fn masked(seed: u8, data: &[u8]) -> String {
    const VERSION: u8 = 2;
    let key = PROJECT_ID.bytes().fold(0_u8, u8::wrapping_add);
    let mut bytes = vec![seed, seed ^ VERSION, seed ^ key];
    let (mut plain, mut last, mut before) = (key, seed ^ key, seed ^ VERSION);
    let ignored = usize::from((seed & 6) / 2);
    let length = (data.len() as u32).to_le_bytes();
    for &byte in [0_u8; 3][..ignored].iter().chain(&length).chain(data) {
        let written = byte ^ before.wrapping_add(plain);
        bytes.push(written);
        (before, last, plain) = (last, written, byte);
    }
    bytes.iter().map(|byte| format!("{byte:02X}")).collect()
}
