//! `Trend statistics`: one row an indicator and fact; counts and p-values are formulas where cells can compute them.

use rust_xlsxwriter::{Formula, Worksheet};

use super::look::Look;
use super::pairings::{Layout, column_range, pairings_of};
use super::{Error, Input, fitting, live, page, wording};
use crate::finding::Adjustment;
use crate::method::cox_stuart::{self, PairBy};
use crate::method::{Datum, Fact};
use crate::null_distribution::By;
use crate::workbook::indicator::Judged;
use crate::workbook::judge::own_parameters;

const HEADING_ROW: u32 = 3;

/// One p-value of those judged together.
pub struct Member {
    /// The indicator, as an index into the judged ones.
    pub index: usize,
    /// The row of its p-value.
    pub row: u32,
    /// The formula that gives it, where cells can compute it.
    formula: Option<String>,
}

/// The p-values judged together, and where they stand.
pub struct Family {
    pub members: Vec<Member>,
    /// Where the facts begin: the row of each indicator's first fact.
    facts_heading: u32,
}

/// Lays the p-values out.
pub fn family(input: &Input, layout: &Layout) -> Family {
    let indices = input.judged.iter().enumerate().filter(|(_, judged)| judged.finding.result.is_ok()).map(|(index, _)| index);
    let members: Vec<Member> =
        indices.enumerate().map(|(place, index)| Member { index, row: HEADING_ROW + 1 + place as u32, formula: None }).collect();
    let facts_heading = HEADING_ROW + members.len() as u32 + 4;
    let mut family = Family { members, facts_heading };
    let mut row = facts_heading + 1;
    for member in &mut family.members {
        let judged = &input.judged[member.index];
        member.formula = p_formula(judged, row, layout, member.index);
        row += facts(judged).len() as u32;
    }
    family
}

/// The facts of an indicator, those that cells count in front.
fn facts(judged: &Judged) -> Vec<Fact> {
    let Ok(outcome) = &judged.finding.result else { return Vec::new() };
    let mut facts = outcome.facts.clone();
    facts.push(Fact::new("readings_used", "Readings used", outcome.readings_used));
    facts.push(Fact::new("statistic", "Test statistic", outcome.statistic.value));
    facts
}

/// Equal p-values may differ in their last digit where a cell computed one of them; they still count as equal.
const NEARLY_ONE_ABOVE: f64 = 1.000000001;

const COUNTS: [&str; 4] = ["pairs", "rises", "falls", "ties"];

/// The formula of the p-value on the cells that hold the counts, if the test is one that cells can compute.
fn p_formula(judged: &Judged, first_fact: u32, layout: &Layout, index: usize) -> Option<String> {
    let outcome = judged.finding.result.as_ref().ok()?;
    let parameters: cox_stuart::Parameters = own_parameters(&judged.row);
    let countable = judged.finding.card.key == "cox-stuart" && parameters.pairs != PairBy::Weighted && outcome.p.by == By::Exact;
    layout.of(index).filter(|_| countable)?;
    let place =
        |key: &str| facts(judged).iter().position(|fact| fact.key == key).map(|at| format!("$C${}", first_fact + at as u32 + 1));
    Some(live::sign_test_p(&place("rises")?, &place("falls")?, &place("ties")?, parameters.ties, judged.finding.question.seek))
}

pub fn sheet(input: &Input, look: &Look, layout: &Layout, family: &Family) -> Result<Worksheet, Error> {
    let mut sheet = Worksheet::new();
    page(&mut sheet, &input.names.statistics, HEADING_ROW)?;
    sheet.write_with_format(0, 0, wording::STATISTICS, &look.title)?;
    sheet.write_with_format(2, 0, wording::FAMILY_TITLE, &look.subtitle)?;
    for (column, width) in [28.0, 44.0, 18.0, 14.0, 20.0, 28.0].into_iter().enumerate() {
        sheet.set_column_width(column as u16, width)?;
    }
    write_family(&mut sheet, input, look, family)?;
    sheet.write_with_format(family.facts_heading - 1, 0, wording::FACTS_TITLE, &look.subtitle)?;
    for (column, label) in wording::FACT_COLUMNS.iter().enumerate() {
        sheet.write_with_format(family.facts_heading, column as u16, *label, &look.heading)?;
    }
    let mut row = family.facts_heading + 1;
    for member in &family.members {
        let judged = &input.judged[member.index];
        let first = row;
        for fact in facts(judged) {
            let formula = count_formula(input, judged, &fact, layout, member.index, first, row);
            write_fact(&mut sheet, row, look, judged, &fact, formula)?;
            row += 1;
        }
    }
    if !family.members.is_empty() {
        sheet.autofilter(family.facts_heading, 0, row - 1, 5)?;
    }
    Ok(sheet)
}

