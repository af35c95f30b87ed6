//! When readings were taken: dates, period labels, numbers, or positions alone.

pub mod cycle;
pub mod period;

use jiff::civil::{Date, DateTime};

use super::{Blocks, Cell};

/// What the moments are, and so what a distance between two of them means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum MomentKind {
    /// Nothing but the order is known: 1, 2, 3, ...
    Position,
    /// Dates or periods of the calendar; the axis counts days.
    Date,
    /// Plain numbers, such as years or hours; the axis is the number.
    Number,
    /// Words whose order is the order they came in; the axis counts positions.
    Label,
}

/// One moment for each reading.
#[derive(Clone, Debug, PartialEq)]
pub struct Moments {
    kind: MomentKind,
    axis: Vec<f64>,
    labels: Vec<Box<str>>,
    count: usize,
}

/// What is wrong with moments.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum MomentError {
    /// There is not one moment for each reading.
    #[error("there are {readings} readings but {moments} moments; send one moment for each reading")]
    Count { readings: usize, moments: usize },
    /// A moment is absent while others are there.
    #[error("moment {position} is blank; give each reading its date or label, or leave the moments out")]
    Blank { position: usize },
    /// A moment lies before the one above it.
    #[error("moment {position}, `{label}`, comes before the earlier one, `{before}`; sort the readings by time, oldest first")]
    OutOfOrder { position: usize, label: String, before: String },
    /// The same moment twice.
    #[error(
        "moment {position}, `{label}`, is the same as the one before it; keep one reading for each moment, or use a test for several readings at a moment"
    )]
    Repeated { position: usize, label: String },
}

impl Moments {
    /// Positions 1 to `count`.
    pub fn positions(count: usize) -> Self {
        Moments { kind: MomentKind::Position, axis: Vec::new(), labels: Vec::new(), count }
    }

    /// Plain numbers.
    pub fn numbers(axis: Vec<f64>) -> Self {
        let count = axis.len();
        Moments { kind: MomentKind::Number, axis, labels: Vec::new(), count }
    }

    /// Dates and times.
    pub fn dates(dates: &[DateTime]) -> Self {
        let axis: Vec<f64> = dates.iter().map(|&date| days(date)).collect();
        Moments { kind: MomentKind::Date, count: axis.len(), axis, labels: Vec::new() }
    }

    /// Makes moments of cells: all dates or periods, else all numbers, else words in the order they came.
    ///
    /// # Errors
    /// A blank among moments.
    pub fn of_cells(cells: &[Cell]) -> Result<Self, MomentError> {
        if let Some(index) = cells.iter().position(Cell::is_empty) {
            return Err(MomentError::Blank { position: index + 1 });
        }
        let count = cells.len();
        if let Some(dates) = all(cells, |cell| match cell {
            Cell::Date(date) => Some(*date),
            _ => None,
        }) {
            return Ok(Moments::dates(&dates));
        }
        let number = |cell: &Cell| match cell {
            Cell::Number(number) => Some(*number),
            Cell::Text(text) => text.parse::<f64>().ok().filter(|number| number.is_finite()),
            _ => None,
        };
        if let Some(numbers) = all(cells, number) {
            return Ok(Moments::numbers(numbers));
        }
        let labels: Vec<Box<str>> = cells.iter().map(|cell| cell.quote().into_boxed_str()).collect();
        if let Some(axis) = all(cells, |cell| period::pair_of_years(&cell.quote())) {
            return Ok(Moments { kind: MomentKind::Number, axis, labels, count });
        }
        let forms = period::Forms::of(cells);
        let start = |cell: &Cell| match cell {
            Cell::Date(date) => Some(*date),
            Cell::Text(text) => period::start(text, forms),
            _ => None,
        };
        if let Some(starts) = all(cells, start) {
            let axis = starts.iter().map(|&start| days(start)).collect();
            return Ok(Moments { kind: MomentKind::Date, axis, labels, count });
        }
        let month = |cell: &Cell| period::month_number(&cell.quote()).map(f64::from);
        if let Some(axis) = all(cells, |cell| period::numbered(&cell.quote())).or_else(|| all(cells, month)) {
            return Ok(Moments { kind: MomentKind::Number, axis, labels, count }.counted_on());
        }
        Ok(Moments { kind: MomentKind::Label, axis: Vec::new(), labels, count })
    }

