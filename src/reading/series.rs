//! Values in time order, with a name, a unit, a scale and moments.

use std::sync::Arc;

use super::{Blocks, Moments, Scale, Value};

/// An indicator's readings in time order.
///
/// There is one moment for each value; a reading without a value keeps its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    /// The indicator's name, as the table's header or the request has it.
    pub name: String,
    /// The unit of the values, if one was stated.
    pub unit: Option<String>,
    /// What kind of thing the values are.
    pub scale: Scale,
    /// The values in time order.
    pub values: Vec<Value>,
    /// When each value was recorded.
    pub moments: Arc<Moments>,
    /// The place, season or person that each reading belongs to, where readings are compared only within such a block.
    pub blocks: Option<Blocks>,
}

impl Series {
    /// A numeric series without moments, mostly for examples and tests.
    pub fn of_numbers(numbers: &[f64]) -> Self {
        Series {
            name: "readings".into(),
            unit: None,
            scale: Scale::Numeric,
            values: numbers.iter().map(|&number| Value::Number(number)).collect(),
            moments: Arc::new(Moments::positions(numbers.len())),
            blocks: None,
        }
    }

    /// How many readings there are, missing ones included.
    pub fn len(&self) -> usize {
        self.values.len()
    }

    /// Whether there are no readings.
    pub fn is_empty(&self) -> bool {
        self.values.is_empty()
    }

    /// The readings that have a value, each with its index.
    pub fn present(&self) -> impl Iterator<Item = (usize, Value)> + '_ {
        self.values.iter().copied().enumerate().filter(|(_, value)| !value.is_missing())
    }

    /// How many readings have a value.
    pub fn count_present(&self) -> usize {
        self.present().count()
    }

    /// The value at an index as a person would write it: a grade as its word, a limit as `<0.5`.
    pub fn show(&self, index: usize) -> String {
        match self.values.get(index) {
            None | Some(Value::Missing(_)) => String::new(),
            Some(Value::Below(limit)) => format!("<{limit}"),
            Some(Value::Above(limit)) => format!(">{limit}"),
            Some(Value::Number(number)) => match self.scale.grades().and_then(|grades| grades.word(*number)) {
                Some(word) => word.to_owned(),
                None => number.to_string(),
            },
        }
    }
}
