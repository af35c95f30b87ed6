//! Readings as places in an order in which equal ones share a place.

use super::midranks::lower_and_higher;
use crate::reading::Value;

/// The place of each reading, and how many readings share each place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Order {
    /// The place of each reading, the lowest being 0. Ties share a place, and no place is empty.
    pub places: Vec<usize>,
    /// How many readings stand at each place.
    pub sizes: Vec<usize>,
}

impl Order {
    /// Places of numbers.
    pub fn of_numbers(numbers: &[f64]) -> Self {
        let mut sorted: Vec<usize> = (0..numbers.len()).collect();
        sorted.sort_by(|&a, &b| numbers[a].total_cmp(&numbers[b]));
        let mut order = Order { places: vec![0; numbers.len()], sizes: Vec::new() };
        let mut before = None;
        for index in sorted {
            if before != Some(numbers[index]) {
                order.sizes.push(0);
                before = Some(numbers[index]);
            }
            order.places[index] = order.sizes.len() - 1;
            *order.sizes.last_mut().unwrap_or(&mut 0) += 1;
        }
        order
    }

    /// Places of readings, none of them missing; limits such as `<0.5` tie with every reading whose order to them is not
    /// certain. `None` if being tied then does not carry over: `<0.5` ties with 0.3 and with 0.4, which differ. Time grows with n log n.
    pub fn of_values(values: &[Value]) -> Option<Self> {
        let mut sorted: Vec<(usize, (usize, usize))> = lower_and_higher(values).into_iter().enumerate().collect();
        sorted.sort_unstable_by_key(|&(_, counts)| counts);
        let mut order = Order { places: vec![0; values.len()], sizes: Vec::new() };
        for shared in sorted.chunk_by(|a, b| a.1.0 == b.1.0) {
            for &(index, (lower, higher)) in shared {
                if values.len() - lower - higher != shared.len() {
                    return None;
                }
                order.places[index] = order.sizes.len();
            }
            order.sizes.push(shared.len());
        }
        Some(order)
    }

    /// The mean rank at each place, the lowest rank being 1.
    pub fn mean_ranks(&self) -> Vec<f64> {
        let mut before = 0;
        self.sizes
            .iter()
            .map(|&size| {
                before += size;
                before as f64 - (size as f64 - 1.0) / 2.0
            })
            .collect()
    }

    /// How many pairs of readings are tied.
    pub fn tied_pairs(&self) -> u64 {
        self.sizes.iter().map(|&size| (size * (size - 1) / 2) as u64).sum()
    }
}

/// Running totals over places, each updated and read in logarithmic time (P. M. Fenwick 1994, *Software: Practice and
/// Experience* 24, 327-336).
pub struct RunningCounts {
    sums: Vec<u64>,
}

impl RunningCounts {
    /// No readings yet at any of `places` places.
    pub fn new(places: usize) -> Self {
        RunningCounts { sums: vec![0; places + 1] }
    }

    /// Adds one reading at a place.
    pub fn add(&mut self, place: usize) {
        let mut index = place + 1;
        while index < self.sums.len() {
            self.sums[index] += 1;
            index += index & index.wrapping_neg();
        }
    }

    /// How many readings stand below a place.
    pub fn below(&self, place: usize) -> u64 {
        let (mut index, mut sum) = (place, 0);
        while index > 0 {
            sum += self.sums[index];
            index &= index - 1;
        }
        sum
    }
}

/// For each reading in time order, how many later ones are higher.
pub fn later_higher(order: &Order) -> Vec<u64> {
    let mut counts = RunningCounts::new(order.sizes.len());
    let mut higher: Vec<u64> = order
        .places
        .iter()
        .enumerate()
        .rev()
        .map(|(index, &place)| {
            let later = (order.places.len() - 1 - index) as u64;
            let higher = later - counts.below(place + 1);
            counts.add(place);
            higher
        })
        .collect();
    higher.reverse();
    higher
}

/// For each reading, how many readings of earlier moments are certainly lower and how many are certainly higher;
/// `moment_sizes` says how many readings each moment has.
pub fn earlier_lower_and_higher(values: &[Value], moment_sizes: &[usize]) -> Vec<(u64, u64)> {
    let mut parts = Vec::with_capacity(values.len());
    let mut start = 0;
    match Order::of_values(values) {
        Some(order) => {
            let mut counts = RunningCounts::new(order.sizes.len());
            for &size in moment_sizes {
                for &place in &order.places[start..start + size] {
                    parts.push((counts.below(place), start as u64 - counts.below(place + 1)));
                }
                order.places[start..start + size].iter().for_each(|&place| counts.add(place));
                start += size;
            }
        }
        None => {
            for &size in moment_sizes {
                for value in &values[start..start + size] {
                    let count = |order| {
                        values[..start].iter().filter(|earlier: &&Value| earlier.compare(*value) == Some(order)).count() as u64
                    };
                    parts.push((count(std::cmp::Ordering::Less), count(std::cmp::Ordering::Greater)));
                }
                start += size;
            }
        }
    }
    parts
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn equal_numbers_share_a_place() {
        let order = Order::of_numbers(&[2.0, 1.0, 2.0, 3.0, 1.0]);
        assert_eq!(order.places, [1, 0, 1, 2, 0]);
        assert_eq!(order.sizes, [2, 2, 1]);
        assert_eq!(order.mean_ranks(), [1.5, 3.5, 5.0]);
        assert_eq!(Order::of_numbers(&[0.0, -0.0]).sizes, [2]);
    }

    #[test]
    fn limits_share_a_place_where_that_is_consistent() {
        use Value::{Above, Below, Number};
        let order = Order::of_values(&[Below(0.5), Number(0.7), Below(0.5), Number(0.5)]).unwrap();
        assert_eq!(order.places, [0, 2, 0, 1]);
        assert_eq!(Order::of_values(&[Below(0.5), Number(0.3), Number(0.4)]), None);
        assert_eq!(Order::of_values(&[Below(0.5), Below(0.2), Number(0.3)]), None);
        assert_eq!(Order::of_values(&[Above(2.0), Number(1.0), Above(2.0), Number(2.0)]).unwrap().sizes, [1, 1, 2]);
    }

    #[test]
    fn later_higher_readings_are_counted() {
        let numbers = [3.0, 1.0, 4.0, 1.0, 5.0, 9.0, 2.0, 6.0, 5.0, 3.0];
        let naive: Vec<u64> = (0..10).map(|i| (i + 1..10).filter(|&j| numbers[j] > numbers[i]).count() as u64).collect();
        assert_eq!(later_higher(&Order::of_numbers(&numbers)), naive);
    }
}