    /// Weeks, months or quarters without a year, counted on where they begin again with a new year: after week 52 comes
    /// 53, not 1. Other moments stay as they are.
    ///
    /// Periods written as text are always counted on. Plain numbers are so only by this method: it is for a single series
    /// whose numbers are known to be weeks or months.
    #[must_use]
    pub fn counted_on(mut self) -> Self {
        if self.kind == MomentKind::Number
            && let Some(axis) = cycle::cycle(&self.labels, &self.axis).and_then(|cycle| cycle.counted_on(&self.axis))
        {
            self.axis = axis;
        }
        self
    }

    /// What the moments are.
    pub fn kind(&self) -> MomentKind {
        self.kind
    }

    /// How many moments there are.
    pub fn len(&self) -> usize {
        self.count
    }

    /// Whether there are none.
    pub fn is_empty(&self) -> bool {
        self.count == 0
    }

    /// Whether the moments were written as text, which their labels repeat.
    pub fn has_labels(&self) -> bool {
        !self.labels.is_empty()
    }

    /// Where a reading stands on the time axis: days for dates, the number itself, or the position from 1.
    pub fn axis(&self, index: usize) -> f64 {
        self.axis.get(index).copied().unwrap_or(index as f64 + 1.0)
    }

    /// The moment as a person would write it.
    pub fn label(&self, index: usize) -> String {
        if let Some(label) = self.labels.get(index) {
            return label.to_string();
        }
        match (self.kind, self.axis.get(index)) {
            (MomentKind::Date, Some(&day)) => date_of(day).map(date_label).unwrap_or_default(),
            (MomentKind::Number, Some(number)) => number.to_string(),
            _ => (index + 1).to_string(),
        }
    }

    /// The date of a reading, where the moments are dates.
    pub fn date(&self, index: usize) -> Option<DateTime> {
        match self.kind {
            MomentKind::Date => self.axis.get(index).and_then(|&day| date_of(day)),
            _ => None,
        }
    }

    /// The moments from the last to the first.
    pub fn reversed(mut self) -> Self {
        self.axis.reverse();
        self.labels.reverse();
        self
    }

    /// Whether the moments run strictly backwards, as in a table with the newest row on top.
    pub fn newest_first(&self) -> bool {
        self.axis.len() > 1 && self.axis.windows(2).all(|pair| pair[0] > pair[1])
    }

    /// Checks that time never runs backwards within a block, and stands still only where that is allowed.
    pub fn check_order(&self, repeats_allowed: bool, blocks: Option<&Blocks>) -> Result<(), MomentError> {
        if self.axis.is_empty() {
            return Ok(());
        }
        let mut last: Vec<Option<usize>> = vec![None; blocks.map_or(1, Blocks::count)];
        for index in 0..self.axis.len() {
            let before = last[blocks.map_or(0, |blocks| blocks.block(index))].replace(index);
            let Some(before) = before else { continue };
            let position = index + 1;
            if self.axis[index] < self.axis[before] {
                return Err(MomentError::OutOfOrder { position, label: self.label(index), before: self.label(before) });
            }
            if self.axis[index] == self.axis[before] && !repeats_allowed {
                return Err(MomentError::Repeated { position, label: self.label(index) });
            }
        }
        Ok(())
    }
}

/// A date as `2025-03-01`, with the time of day only where there is one.
pub fn date_label(date: DateTime) -> String {
    if date.time() == jiff::civil::Time::midnight() {
        date.date().to_string()
    } else {
        date.strftime("%Y-%m-%d %H:%M").to_string()
    }
}

