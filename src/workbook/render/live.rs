//! Formulas on the user's own cells, with the value that we computed stored beside them.
//!
//! Only functions that Excel 2010 and LibreOffice 7 both know are used.

use crate::comparison::Pairings;
use crate::method::Seek;
use crate::method::cox_stuart::Ties;
use crate::reading::{Grades, Series};
use crate::workbook::indicator::{Indicator, Rows};
use crate::workbook::reference::{Range, quote_sheet};

/// A formula for a cell of the user's.
pub fn reference(indicator: &Indicator, index: usize, column: u32) -> String {
    let cell = crate::workbook::reference::CellRef { row: indicator.place.rows.row(index), column };
    format!("={}!{cell}", quote_sheet(&indicator.place.sheet))
}

/// The sign of later less earlier, for numbers or grades.
pub fn sign(earlier: &str, later: &str, grades: Option<&Grades>) -> String {
    match grades {
        None => format!("=SIGN({later}-{earlier})"),
        Some(grades) => {
            let words: Vec<String> = grades.words().iter().map(|word| format!("\"{}\"", word.replace('"', "\"\""))).collect();
            let place = |cell: &str| format!("MATCH(TRIM({cell}),{{{}}},0)", words.join(","));
            format!("=SIGN({}-{})", place(later), place(earlier))
        }
    }
}

/// The place of a grade in its order.
pub fn grade_place(cell: &str, grades: &Grades) -> String {
    let words: Vec<String> = grades.words().iter().map(|word| format!("\"{}\"", word.replace('"', "\"\""))).collect();
    format!("=MATCH(TRIM({cell}),{{{}}},0)", words.join(","))
}

/// The exact p of the sign test from the cells that hold the numbers of rises, falls and ties.
///
/// Each tail is a lower tail, the upper one on the mirrored count, so that small tails keep their digits.
pub fn sign_test_p(rises: &str, falls: &str, ties: &str, treatment: Ties, seek: Seek) -> String {
    let pairs = match treatment {
        Ties::Drop => format!("{rises}+{falls}"),
        Ties::Against | Ties::Split => format!("{rises}+{falls}+{ties}"),
    };
    let extra = match treatment {
        Ties::Drop => String::new(),
        Ties::Against => format!("+{ties}"),
        Ties::Split => format!("+INT({ties}/2)"),
    };
    let upper = format!("BINOMDIST({falls}{extra},{pairs},0.5,TRUE)");
    let lower = format!("BINOMDIST({rises}{extra},{pairs},0.5,TRUE)");
    match seek {
        Seek::Either => format!("=MIN(1,2*MIN({upper},{lower}))"),
        Seek::Rising => format!("={upper}"),
        Seek::Falling => format!("={lower}"),
    }
}

/// Two ranges of the user's cells whose rows are the pairs, if the pairs are that regular: earlier and later.
pub fn regular_ranges(indicator: &Indicator, pairings: &Pairings) -> Option<(Range, Range)> {
    let series: &Series = &indicator.series;
    let plain = series.scale.grades().is_none()
        && indicator.as_text.is_empty()
        && series.values.iter().all(|value| value.number().is_some())
        && !matches!(indicator.place.rows, Rows::Listed(_));
    let (first, last) = (pairings.list.first()?, pairings.list.last()?);
    let lag = first.later.checked_sub(first.earlier)?;
    let regular = pairings.list.iter().enumerate().all(|(index, pairing)| {
        pairing.earlier == first.earlier + index as u32 && pairing.later == pairing.earlier + lag && pairing.weight == 1
    });
    if !plain || !regular {
        return None;
    }
    let range = |from: u32, to: u32| {
        let (a, b) = (indicator.place.rows.row(from as usize), indicator.place.rows.row(to as usize));
        Range::column(indicator.place.sheet.clone(), indicator.place.column, a.min(b), a.max(b))
    };
    Some((range(first.earlier, last.earlier), range(first.later, last.later)))
}

/// The number of pairs with a sign, counted on two ranges of the user's cells.
pub fn count_on_ranges(earlier: &Range, later: &Range, comparison: &str) -> String {
    format!("=SUMPRODUCT(--({}{comparison}{}))", later.absolute(), earlier.absolute())
}
