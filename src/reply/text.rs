//! The report as a short block of plain lines; one fact as its bare value.

use super::Form;
use super::number::{datum, number};
use crate::finding::Report;
use crate::method::{Datum, Table};

pub(super) struct Text;

impl Form for Text {
    fn media_type(&self) -> &'static str {
        "text/plain; charset=utf-8"
    }

    fn report(&self, report: &Report) -> String {
        let mut lines = vec![
            ("Conclusion", report.conclusion.to_owned()),
            ("Because", report.sentence.clone()),
            ("Indicator", report.indicator.clone()),
            ("Test", report.method_title.to_owned()),
        ];
        lines.extend(report.p.map(|p| ("p", number(p))));
        lines.extend(report.p_by.clone().map(|by| ("p is", by)));
        lines.extend(report.statistic.map(|(name, value)| (name, number(value))));
        for fact in &report.facts {
            let unit = fact.unit.as_deref().map(|unit| format!(" {unit}")).unwrap_or_default();
            lines.push((fact.label, datum(&fact.value) + &unit));
        }
        lines.extend(report.cautions.iter().map(|caution| ("Caution", caution.clone())));
        let width = lines.iter().map(|(label, _)| label.chars().count()).max().unwrap_or_default();
        lines
            .into_iter()
            .map(|(label, value)| format!("{}\n", format!("{label:<width$}  {}", one_line(&value)).trim_end()))
            .collect()
    }

    fn fact(&self, _: &str, value: &Datum) -> String {
        one_line(&datum(value))
    }

    fn tables(&self, tables: &[Table]) -> String {
        tables.iter().map(table).collect::<Vec<_>>().join("\n")
    }
}

/// Line ends and other control characters of a name or a reading must not break the lines.
pub(super) fn one_line(text: &str) -> String {
    text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect()
}

fn table(table: &Table) -> String {
    let head: Vec<String> = table.columns.iter().map(|column| column.label.to_owned()).collect();
    let body = table.rows.iter().map(|row| row.iter().map(|value| one_line(&datum(value))).collect());
    let rows: Vec<Vec<String>> = std::iter::once(head).chain(body).collect();
    let widths: Vec<usize> = (0..table.columns.len())
        .map(|column| rows.iter().filter_map(|row| row.get(column)).map(|cell| cell.chars().count()).max().unwrap_or_default())
        .collect();
    let mut text = format!("{}\n", table.caption);
    for row in rows {
        let cells: Vec<String> = row.iter().zip(&widths).map(|(cell, &width)| format!("{cell:>width$}")).collect();
        text.push_str(cells.join("  ").trim_end());
        text.push('\n');
    }
    text
}
