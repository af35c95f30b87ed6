//! What was said of each indicator at each run, so that "what did we say in March" has an answer. Rows are only ever added.

use jiff::civil::DateTime;
use sha2::{Digest, Sha256};

use super::indicator::{Indicator, Judged};
use crate::reading::Value;

/// How many columns a row has.
pub const COLUMNS: usize = 11;

/// One row of the log, as the texts of its cells: when, indicator, cells, readings used, conclusion, sentence, p, p judged together,
/// test, checksum of the readings, program.
pub type LogRow = [String; COLUMNS];

/// The row that a run adds for an indicator.
pub fn row(judged: &Judged, made_on: DateTime, program: &str) -> LogRow {
    let finding = &judged.finding;
    let outcome = finding.result.as_ref().ok();
    let number = |value: Option<f64>| value.map(|value| value.to_string()).unwrap_or_default();
    [
        made_on.strftime("%Y-%m-%d %H:%M:%S").to_string(),
        judged.indicator.series.name.clone(),
        judged.row.cells.clone(),
        outcome.map(|outcome| outcome.readings_used.to_string()).unwrap_or_default(),
        finding.conclusion.word.to_string(),
        finding.conclusion.sentence.clone(),
        number(outcome.map(|outcome| outcome.p.value)),
        number(finding.adjusted.map(|adjusted| adjusted.p)),
        finding.card.key.into(),
        checksum(&judged.indicator),
        program.into(),
    ]
}

/// The first 16 hexadecimal digits of the SHA-256 of the readings with their moments: the same readings give the same checksum
/// on every machine, and a corrected reading gives another.
pub fn checksum(indicator: &Indicator) -> String {
    let series = &indicator.series;
    let mut hash = Sha256::new();
    for (index, value) in series.values.iter().enumerate() {
        let (kind, number) = match value {
            Value::Number(number) => (b'=', *number),
            Value::Below(limit) => (b'<', *limit),
            Value::Above(limit) => (b'>', *limit),
            Value::Missing(_) => (b'.', 0.0),
        };
        hash.update([kind]);
        // Adding nothing makes one zero of the two.
        hash.update((number + 0.0).to_le_bytes());
        hash.update(series.moments.axis(index).to_le_bytes());
        if series.moments.has_labels() {
            hash.update(series.moments.label(index).as_bytes());
            hash.update([0]);
        }
    }
    hash.finalize().iter().take(8).map(|byte| format!("{byte:02x}")).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::reading::Series;
    use crate::workbook::plan::PlanRow;

    fn of(numbers: &[f64]) -> String {
        let series = Series::of_numbers(numbers);
        checksum(&Indicator { series, ..Indicator::absent(&PlanRow::default(), String::new()) })
    }

    #[test]
    fn a_corrected_reading_changes_the_checksum() {
        assert_eq!(of(&[1.0, 2.0, 0.0]), of(&[1.0, 2.0, -0.0]));
        assert_ne!(of(&[1.0, 2.0, 3.0]), of(&[1.0, 2.5, 3.0]));
        assert_ne!(of(&[1.0, 2.0]), of(&[2.0, 1.0]));
        assert_eq!(of(&[1.0]).len(), 16);
    }
}
