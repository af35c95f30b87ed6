//! Periods that begin again each year, and counting them on over the years.

use super::period::month_number;

/// Periods that begin again each year.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cycle {
    /// Weeks, 52 or 53 a year.
    Weeks,
    /// Months as numbers.
    Months,
    /// Months as names.
    MonthNames,
    /// Quarters.
    Quarters,
    /// Halves of a year.
    Halves,
}

/// The cycle that a word such as `week` or `Q` stands for.
pub fn cycle_of_word(word: &str) -> Option<Cycle> {
    const WEEKS: &str = "w wk week weeks kw cw woche s sem semaine semana settimana";
    const QUARTERS: &str = "q qtr quarter quartal t trim trimestre";
    let word = word.to_lowercase();
    let among = |words: &str| words.split(' ').any(|listed| listed == word);
    if among(WEEKS) {
        Some(Cycle::Weeks)
    } else if among(QUARTERS) {
        Some(Cycle::Quarters)
    } else if among("h half hj halbjahr") {
        Some(Cycle::Halves)
    } else if among("m month monat mois mes mese") {
        Some(Cycle::Months)
    } else {
        None
    }
}

/// The cycle of numbers that stand for periods, known from their labels, or without labels from where they begin again:
/// after 12, 52 or 53, always with 1.
pub fn cycle(labels: &[Box<str>], numbers: &[f64]) -> Option<Cycle> {
    let whole = |most: f64| numbers.iter().all(|&number| number.fract() == 0.0 && (1.0..=most).contains(&number));
    match labels.first() {
        Some(label) if month_number(label).is_some() => Some(Cycle::MonthNames),
        Some(label) => {
            let word = label.split(|c: char| !c.is_alphabetic()).next()?;
            cycle_of_word(word).filter(|cycle| whole(if *cycle == Cycle::Weeks { 53.0 } else { 12.0 }))
        }
        None => {
            let falls = || numbers.windows(2).filter(|pair| pair[1] < pair[0]);
            let rises = || numbers.windows(2).filter(|pair| pair[1] > pair[0]);
            let begins_again = |ends: &[f64]| {
                let forwards = falls().all(|pair| ends.contains(&pair[0]) && pair[1] == 1.0);
                let backwards = rises().all(|pair| ends.contains(&pair[1]) && pair[0] == 1.0);
                forwards || backwards
            };
            if whole(12.0) && begins_again(&[12.0]) {
                Some(Cycle::Months)
            } else if whole(53.0) && begins_again(&[52.0, 53.0]) {
                Some(Cycle::Weeks)
            } else {
                None
            }
        }
    }
}

impl Cycle {
    /// The highest number in a year.
    pub fn longest(self) -> u32 {
        match self {
            Cycle::Weeks => 53,
            Cycle::Months | Cycle::MonthNames => 12,
            Cycle::Quarters => 4,
            Cycle::Halves => 2,
        }
    }

    /// The numbers counted on over the years, forwards or, with the newest on top, backwards; `None` where they run
    /// neither way.
    pub fn counted_on(self, numbers: &[f64]) -> Option<Vec<f64>> {
        let backwards = || {
            let reversed: Vec<f64> = numbers.iter().rev().copied().collect();
            self.forwards(&reversed).map(|axis| axis.into_iter().rev().collect::<Vec<f64>>())
        };
        let span = |axis: &Vec<f64>| axis.last().zip(axis.first()).map_or(0.0, |(last, first)| (last - first).abs());
        match (self.forwards(numbers), backwards()) {
            (Some(forwards), Some(backwards)) if span(&backwards) < span(&forwards) => Some(backwards),
            (Some(forwards), _) => Some(forwards),
            (None, backwards) => backwards,
        }
    }

    fn forwards(self, numbers: &[f64]) -> Option<Vec<f64>> {
        let (length, least_fall) = match self {
            Cycle::Weeks if numbers.contains(&53.0) => (53.0, 40.0),
            Cycle::Weeks => (52.0, 40.0),
            Cycle::Months | Cycle::MonthNames => (12.0, 4.0),
            Cycle::Quarters => (4.0, 2.0),
            Cycle::Halves => (2.0, 1.0),
        };
        let mut years = 0.0;
        let mut before: Option<f64> = None;
        let counted = numbers.iter().map(|&number| {
            if let Some(before) = before.replace(number)
                && number < before
            {
                if before - number < least_fall {
                    return None;
                }
                years += 1.0;
            }
            Some(number + years * length)
        });
        counted.collect()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn periods_are_counted_on_over_the_years() {
        assert_eq!(Cycle::Weeks.counted_on(&[51.0, 52.0, 1.0, 2.0]), Some(vec![51.0, 52.0, 53.0, 54.0]));
        assert_eq!(Cycle::Weeks.counted_on(&[52.0, 53.0, 1.0]), Some(vec![52.0, 53.0, 54.0]));
        assert_eq!(Cycle::Weeks.counted_on(&[3.0, 2.0, 4.0]), None);
        assert_eq!(Cycle::MonthNames.counted_on(&[2.0, 1.0, 12.0, 11.0]), Some(vec![14.0, 13.0, 12.0, 11.0]));
        assert_eq!(Cycle::Quarters.counted_on(&[3.0, 4.0, 1.0, 2.0]), Some(vec![3.0, 4.0, 5.0, 6.0]));
        assert_eq!(cycle(&[], &[11.0, 12.0, 1.0]), Some(Cycle::Months));
        assert_eq!(cycle(&[], &[4.0, 1.0, 2.0]), None);
    }
}
