//! Readings grouped by their moments, and how readings of different moments compare.

use std::cmp::Ordering;

use super::Order;
use super::order::RunningCounts;
use crate::reading::moment::MomentKind;
use crate::reading::{Series, Value};

/// The readings that have a value, grouped by moment; moments come in time order.
#[derive(Clone, Debug, PartialEq)]
pub struct Groups {
    /// The label of each moment.
    pub labels: Vec<String>,
    /// How many readings each moment has.
    pub sizes: Vec<usize>,
    /// The index of each reading, those of the first moment first.
    pub readings: Vec<usize>,
    /// The group of each of these readings.
    pub of: Vec<usize>,
    /// Their values.
    pub values: Vec<Value>,
}

impl Groups {
    /// Groups a series by its moments. Words are the same moment where they are the same word.
    pub fn by_moment(series: &Series) -> Self {
        let places = places(series);
        let mut readings: Vec<usize> = series.present().map(|(index, _)| index).collect();
        readings.sort_by_key(|&index| places[index]);
        let mut groups = Groups { labels: vec![], sizes: vec![], of: vec![], values: vec![], readings: vec![] };
        let mut before = None;
        for index in readings {
            if before.replace(places[index]) != Some(places[index]) {
                groups.labels.push(series.moments.label(index));
                groups.sizes.push(0);
            }
            let group = groups.sizes.len() - 1;
            groups.sizes[group] += 1;
            groups.of.push(group);
            groups.readings.push(index);
            groups.values.push(series.values[index]);
        }
        groups
    }

    /// How many pairs of readings come from different moments.
    pub fn pairs(&self) -> u64 {
        let all = self.of.len() as u64;
        let within: u64 = self.sizes.iter().map(|&size| (size * size) as u64).sum();
        (all * all - within) / 2
    }
}

/// The place of each reading's moment among all moments, from 0.
pub fn places(series: &Series) -> Vec<usize> {
    let moments = &series.moments;
    if moments.kind() == MomentKind::Label {
        let mut known = std::collections::HashMap::new();
        return (0..series.len())
            .map(|index| {
                let next = known.len();
                *known.entry(moments.label(index)).or_insert(next)
            })
            .collect();
    }
    let axis: Vec<f64> = (0..series.len()).map(|index| moments.axis(index)).collect();
    Order::of_numbers(&axis).places
}

/// How pairs of readings from different moments compare, and each reading's part in that.
#[derive(Clone, Debug, PartialEq)]
pub struct Concordance {
    /// Pairs of which the later reading is higher.
    pub rises: u64,
    /// Pairs of which the later reading is lower.
    pub falls: u64,
    /// For each reading, how many pairs it belongs to that rise, half of the tied ones added.
    pub parts: Vec<f64>,
}

impl Concordance {
    /// Compares by places in an order, in n log n steps.
    pub fn of_order(groups: &Groups, order: &Order) -> Self {
        let n = order.places.len();
        let mut parts = vec![0.0; n];
        let (mut rises, mut falls) = (0, 0);
        let mut counts = RunningCounts::new(order.sizes.len());
        let mut start = 0;
        for &size in &groups.sizes {
            let own = start..start + size;
            for (part, &place) in parts[own.clone()].iter_mut().zip(&order.places[own]) {
                let (below, not_above) = (counts.below(place), counts.below(place + 1));
                rises += below;
                falls += start as u64 - not_above;
                *part += (below + not_above) as f64 / 2.0;
            }
            (start..start + size).for_each(|index| counts.add(order.places[index]));
            start += size;
        }
        let mut counts = RunningCounts::new(order.sizes.len());
        let mut end = n;
        for &size in groups.sizes.iter().rev() {
            let own = end - size..end;
            for (part, &place) in parts[own.clone()].iter_mut().zip(&order.places[own]) {
                let later = (n - end) as u64;
                *part += (2 * later - counts.below(place) - counts.below(place + 1)) as f64 / 2.0;
            }
            (end - size..end).for_each(|index| counts.add(order.places[index]));
            end -= size;
        }
        Concordance { rises, falls, parts }
    }

    /// Compares pair by pair: for limits such as `<0.5` that do not fall into one order.
    pub fn of_pairs(groups: &Groups) -> Self {
        let n = groups.of.len();
        let mut concordance = Concordance { rises: 0, falls: 0, parts: vec![0.0; n] };
        for later in 0..n {
            for earlier in (0..later).filter(|&earlier| groups.of[earlier] < groups.of[later]) {
                let part = match groups.values[earlier].compare(groups.values[later]) {
                    Some(Ordering::Less) => {
                        concordance.rises += 1;
                        1.0
                    }
                    Some(Ordering::Greater) => {
                        concordance.falls += 1;
                        0.0
                    }
                    _ => 0.5,
                };
                concordance.parts[earlier] += part;
                concordance.parts[later] += part;
            }
        }
        concordance
    }

    /// Rises less falls.
    pub fn excess(&self) -> i64 {
        self.rises as i64 - self.falls as i64
    }

    /// The standard error of the number of rises (half of the ties added) if the readings of each moment are a sample of
    /// their own: the scatter of the readings' parts within each moment. `None` if a moment has a single reading or
    /// nothing scatters.
    ///
    /// Source: P. K. Sen (1960), On some convergence properties of U-statistics, *Calcutta Statistical Association
    /// Bulletin* 10, 1-18.
    pub fn standard_error(&self, sizes: &[usize]) -> Option<f64> {
        let (mut start, mut variance) = (0, 0.0);
        for &size in sizes {
            if size < 2 {
                return None;
            }
            let parts = &self.parts[start..start + size];
            let mean = parts.iter().sum::<f64>() / size as f64;
            variance += size as f64 / (size as f64 - 1.0) * parts.iter().map(|part| (part - mean).powi(2)).sum::<f64>();
            start += size;
        }
        (variance > 0.0).then(|| variance.sqrt())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::reading::{Cell, Moments};
    use std::sync::Arc;

    fn series(values: &[f64], moments: &[&str]) -> Series {
        let cells: Vec<Cell> = moments.iter().map(|label| Cell::text(label)).collect();
        Series { moments: Arc::new(Moments::of_cells(&cells).unwrap()), ..Series::of_numbers(values) }
    }

    #[test]
    fn words_and_numbers_make_groups() {
        let groups = Groups::by_moment(&series(&[1.0, 2.0, 3.0, 4.0], &["before", "after", "before", "after"]));
        assert_eq!((groups.labels, groups.readings), (vec!["before".into(), "after".into()], vec![0, 2, 1, 3]));
        let groups = Groups::by_moment(&series(&[1.0, 2.0, 3.0], &["2001", "2002", "2001"]));
        assert_eq!((groups.sizes.clone(), groups.of.clone(), groups.pairs()), (vec![2, 1], vec![0, 0, 1], 2));
    }

    #[test]
    fn the_fast_count_agrees_with_pair_by_pair() {
        let numbers: Vec<f64> = (0..40_u32).map(|i| f64::from(i * i * 7 % 11)).collect();
        let moments: Vec<String> = (0..40_u32).map(|i| (i * 3 % 7).to_string()).collect();
        let groups = Groups::by_moment(&series(&numbers, &moments.iter().map(String::as_str).collect::<Vec<_>>()));
        let order = Order::of_values(&groups.values).unwrap();
        assert_eq!(Concordance::of_order(&groups, &order), Concordance::of_pairs(&groups));
    }
}
