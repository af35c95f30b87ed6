//! The kinds of workbook packages, by which programs know them: ECMA-376 part 1, section 12.3.23, and the two
//! macro-enabled kinds.

/// What a workbook package is. Its file's ending must agree, or spreadsheet programs refuse to open it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum PackageKind {
    /// A workbook.
    #[default]
    Workbook,
    /// A workbook with macros.
    MacroWorkbook,
    /// A template.
    Template,
    /// A template with macros.
    MacroTemplate,
}

impl PackageKind {
    /// All kinds.
    pub const ALL: [PackageKind; 4] =
        [PackageKind::Workbook, PackageKind::MacroWorkbook, PackageKind::Template, PackageKind::MacroTemplate];

    /// The kind that the content type of the workbook part tells; a plain workbook if it tells none.
    pub fn of_part(content_type: &str) -> Self {
        let base = |kind: &PackageKind| kind.media_type().trim_end_matches(".12");
        PackageKind::ALL.into_iter().find(|kind| content_type.starts_with(base(kind))).unwrap_or_default()
    }

    /// The ending of such a file's name, without the point.
    pub const fn ending(self) -> &'static str {
        match self {
            PackageKind::Workbook => "xlsx",
            PackageKind::MacroWorkbook => "xlsm",
            PackageKind::Template => "xltx",
            PackageKind::MacroTemplate => "xltm",
        }
    }

    /// The media type of such a file.
    pub const fn media_type(self) -> &'static str {
        match self {
            PackageKind::Workbook => "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
            PackageKind::MacroWorkbook => "application/vnd.ms-excel.sheet.macroEnabled.12",
            PackageKind::Template => "application/vnd.openxmlformats-officedocument.spreadsheetml.template",
            PackageKind::MacroTemplate => "application/vnd.ms-excel.template.macroEnabled.12",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_content_type_tells_the_kind() {
        for (text, kind) in [
            ("application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml", PackageKind::Workbook),
            ("application/vnd.openxmlformats-officedocument.spreadsheetml.template.main+xml", PackageKind::Template),
            ("application/vnd.ms-excel.sheet.macroEnabled.main+xml", PackageKind::MacroWorkbook),
            ("application/vnd.ms-excel.template.macroEnabled.main+xml", PackageKind::MacroTemplate),
            ("application/xml", PackageKind::Workbook),
        ] {
            assert_eq!(PackageKind::of_part(text), kind, "{text}");
        }
    }
}
