//! How large a package may be. A hostile file costs at most this.

/// The limits on a package.
#[derive(Clone, Copy, Debug)]
pub struct Limits {
    /// Entries in the zip. The largest real workbooks have a few thousand parts.
    pub entries: usize,
    /// Bytes of all parts unpacked: 4 GiB, several times the largest workbook an office program opens well.
    pub unpacked: u64,
    /// Bytes of one part that is edited or read whole: 64 MiB. Sheets are streamed and do not count.
    pub edited_part: u64,
    /// How many times larger a part may be unpacked than packed. Deflate cannot exceed 1032; a sheet of one repeated row
    /// reaches a few hundred, so only large parts are held to it.
    pub ratio: u64,
    /// Parts below this size unpacked are not held to the ratio: 64 MiB.
    pub ratio_from: u64,
}

impl Default for Limits {
    fn default() -> Self {
        Limits { entries: 20_000, unpacked: 4 << 30, edited_part: 64 << 20, ratio: 400, ratio_from: 64 << 20 }
    }
}
