//! Inputs without a trend that suit each test, and the judging of them.
//!
//! Most tests take plain readings. What a test needs beyond them stands in [`Input::random`], one line a test; a law that
//! cannot judge any input of a test says so by name.

use std::sync::Arc;

use risefall::method::declaration::{Argument, Arguments, Shape};
use risefall::method::question::Question;
use risefall::method::{Outcome, Refusal, Registered, ScaleNeeded, Seek};
use risefall::reading::{Blocks, Cell, Moments, Series, Value};

use crate::random::Random;

/// How often readings coincide.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ties {
    None,
    Heavy,
}

/// Readings with what stands beside them.
#[derive(Clone, Debug, PartialEq)]
pub struct Input {
    pub values: Vec<Value>,
    /// Lists with one number a reading, by parameter name.
    pub beside: Vec<(&'static str, Vec<f64>)>,
    /// Other parameters.
    pub settings: Vec<(&'static str, String)>,
    pub moments: Option<Vec<f64>>,
    pub blocks: Option<Vec<usize>>,
}

impl Input {
    pub fn plain(values: Vec<Value>) -> Self {
        Input { values, beside: vec![], settings: vec![], moments: None, blocks: None }
    }

    pub fn of_numbers(numbers: impl IntoIterator<Item = f64>) -> Self {
        Input::plain(numbers.into_iter().map(Value::Number).collect())
    }

    /// `n` readings without a trend. A test that simulates draws as little as it may.
    pub fn random(method: &Registered, random: &mut Random, n: usize, ties: Ties) -> Self {
        let mut input = Input::suited(method, random, n, ties == Ties::Heavy);
        if let Some(Shape::Integer { least, .. }) = shape(method, "draws") {
            input.settings.push(("draws", least.to_string()));
        }
        input
    }

    fn suited(method: &Registered, random: &mut Random, n: usize, heavy: bool) -> Self {
        match (method.card.key, method.card.scale) {
            ("cochran-armitage", _) => Input::events_among_trials(random, n, heavy),
            ("reverse-arrangements", _) => {
                Input { settings: vec![("readings_are", "gaps".into())], ..Input::readings(random, n, heavy) }
            }
            ("jonckheere-terpstra", _) => {
                let moments = (0..n).map(|index| (index * 4 / n.max(1)) as f64).collect();
                Input { moments: Some(moments), ..Input::readings(random, n, heavy) }
            }
            ("seasonal-kendall" | "regional-kendall", _) => {
                let blocks = (0..n).map(|index| index % 2).collect();
                Input { blocks: Some(blocks), ..Input::readings(random, n, heavy) }
            }
            ("partial-kendall", _) => {
                let covariate = (0..n).map(|_| random.whole(20) as f64).collect();
                Input { beside: vec![("covariate", covariate)], ..Input::readings(random, n, heavy) }
            }
            ("planned-looks", _) => {
                let horizon = n.clamp(2, 60).to_string();
                Input { settings: vec![("horizon", horizon), ("first_look", "2".into())], ..Input::readings(random, n, heavy) }
            }
            ("page", _) => {
                let moments = if n < 8 { 2 } else { 4 };
                let blocks = n / moments;
                let moment = |index: usize| (index / blocks.max(1)) as f64;
                let readings = Input::readings(random, blocks * moments, heavy);
                Input {
                    moments: Some((0..blocks * moments).map(moment).collect()),
                    blocks: Some((0..blocks * moments).map(|index| index % blocks).collect()),
                    ..readings
                }
            }
            (_, ScaleNeeded::Counts) => {
                let mean = if heavy { 0.7 } else { 6.0 };
                Input::of_numbers((0..n).map(|_| random.poisson(mean)))
            }
            (_, ScaleNeeded::EventTimes) => Input::event_times(random, n, heavy),
            _ => Input::readings(random, n, heavy),
        }
    }

    /// Numbers in no order: all different, or few different ones.
    fn readings(random: &mut Random, n: usize, heavy: bool) -> Self {
        if heavy {
            return Input::of_numbers((0..n).map(|_| random.whole(3) as f64 + 1.0));
        }
        let mut numbers: Vec<f64> = (1..=n).map(|number| number as f64).collect();
        random.shuffle(&mut numbers);
        Input::of_numbers(numbers)
    }

    fn events_among_trials(random: &mut Random, n: usize, heavy: bool) -> Self {
        let share = if heavy { 0.05 } else { 0.3 };
        let trials: Vec<usize> = (0..n).map(|_| 3 + random.whole(10)).collect();
        let events: Vec<f64> = trials.iter().map(|&size| (0..size).filter(|_| random.uniform() < share).count() as f64).collect();
        let trials = trials.into_iter().map(|size| size as f64).collect();
        Input { beside: vec![("trials", trials)], ..Input::of_numbers(events) }
    }

    /// Times between 0 and the end, 100, rounded to tenths of it where ties are asked for.
    fn event_times(random: &mut Random, n: usize, heavy: bool) -> Self {
        let round = |time: f64| if heavy { (time / 10.0).floor() * 10.0 + 5.0 } else { time };
        let mut times: Vec<f64> = (0..n).map(|_| round(random.uniform() * 100.0)).collect();
        times.sort_by(f64::total_cmp);
        Input { settings: vec![("end", "100".into())], ..Input::of_numbers(times) }
    }

    /// The same readings with time running backwards.
    pub fn reversed(&self, method: &Registered) -> Self {
        let mut reversed = self.clone();
        reversed.values.reverse();
        for (_, list) in &mut reversed.beside {
            list.reverse();
        }
        if let Some(moments) = &mut reversed.moments {
            moments.iter_mut().for_each(|moment| *moment = -*moment);
            moments.reverse();
        }
        if let Some(blocks) = &mut reversed.blocks {
            blocks.reverse();
        }
        if method.card.scale == ScaleNeeded::EventTimes && reversed.settings.iter().any(|(name, _)| *name == "end") {
            reversed = reversed.mapped(|time| 100.0 - time);
        }
        reversed
    }

    /// The same readings in another order; what stands beside them stays where it is.
    pub fn rearranged(&self, order: &[usize]) -> Self {
        Input { values: order.iter().map(|&index| self.values[index]).collect(), ..self.clone() }
    }

    /// A function of each reading.
    pub fn mapped(&self, map: impl Fn(f64) -> f64) -> Self {
        let map = |value: &Value| match *value {
            Value::Number(number) => Value::Number(map(number)),
            Value::Below(limit) => Value::Below(map(limit)),
            Value::Above(limit) => Value::Above(map(limit)),
            missing => missing,
        };
        Input { values: self.values.iter().map(map).collect(), ..self.clone() }
    }

    /// The same with one more parameter, if the test has it.
    pub fn with(&self, method: &Registered, name: &'static str, value: &str) -> Self {
        let mut input = self.clone();
        if shape(method, name).is_some() {
            input.settings.push((name, value.to_owned()));
        }
        input
    }

    pub fn series(&self) -> Series {
        let moments = match &self.moments {
            Some(numbers) => Moments::numbers(numbers.clone()),
            None => Moments::positions(self.values.len()),
        };
        Series {
            values: self.values.clone(),
            moments: Arc::new(moments),
            blocks: self.blocks.as_ref().map(|blocks| Blocks::of_labels(blocks.iter().map(usize::to_string))),
            ..Series::of_numbers(&[])
        }
    }

    pub fn arguments(&self) -> Arguments {
        let mut arguments = Arguments::default();
        for (name, list) in &self.beside {
            let column = list.iter().map(|&number| vec![Cell::Number(number)]).collect();
            arguments.push(*name, Argument::Cells(column));
        }
        for (name, value) in &self.settings {
            arguments.push(*name, Argument::Text(value.clone()));
        }
        arguments
    }

    /// Judges the readings.
    pub fn judge(&self, method: &Registered, seek: Seek) -> Result<Outcome, Refusal> {
        let test = method.read(&self.arguments()).unwrap_or_else(|error| panic!("{}: {error}", method.card.key));
        test.judge(&self.series(), &Question { seek, ..Question::default() })
    }
}

/// The form of a parameter's values, if the test has the parameter.
pub fn shape(method: &Registered, name: &str) -> Option<Shape> {
    method.parameters.iter().find(|parameter| parameter.name == name).map(|parameter| (parameter.shape)())
}

/// The forms of the p-value that a test offers, each as the word to ask for it.
pub fn forms_of_p(method: &Registered) -> Vec<&'static str> {
    match shape(method, "p_by") {
        Some(Shape::Choice(words)) => words.iter().map(|choice| choice.word).collect(),
        _ => vec!["best"],
    }
}

/// A numeric fact of an outcome.
pub fn fact(outcome: &Outcome, key: &str) -> Option<f64> {
    outcome.facts.iter().find(|fact| fact.key == key).and_then(|fact| match fact.value {
        risefall::method::Datum::Number(number) => Some(number),
        risefall::method::Datum::Integer(integer) => Some(integer as f64),
        _ => None,
    })
}

/// The p-values for a rise and for a fall, where a test has a direction.
pub fn directions(outcome: &Outcome) -> Option<(f64, f64)> {
    Some((fact(outcome, "p_rising")?, fact(outcome, "p_falling")?))
}

/// The p-values for the two things that a test could find: a rise and a fall, or a smooth and an alternating order.
pub fn both_tails(outcome: &Outcome) -> Option<(f64, f64)> {
    directions(outcome).or_else(|| Some((fact(outcome, "p_smooth")?, fact(outcome, "p_alternating")?)))
}

/// Asserts that two p-values agree to nine digits.
#[track_caller]
pub fn same(got: f64, expected: f64, what: &str) {
    assert!((got - expected).abs() <= 1e-9 * expected.abs(), "{what}: {got:e} and {expected:e}");
}
