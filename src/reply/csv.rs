//! The report as comma-separated values (RFC 4180): one line a fact, headings in the first line.

use super::Form;
use super::number::datum;
use crate::finding::Report;
use crate::method::{Datum, Table};

pub(super) struct Csv;

impl Form for Csv {
    fn media_type(&self) -> &'static str {
        "text/csv; charset=utf-8"
    }

    fn report(&self, report: &Report) -> String {
        let heading = |key: &'static str, label: &str| {
            [key.to_owned(), label.to_owned(), datum(&report.fact(key).unwrap_or(Datum::Nothing)), String::new()]
        };
        let statistic = report.statistic.map_or("", |(name, _)| name);
        let mut records = vec![
            ["key", "label", "value", "unit"].map(str::to_owned),
            heading("method", "Test"),
            heading("indicator", "Indicator"),
            heading("conclusion", "Conclusion"),
            heading("sentence", "Because"),
            heading("p", "p"),
            heading("p_by", "p is"),
            heading("statistic", statistic),
        ];
        for fact in &report.facts {
            let unit = fact.unit.clone().unwrap_or_default();
            records.push([fact.key.to_owned(), fact.label.to_owned(), datum(&fact.value), unit]);
        }
        records.extend(report.cautions.iter().map(|caution| ["caution", "Caution", caution, ""].map(str::to_owned)));
        lines(records)
    }

    fn fact(&self, key: &str, value: &Datum) -> String {
        lines([[key.to_owned()], [datum(value)]])
    }

    fn tables(&self, tables: &[Table]) -> String {
        tables.iter().map(table).collect::<Vec<_>>().join("\r\n")
    }
}

fn table(table: &Table) -> String {
    let head = table.columns.iter().map(|column| column.key.to_owned()).collect();
    lines(std::iter::once(head).chain(table.rows.iter().map(|row| row.iter().map(datum).collect::<Vec<_>>())))
}

/// Records as lines. Records of one writer all have the same length.
pub(super) fn lines<R: AsRef<[String]>>(records: impl IntoIterator<Item = R>) -> String {
    let mut writer = csv::WriterBuilder::new().terminator(csv::Terminator::CRLF).from_writer(Vec::new());
    for record in records {
        // A vector in memory cannot refuse a record of the usual length.
        let _ = writer.write_record(record.as_ref());
    }
    writer.into_inner().ok().and_then(|bytes| String::from_utf8(bytes).ok()).unwrap_or_default()
}
