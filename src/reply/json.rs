//! The report as a JSON object: the reply contract.

use serde::ser::{Serialize, SerializeStruct, Serializer};

use super::Form;
use crate::finding::Report;
use crate::method::{Column, Datum, Fact, Table};

pub(super) struct Json;

impl Form for Json {
    fn media_type(&self) -> &'static str {
        "application/json"
    }

    fn report(&self, report: &Report) -> String {
        write_sized(&View(report), REPORT)
    }

    fn fact(&self, key: &str, value: &Datum) -> String {
        write(&std::collections::BTreeMap::from([(key, View(value))]))
    }

    fn tables(&self, tables: &[Table]) -> String {
        write(&std::collections::BTreeMap::from([("evidence", View(tables))]))
    }
}

/// Bytes that the report on two years of weeks takes with its evidence.
const REPORT: usize = 6 << 10;

/// Writes a value whose parts all have a JSON form.
pub(super) fn write(value: &impl Serialize) -> String {
    write_sized(value, 64)
}

/// Writes a value that is expected to take so many bytes.
fn write_sized(value: &impl Serialize, bytes: usize) -> String {
    let mut text = Vec::with_capacity(bytes);
    // A vector in memory takes everything.
    let _ = serde_json::to_writer(&mut text, value);
    String::from_utf8(text).unwrap_or_default()
}

/// Something borrowed, as it looks in JSON.
pub(super) struct View<'a, T: ?Sized>(pub &'a T);

impl Serialize for View<'_, Report> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let report = self.0;
        let mut object = serializer.serialize_struct("Report", 11)?;
        object.serialize_field("method", report.method)?;
        object.serialize_field("indicator", &report.indicator)?;
        object.serialize_field("conclusion", &Conclusion { word: report.conclusion, sentence: &report.sentence })?;
        object.serialize_field("p", &report.p)?;
        object.serialize_field("p_by", &report.p_by)?;
        object.serialize_field("statistic", &report.statistic.map(|(name, value)| Statistic { name, value }))?;
        object.serialize_field("facts", &View(report.facts.as_slice()))?;
        object.serialize_field("evidence", &View(report.evidence.as_slice()))?;
        object.serialize_field("cautions", &report.cautions)?;
        object.serialize_field("understood", &View(report.understood.as_slice()))?;
        object.end()
    }
}

#[derive(serde::Serialize)]
struct Conclusion<'a> {
    word: &'a str,
    sentence: &'a str,
}

#[derive(serde::Serialize)]
struct Statistic {
    name: &'static str,
    value: f64,
}

impl Serialize for View<'_, Fact> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut object = serializer.serialize_struct("Fact", 4)?;
        object.serialize_field("key", self.0.key)?;
        object.serialize_field("label", self.0.label)?;
        object.serialize_field("value", &View(&self.0.value))?;
        object.serialize_field("unit", &self.0.unit)?;
        object.end()
    }
}

impl Serialize for View<'_, Table> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut object = serializer.serialize_struct("Table", 3)?;
        object.serialize_field("caption", &self.0.caption)?;
        object.serialize_field("columns", &View(self.0.columns.as_slice()))?;
        object.serialize_field("rows", &View(self.0.rows.as_slice()))?;
        object.end()
    }
}

impl Serialize for View<'_, Column> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        let mut object = serializer.serialize_struct("Column", 2)?;
        object.serialize_field("key", self.0.key)?;
        object.serialize_field("label", self.0.label)?;
        object.end()
    }
}

impl Serialize for View<'_, Datum> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        match self.0 {
            Datum::Nothing => serializer.serialize_none(),
            Datum::Integer(count) => serializer.serialize_i64(*count),
            Datum::Number(value) => serializer.serialize_f64(*value),
            Datum::Text(text) => serializer.serialize_str(text),
        }
    }
}

impl Serialize for View<'_, Vec<Datum>> {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        View(self.0.as_slice()).serialize(serializer)
    }
}

impl<'a, T> Serialize for View<'a, [T]>
where
    View<'a, T>: Serialize,
{
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.0.iter().map(View))
    }
}
