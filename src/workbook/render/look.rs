//! The formats of the new sheets: calm, readable in greyscale, words before colour.

use rust_xlsxwriter::{Color, Format, FormatAlign, FormatBorder};

/// The formats, made once.
pub struct Look {
    pub title: Format,
    pub subtitle: Format,
    pub heading: Format,
    pub text: Format,
    pub wrapped: Format,
    pub strong: Format,
    pub number: Format,
    pub share: Format,
    pub probability: Format,
    pub whole: Format,
    pub date: Format,
    pub link: Format,
    pub small: Format,
}

const FONT: &str = "Calibri";
const INK: Color = Color::RGB(0x22_26_2B);
const QUIET: Color = Color::RGB(0x5A_60_68);
const RULE: Color = Color::RGB(0x8A_90_98);
const HAIRLINE: Color = Color::RGB(0xD8_DB_DF);
const SHADE: Color = Color::RGB(0xEC_ED_EF);

/// The height of a row whose wrapped cells hold texts in columns of the given widths.
pub fn height(cells: &[(&str, f64)]) -> f64 {
    const LINE: f64 = 15.0;
    const TALLEST: f64 = 400.0;
    let lines = |text: &str, width: f64| -> f64 {
        // A proportional font fits a little less than the width's number of digits once words wrap.
        let most = (width * 0.92).max(4.0);
        text.lines().map(|line| (line.chars().count() as f64 / most).ceil().max(1.0)).sum()
    };
    let most = cells.iter().map(|(text, width)| lines(text, *width)).fold(1.0, f64::max);
    (most * LINE + 2.0).min(TALLEST)
}

impl Look {
    pub fn new() -> Self {
        let base = || Format::new().set_font_name(FONT).set_font_size(11).set_font_color(INK).set_align(FormatAlign::Top);
        let cell = || base().set_border_bottom(FormatBorder::Hair).set_border_bottom_color(HAIRLINE);
        Look {
            title: base().set_font_size(16).set_bold(),
            subtitle: base().set_font_color(QUIET),
            heading: base()
                .set_bold()
                .set_indent(1)
                .set_text_wrap()
                .set_background_color(SHADE)
                .set_border_bottom(FormatBorder::Thin)
                .set_border_bottom_color(RULE),
            text: cell().set_indent(1),
            wrapped: cell().set_text_wrap().set_indent(1),
            strong: cell().set_bold().set_text_wrap().set_indent(1),
            number: cell().set_num_format("General"),
            share: cell().set_num_format("0.0000"),
            probability: cell().set_num_format("[<0.0001]0.00E+00;0.0000"),
            whole: cell().set_num_format("0"),
            date: cell().set_num_format("yyyy-mm-dd").set_align(FormatAlign::Left).set_indent(1),
            link: cell().set_indent(1).set_underline(rust_xlsxwriter::FormatUnderline::Single).set_text_wrap(),
            small: base().set_font_size(9).set_font_color(QUIET).set_text_wrap(),
        }
    }
}
