//! What the tests for a change of level have in common: the moment of the change, the levels, and the table of the walk.
//!
//! A change test says that the level changed at some moment, and which moment fits best. That moment is an estimate: the
//! true one may lie some readings away, the farther the smaller the change. The levels before and after belong to the moment
//! that was picked because they differ most there, so their difference is too large on average, and no interval that ignores
//! the picking would be honest; none is given.

use super::{Column, Datum, Direction, Fact, Seek, Table};
use crate::reading::{Series, Value};

/// The fewest readings on each side of a change for which no caution is given.
const FEW: usize = 5;

/// Where the level changed, and how the readings stand on both sides.
pub struct Change<'a> {
    series: &'a Series,
    /// Indices of the readings used, in time order.
    indices: &'a [usize],
    /// How many readings lie before each moment at which the statistic is largest; empty if there is no such change.
    splits: Vec<usize>,
}

impl<'a> Change<'a> {
    /// The change at the largest of `sizes`: one for each number of readings before the change, from 1 on. Sizes that differ
    /// only in their last digits are the same.
    pub fn at_largest(series: &'a Series, indices: &'a [usize], sizes: &[f64]) -> Self {
        let largest = sizes.iter().copied().fold(0.0, f64::max);
        let close = |size: &f64| largest > 0.0 && *size >= largest * (1.0 - 1e-12);
        let splits = sizes.iter().enumerate().filter(|(_, size)| close(size)).map(|(index, _)| index + 1).collect();
        Change { series, indices, splits }
    }

    /// How many readings lie before each moment at which the statistic is largest.
    pub fn splits(&self) -> &[usize] {
        &self.splits
    }

    /// The moments of the change, and the level on both sides by `level`, which is `None` where it cannot be told.
    pub fn facts(&self, level_name: &str, level: impl Fn(&[Value]) -> Option<f64>) -> Vec<Fact> {
        let first = self.splits.first().copied();
        let label = |place: usize| self.series.moments.label(self.indices[place]);
        let others: Vec<String> = self.splits.iter().skip(1).map(|&split| label(split - 1)).collect();
        let levels = first.map(|split| {
            let values: Vec<Value> = self.indices.iter().map(|&index| self.series.values[index]).collect();
            (level(&values[..split]), level(&values[split..]))
        });
        let (before, after) = levels.unwrap_or((None, None));
        let shown = |level: Option<f64>| level.map_or(Datum::Nothing, |level| Datum::of_level(self.series, level));
        let difference = if self.series.scale.grades().is_some() {
            None
        } else {
            before.zip(after).map(|(a, b)| b - a).filter(|x| x.is_finite())
        };
        let unit = |fact: Fact| match &self.series.unit {
            Some(unit) if self.series.scale.grades().is_none() => fact.unit(unit.clone()),
            _ => fact,
        };
        vec![
            Fact::new("last_before", "Last moment of the old level", first.map(|split| label(split - 1))),
            Fact::new("first_after", "First moment of the new level", first.map(label)),
            Fact::new("last_before_also", "Other moments that fit equally well", (!others.is_empty()).then(|| others.join(", "))),
            Fact::new("readings_before", "Readings before the change", first),
            Fact::new("readings_after", "Readings after the change", first.map(|split| self.indices.len() - split)),
            Fact::new("level_by", "Level taken as", level_name),
            unit(Fact::new("level_before", "Level before the change", shown(before))),
            unit(Fact::new("level_after", "Level after the change", shown(after))),
            unit(Fact::new("level_change", "Level after less level before", difference)),
        ]
    }

    /// The statistic after each reading.
    pub fn table(&self, caption: &str, column: Column, statistic: &[f64]) -> Table {
        let columns = vec![
            Column { key: "reading", label: "Reading" },
            Column { key: "moment", label: "Its moment" },
            Column { key: "value", label: "Its value" },
            column,
            Column { key: "change", label: "Change after this reading" },
        ];
        let row = |(place, &index): (usize, &usize)| -> Vec<Datum> {
            vec![
                (index + 1).into(),
                self.series.moments.label(index).into(),
                Datum::of_reading(self.series, index),
                statistic.get(place).copied().filter(|size| size.is_finite()).into(),
                if self.splits.contains(&(place + 1)) { "fits best" } else { "" }.into(),
            ]
        };
        Table { caption: caption.into(), columns, rows: self.indices.iter().enumerate().map(row).collect() }
    }

    /// What to bear in mind about where the change lies.
    pub fn cautions(&self) -> Vec<String> {
        let mut cautions = Vec::new();
        if self.splits.len() > 1 {
            cautions.push(format!(
                "{} moments fit equally well; the levels are those before and after the first of them.",
                self.splits.len()
            ));
        }
        let sides = |&split: &usize| split.min(self.indices.len() - split);
        if let Some(few) = self.splits.first().map(sides).filter(|&few| few < FEW) {
            let readings = if few == 1 { "reading lies" } else { "readings lie" };
            cautions.push(format!("Only {few} {readings} on one side of the change, so its moment and level are uncertain."));
        }
        cautions
    }
}

/// The direction of the larger of two excursions, one to a higher and one to a lower level.
pub fn direction(to_higher: f64, to_lower: f64) -> Direction {
    Direction::of(if (to_higher - to_lower).abs() <= 1e-12 * to_higher.max(to_lower) { 0.0 } else { to_higher - to_lower })
}

/// How strongly each moment speaks for the change that is sought, given a walk that is negative where the level rose.
pub fn sought(seek: Seek, walk: &[f64]) -> Vec<f64> {
    walk.iter()
        .map(|&position| match seek {
            Seek::Either => position.abs(),
            Seek::Rising => -position,
            Seek::Falling => position,
        })
        .collect()
}
