//! The few formats of the workbook. Grey and one dark blue; nothing is said by colour alone.

use rust_xlsxwriter::{Color, Format, FormatAlign, FormatBorder, Formula, Worksheet};

pub const INK: Color = Color::RGB(0x24_3B_4A);
pub const PALE: Color = Color::RGB(0xE9_EE_F1);
pub const LINE: Color = Color::RGB(0xB4_C0_C8);
pub const GREY: Color = Color::RGB(0x8A_97_A0);

pub struct Style {
    pub title: Format,
    pub remark: Format,
    pub band: Format,
    pub heading: Format,
    pub heading_left: Format,
    pub text: Format,
    pub wrapped: Format,
    pub word: Format,
    pub date: Format,
    pub label_below: Format,
}

impl Style {
    pub fn new() -> Self {
        let plain = || Format::new().set_align(FormatAlign::VerticalCenter);
        let heading = plain()
            .set_bold()
            .set_font_color(INK)
            .set_background_color(PALE)
            .set_border_bottom(FormatBorder::Medium)
            .set_border_bottom_color(INK)
            .set_text_wrap();
        Style {
            title: plain().set_bold().set_font_size(16).set_font_color(INK),
            remark: plain().set_italic().set_font_color(GREY),
            band: plain()
                .set_bold()
                .set_font_color(INK)
                .set_align(FormatAlign::Center)
                .set_border_bottom(FormatBorder::Thin)
                .set_border_bottom_color(LINE),
            heading: heading.clone().set_align(FormatAlign::Right),
            heading_left: heading.set_align(FormatAlign::Left),
            text: plain(),
            wrapped: plain().set_text_wrap().set_align(FormatAlign::Top),
            word: plain().set_align(FormatAlign::Right),
            date: plain().set_num_format("d mmm yyyy").set_align(FormatAlign::Left),
            label_below: below(plain()).set_bold().set_font_color(INK),
        }
    }

    /// Numbers in a column.
    pub fn number(&self, code: &str) -> Format {
        self.word.clone().set_num_format(code)
    }

    /// Numbers in the rows below a table.
    pub fn number_below(&self, code: &str) -> Format {
        below(self.number(code)).set_bold().set_font_color(INK)
    }

    /// What a conditional format lays over a cell that asks to be looked at: it survives a grey print.
    pub fn look_here(&self) -> Format {
        Format::new().set_bold().set_italic().set_background_color(PALE)
    }
}

fn below(format: Format) -> Format {
    format.set_border_top(FormatBorder::Thin).set_border_top_color(INK)
}

/// A formula with the value that it has, for readers that do not compute.
pub fn computed(formula: impl AsRef<str>, value: f64) -> Formula {
    Formula::new(formula).set_result(value.to_string())
}

pub fn print_setup(sheet: &mut Worksheet) {
    sheet.set_landscape().set_paper_size(9).set_print_fit_to_pages(1, 0);
    sheet.set_margins(0.5, 0.5, 0.6, 0.6, 0.3, 0.3);
    sheet.set_footer("&L&8Ternfield Hotels, guest service&C&8&A&R&8Page &P of &N");
    sheet.set_screen_gridlines(false);
}
