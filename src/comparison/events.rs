//! Event times of one item under observation, recorded as times or as gaps between events.

use crate::reading::{Series, Value};

/// What ended the observation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Truncation {
    /// A time that was fixed apart from the events.
    Time,
    /// The last event itself.
    Failure,
}

impl Truncation {
    /// What ended the observation, in words.
    pub fn word(self) -> &'static str {
        match self {
            Truncation::Time => "a fixed time",
            Truncation::Failure => "the last event",
        }
    }
}

/// Events in the order in which they happened, the observation starting at time 0.
#[derive(Clone, Debug, PartialEq)]
pub struct Events {
    /// The time of each event.
    pub times: Vec<f64>,
    /// The gap before each event.
    pub gaps: Vec<f64>,
    /// The end of observation.
    pub end: f64,
    /// What ended the observation.
    pub truncation: Truncation,
    /// The index of each event's reading.
    pub readings: Vec<usize>,
}

/// Why readings are no event times.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum EventError {
    /// A time or gap is negative.
    #[error("reading {position} is {shown}; times and gaps count from the start of observation and cannot be negative")]
    Negative { position: usize, shown: f64 },
    /// Times run backwards.
    #[error(
        "reading {position}, the time {time}, is earlier than the one before it, {before}; send event times in order, or readings_are=gaps"
    )]
    Backwards { position: usize, time: f64, before: f64 },
    /// An event after the end.
    #[error("reading {position}, the time {time}, lies after the end of observation, {end}")]
    AfterEnd { position: usize, time: f64, end: f64 },
    /// A limit where a time is needed.
    #[error("reading {position} is a limit; only the last gap may be one, as in >120 for a gap that was still open")]
    Limit { position: usize },
    /// A gap is missing between others.
    #[error("reading {position} is missing; without this gap the later events have no time")]
    MissingGap { position: usize },
    /// The end was stated twice.
    #[error("the end of observation is stated twice: as end={end}, and by the open gap of reading {position}")]
    TwoEnds { position: usize, end: f64 },
    /// Nothing was observed.
    #[error("the end of observation is {end}; it must be later than the start, 0")]
    NoTime { end: f64 },
}

impl Events {
    /// Events from their times since the start of observation; blank readings are no events.
    ///
    /// With an `end`, observation ended at that time; without, with the last event.
    ///
    /// # Errors
    /// Times are negative, run backwards, lie after the end, or are limits.
    pub fn of_times(series: &Series, end: Option<f64>) -> Result<Self, EventError> {
        let (mut times, mut readings) = (Vec::new(), Vec::new());
        for (index, value) in series.present() {
            let position = index + 1;
            let time = value.number().ok_or(EventError::Limit { position })?;
            if time < 0.0 {
                return Err(EventError::Negative { position, shown: time });
            }
            match times.last() {
                Some(&before) if time < before => return Err(EventError::Backwards { position, time, before }),
                _ => times.push(time),
            }
            readings.push(index);
        }
        Events::ending(times, readings, end)
    }

    /// Events from the gaps between them, the first gap starting with the observation. A last gap that is a lower limit,
    /// such as `>120`, was still open when observation ended.
    ///
    /// # Errors
    /// Gaps are negative, are limits elsewhere, or are missing between others.
    pub fn of_gaps(series: &Series, end: Option<f64>) -> Result<Self, EventError> {
        let (mut times, mut readings, mut now) = (Vec::new(), Vec::new(), 0.0);
        let last = series.present().map(|(index, _)| index).last().unwrap_or(0);
        let first = series.present().map(|(index, _)| index).next().unwrap_or(0);
        let mut end = end;
        for (index, value) in series.values.iter().enumerate().take(last + 1).skip(first) {
            let position = index + 1;
            match *value {
                Value::Number(gap) if gap < 0.0 => return Err(EventError::Negative { position, shown: gap }),
                Value::Number(gap) => {
                    now += gap;
                    times.push(now);
                    readings.push(index);
                }
                Value::Above(open) if index == last && open >= 0.0 => match end {
                    Some(end) => return Err(EventError::TwoEnds { position, end }),
                    None => end = Some(now + open),
                },
                Value::Missing(_) => return Err(EventError::MissingGap { position }),
                Value::Above(_) | Value::Below(_) => return Err(EventError::Limit { position }),
            }
        }
        Events::ending(times, readings, end)
    }

    fn ending(times: Vec<f64>, readings: Vec<usize>, end: Option<f64>) -> Result<Self, EventError> {
        let last = times.last().copied().unwrap_or(0.0);
        let (truncation, end) = match end {
            Some(end) => (Truncation::Time, end),
            None => (Truncation::Failure, last),
        };
        if let (true, Some(&index)) = (last > end, readings.last()) {
            return Err(EventError::AfterEnd { position: index + 1, time: last, end });
        }
        if end <= 0.0 || !end.is_finite() {
            return Err(EventError::NoTime { end });
        }
        let gaps = std::iter::once(0.0).chain(times.iter().copied()).zip(&times).map(|(before, time)| time - before).collect();
        Ok(Events { times, gaps, end, truncation, readings })
    }

    /// The event times whose place is left to chance once the end is known: all of them, or all but the last one where
    /// that ended the observation.
    pub fn free_times(&self) -> &[f64] {
        match self.truncation {
            Truncation::Time => &self.times,
            Truncation::Failure => &self.times[..self.times.len().saturating_sub(1)],
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn series(values: &[Value]) -> Series {
        Series { values: values.to_vec(), ..Series::of_numbers(&vec![0.0; values.len()]) }
    }

    #[test]
    fn times_and_gaps_tell_the_same_story() {
        let times = Events::of_times(&Series::of_numbers(&[5.0, 40.0, 43.0]), Some(60.0)).unwrap();
        let open = series(&[Value::Number(5.0), Value::Number(35.0), Value::Number(3.0), Value::Above(17.0)]);
        assert_eq!(Events::of_gaps(&open, None).unwrap(), times);
        assert_eq!(times.gaps, [5.0, 35.0, 3.0]);
        assert_eq!(times.free_times().len(), 3);
        let ended_by_failure = Events::of_gaps(&Series::of_numbers(&[5.0, 35.0, 3.0]), None).unwrap();
        assert_eq!((ended_by_failure.end, ended_by_failure.free_times()), (43.0, &[5.0, 40.0][..]));
    }

    #[test]
    fn what_cannot_be_is_refused() {
        let of_times = |numbers: &[f64], end| Events::of_times(&Series::of_numbers(numbers), end);
        assert_eq!(of_times(&[3.0, 2.0], None), Err(EventError::Backwards { position: 2, time: 2.0, before: 3.0 }));
        assert_eq!(of_times(&[3.0, 9.0], Some(5.0)), Err(EventError::AfterEnd { position: 2, time: 9.0, end: 5.0 }));
        assert_eq!(of_times(&[0.0, 0.0], None), Err(EventError::NoTime { end: 0.0 }));
        let gap = Value::Missing(crate::reading::Missing::Blank);
        let holed = series(&[Value::Number(1.0), gap, Value::Number(2.0)]);
        assert_eq!(Events::of_gaps(&holed, None), Err(EventError::MissingGap { position: 2 }));
        assert!(Events::of_times(&holed, None).is_ok());
    }
}