/// Holm's adjusted p-values are formulas too; the factor of each is how many p-values are not smaller.
fn write_family(sheet: &mut Worksheet, input: &Input, look: &Look, family: &Family) -> Result<(), Error> {
    for (column, label) in wording::FAMILY_COLUMNS.iter().enumerate() {
        sheet.write_with_format(HEADING_ROW, column as u16, *label, &look.heading)?;
    }
    let Some(last) = family.members.last() else { return Ok(()) };
    let (top, bottom) = (HEADING_ROW + 2, last.row + 1);
    let (all_p, factors) = (format!("$C${top}:$C${bottom}"), format!("$D${top}:$D${bottom}"));
    let own: Vec<f64> = family
        .members
        .iter()
        .filter_map(|member| input.judged[member.index].finding.result.as_ref().ok())
        .map(|o| o.p.value)
        .collect();
    for (member, p) in family.members.iter().zip(&own) {
        let judged = &input.judged[member.index];
        let (row, cell) = (member.row, format!("$C${}", member.row + 1));
        sheet.write_with_format(row, 0, fitting(&judged.indicator.series.name), &look.text)?;
        sheet.write_with_format(row, 1, judged.finding.card.title, &look.text)?;
        match &member.formula {
            Some(formula) => {
                sheet.write_with_format(row, 2, Formula::new(formula).set_result(p.to_string()), &look.probability)?
            }
            None => sheet.write_with_format(row, 2, *p, &look.probability)?,
        };
        let factor = own.iter().filter(|other| *other * NEARLY_ONE_ABOVE >= *p).count();
        let factor_formula =
            Formula::new(format!("=SUMPRODUCT(--({all_p}*{NEARLY_ONE_ABOVE}>={cell}))")).set_result(factor.to_string());
        sheet.write_with_format(row, 3, factor_formula, &look.whole)?;
        if let Some(adjusted) = judged.finding.adjusted {
            match input.adjustment {
                Adjustment::Holm => {
                    let formula = format!("=MIN(1,SUMPRODUCT(MAX(({all_p}<={cell}*{NEARLY_ONE_ABOVE})*{factors}*{all_p})))");
                    sheet.write_with_format(
                        row,
                        4,
                        Formula::new(formula).set_result(adjusted.p.to_string()),
                        &look.probability,
                    )?;
                }
                _ => {
                    sheet.write_with_format(row, 4, adjusted.p, &look.probability)?;
                }
            }
        }
        let by = judged.finding.result.as_ref().map(|outcome| outcome.p.by.to_string()).unwrap_or_default();
        let how = if member.formula.is_some() { wording::BY_FORMULA } else { wording::BY_RISEFALL };
        sheet.write_with_format(row, 5, format!("{by}; {how}"), &look.text)?;
    }
    Ok(())
}

/// A formula for a count of pairs: on the listed pairs, else on the user's ranges where the pairs are regular.
fn count_formula(
    input: &Input,
    judged: &Judged,
    fact: &Fact,
    layout: &Layout,
    index: usize,
    first: u32,
    row: u32,
) -> Option<String> {
    let listed = layout.of(index)?;
    if fact.key == "share_of_rises" {
        return Some(format!("=C{}/(C{}+C{})", first + 2, first + 2, first + 3));
    }
    if fact.key == "statistic" || !COUNTS.contains(&fact.key) || row < first {
        return None;
    }
    if listed.is_whole() {
        let signs = column_range(input, listed, 'I');
        return Some(match fact.key {
            "pairs" => format!("=COUNT({signs})"),
            "rises" => format!("=COUNTIF({signs},1)"),
            "falls" => format!("=COUNTIF({signs},-1)"),
            _ => format!("=COUNTIF({signs},0)"),
        });
    }
    let (earlier, later) = live::regular_ranges(&judged.indicator, pairings_of(judged)?)?;
    Some(match fact.key {
        "pairs" => format!("=ROWS({})", earlier.absolute()),
        "rises" => live::count_on_ranges(&earlier, &later, ">"),
        "falls" => live::count_on_ranges(&earlier, &later, "<"),
        _ => live::count_on_ranges(&earlier, &later, "="),
    })
}

fn write_fact(
    sheet: &mut Worksheet,
    row: u32,
    look: &Look,
    judged: &Judged,
    fact: &Fact,
    formula: Option<String>,
) -> Result<(), Error> {
    sheet.write_with_format(row, 0, fitting(&judged.indicator.series.name), &look.text)?;
    sheet.write_with_format(row, 1, fact.label, &look.text)?;
    let how = if formula.is_some() { wording::BY_FORMULA } else { wording::BY_RISEFALL };
    match (&fact.value, formula) {
        (Datum::Integer(count), Some(formula)) => {
            sheet.write_with_format(row, 2, Formula::new(formula).set_result(count.to_string()), &look.whole)?
        }
        (Datum::Number(number), Some(formula)) => {
            sheet.write_with_format(row, 2, Formula::new(formula).set_result(number.to_string()), &look.number)?
        }
        (Datum::Integer(count), None) => sheet.write_with_format(row, 2, *count as f64, &look.whole)?,
        (Datum::Number(number), None) if number.is_finite() => {
            let format = if fact.key.starts_with("p_") || fact.key.ends_with("_p") { &look.probability } else { &look.share };
            sheet.write_with_format(row, 2, *number, format)?
        }
        (Datum::Text(text), _) => sheet.write_with_format(row, 2, fitting(text), &look.text)?,
        _ => sheet.write_with_format(row, 2, "none", &look.text)?,
    };
    sheet.write_with_format(row, 3, fact.unit.clone().unwrap_or_default(), &look.text)?;
    sheet.write_with_format(row, 4, fact.key, &look.text)?;
    sheet.write_with_format(row, 5, how, &look.text)?;
    Ok(())
}
