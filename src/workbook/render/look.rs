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

impl Look {
    pub fn new() -> Self {
        let base = || Format::new().set_font_name(FONT).set_font_size(11).set_font_color(INK).set_align(FormatAlign::Top);
        let cell = || base().set_border_bottom(FormatBorder::Hair).set_border_bottom_color(HAIRLINE);
        Look {
            title: base().set_font_size(16).set_bold(),
            subtitle: base().set_font_color(QUIET),
            heading: base()
                .set_bold()
                .set_text_wrap()
                .set_background_color(SHADE)
                .set_border_bottom(FormatBorder::Thin)
                .set_border_bottom_color(RULE),
            text: cell(),
            wrapped: cell().set_text_wrap(),
            strong: cell().set_bold().set_text_wrap(),
            number: cell().set_num_format("General"),
            probability: cell().set_num_format("[<0.0001]0.00E+00;0.0000"),
            whole: cell().set_num_format("0"),
            date: cell().set_num_format("yyyy-mm-dd").set_align(FormatAlign::Left),
            link: cell().set_underline(rust_xlsxwriter::FormatUnderline::Single).set_text_wrap(),
            small: base().set_font_size(9).set_font_color(QUIET).set_text_wrap(),
        }
    }
}