fn all<T>(cells: &[Cell], read: impl Fn(&Cell) -> Option<T>) -> Option<Vec<T>> {
    cells.iter().map(read).collect()
}

const EPOCH: Date = Date::constant(1970, 1, 1);
const SECONDS_A_DAY: f64 = 86_400.0;

fn days(date: DateTime) -> f64 {
    let whole = (date.date() - EPOCH).get_days() as f64;
    let time = date.time();
    let seconds = time.hour() as f64 * 3600.0 + time.minute() as f64 * 60.0 + time.second() as f64;
    whole + seconds / SECONDS_A_DAY
}

fn date_of(days: f64) -> Option<DateTime> {
    let seconds = (days * SECONDS_A_DAY).round() as i64;
    EPOCH.to_datetime(jiff::civil::Time::midnight()).checked_add(jiff::SignedDuration::from_secs(seconds)).ok()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn moments(labels: &[&str]) -> Moments {
        Moments::of_cells(&labels.iter().map(|label| Cell::text(label)).collect::<Vec<_>>()).unwrap()
    }

    #[test]
    fn calendar_periods_are_dates() {
        for labels in [
            ["2025-W07", "2025-W08"],
            ["2025-02-10", "2025-02-17"],
            ["10.02.2025", "17.02.2025"],
            ["10 Feb 2025", "17 February 2025"],
            ["10/02/2025", "17/02/2025"],
            ["02/10/2025", "02/17/2025"],
        ] {
            let read = moments(&labels);
            assert_eq!(read.kind(), MomentKind::Date, "{labels:?}");
            assert_eq!(read.date(0).unwrap().date(), Date::constant(2025, 2, 10), "{labels:?}");
            assert_eq!(read.axis(1) - read.axis(0), 7.0, "{labels:?}");
            assert_eq!(read.label(0), labels[0]);
        }
    }

    #[test]
    fn months_and_quarters_are_dates() {
        assert_eq!(moments(&["Jan 2025", "Feb 2025"]).axis(1) - moments(&["Jan 2025", "Feb 2025"]).axis(0), 31.0);
        assert_eq!(moments(&["2025-Q1", "2025-Q2"]).date(1).unwrap().date(), Date::constant(2025, 4, 1));
        assert_eq!(moments(&["2025-01", "2025-02"]).kind(), MomentKind::Date);
    }

    #[test]
    fn numbered_periods_keep_their_labels() {
        let weeks = moments(&["Week 7", "Week 9"]);
        assert_eq!((weeks.kind(), weeks.axis(1), weeks.label(1)), (MomentKind::Number, 9.0, "Week 9".into()));
        assert_eq!(moments(&["spring", "autumn"]).kind(), MomentKind::Label);
    }

    #[test]
    fn periods_without_a_year_are_counted_on_into_the_next() {
        for labels in [["Nov", "Dec", "Jan"], ["KW 51", "KW 52", "KW 1"], ["Q3", "Q4", "Q1"], ["2019/20", "2020/21", "2021/22"]] {
            let read = moments(&labels);
            assert_eq!((read.kind(), read.axis(2) - read.axis(0)), (MomentKind::Number, 2.0), "{labels:?}");
            assert!(read.check_order(false, None).is_ok(), "{labels:?}");
        }
        assert!(moments(&["March", "January", "February"]).check_order(false, None).is_err());
    }

    #[test]
    fn an_undecidable_date_is_a_label_not_a_guess() {
        assert_eq!(moments(&["03/04/2025", "05/04/2025"]).kind(), MomentKind::Label);
    }

    #[test]
    fn order_is_checked() {
        assert!(matches!(
            moments(&["2025-02-10", "2025-02-03"]).check_order(true, None),
            Err(MomentError::OutOfOrder { position: 2, .. })
        ));
        assert!(matches!(
            moments(&["2025-02-10", "2025-02-10"]).check_order(false, None),
            Err(MomentError::Repeated { position: 2, .. })
        ));
        assert!(moments(&["2025-02-10", "2025-02-10"]).check_order(true, None).is_ok());
    }
}
