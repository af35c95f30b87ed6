//! The invented readings, and the truth that they were drawn from.
//!
//! Ternfield Hotels and its houses do not exist. Every series is drawn with a fixed seed from what is stated here, so
//! that whoever tries a method on the workbook knows what there was to find:
//!
//! | indicator | truth | wanted |
//! | --- | --- | --- |
//! | inspection grade | improves: the score behind the grade gains 0.016 a week, its noise being 1 | higher |
//! | guest nights | a yearly season of a quarter up and down, no trend | neither |
//! | complaints | 2.4 in a thousand guest nights throughout, so the count follows the season and the rate only fluctuates | lower |
//! | response to requests | worsens: 14 minutes and 0.04 more each week, noise 2.5 | lower |
//! | check-in wait | steps down from 6.5 to 5.1 minutes in week 61, level before and after, noise 1.1 | lower |
//! | laundry to rewash | fluctuates about 3.2 %, noise 0.7 | lower |
//! | energy | high in winter, low in summer, no trend | lower |
//! | linen cost | no trend, but each week remembers the last (correlation 0.6), so it wanders | lower |
//! | breakfast score | recorded in the last four weeks only: too few to say anything | higher |
//!
//! Some weeks have no inspection (blank) or were closed for it (`n/a`); for three weeks the laundry's scale was out of order.

use std::f64::consts::TAU;

/// Weeks recorded: two years.
pub const WEEKS: usize = 104;

/// The first Monday, 1 January 2024, as the day number that workbooks keep.
pub const FIRST_MONDAY: u32 = 45_292;

/// The grades, lowest first.
pub const GRADES: [&str; 4] = ["poor", "fair", "good", "very good"];

/// A house of the group.
pub struct House {
    pub name: &'static str,
    pub place: &'static str,
    pub rooms: u32,
    /// The day it opened, as workbooks number days.
    pub opened: u32,
}

/// The five houses, in the order in which they are visited.
pub const HOUSES: [House; 5] = [
    House { name: "Quayside", place: "harbour front", rooms: 64, opened: 38_443 },
    House { name: "Millrace", place: "old town", rooms: 38, opened: 36_281 },
    House { name: "Lantern House", place: "station", rooms: 92, opened: 41_730 },
    House { name: "Beech Court", place: "park", rooms: 45, opened: 39_934 },
    House { name: "Old Granary", place: "riverside", rooms: 27, opened: 43_252 },
];

/// An inspection as it was noted down.
#[derive(Clone, Copy, PartialEq, Eq)]
pub enum Inspection {
    /// A visit and its place among the grades.
    Graded(usize),
    /// No visit was made.
    None,
    /// The house was closed when it was to be visited.
    Closed,
}

/// What one week's row holds. What is missing is `None`.
pub struct Week {
    /// Its Monday, as workbooks number days.
    pub monday: u32,
    /// Which house was visited.
    pub house: usize,
    pub inspection: Inspection,
    pub guest_nights: u32,
    pub complaints: u32,
    /// Minutes from a guest's request to its answer, on average.
    pub response: f64,
    /// Minutes of waiting at the desk, on average.
    pub check_in: f64,
    /// Share of the laundry that went back for a second wash; `None` where it was not weighed.
    pub rewash: Option<f64>,
    /// Kilowatt hours for each guest night.
    pub energy: f64,
    /// Euro for each stay.
    pub linen: f64,
    /// Guests' mark for breakfast, from 1 to 5.
    pub breakfast: Option<f64>,
    pub remark: &'static str,
}

impl Week {
    /// Complaints for every thousand guest nights.
    pub fn complaint_rate(&self) -> f64 {
        1000.0 * f64::from(self.complaints) / f64::from(self.guest_nights)
    }
}

/// Draws the two years.
pub fn draw() -> Vec<Week> {
    let mut chance = Chance(fastrand::Rng::with_seed(1955));
    let mut linen_memory = 0.0;
    (0..WEEKS)
        .map(|week| {
            let t = week as f64;
            // The season is highest at the end of July, thirty weeks into the year.
            let season = (TAU * (t - 30.0) / 52.18).cos();
            let guest_nights = (2650.0 * (1.0 + 0.25 * season) + 90.0 * chance.normal()).round();
            linen_memory = 0.6 * linen_memory + 0.35 * chance.normal();
            Week {
                monday: FIRST_MONDAY + 7 * week as u32,
                house: week % HOUSES.len(),
                inspection: inspection(week, 1.1 + 0.016 * t + chance.normal()),
                guest_nights: guest_nights as u32,
                complaints: chance.poisson(2.4 * guest_nights / 1000.0),
                response: tenths(14.0 + 0.04 * t + 2.5 * chance.normal()),
                check_in: tenths(if week < 60 { 6.5 } else { 5.1 } + 1.1 * chance.normal()),
                rewash: Some(thousandths(0.032 + 0.007 * chance.normal())).filter(|_| !(70..73).contains(&week)),
                energy: tenths(24.0 - 6.5 * season + 1.2 * chance.normal()),
                linen: (100.0 * (7.4 + linen_memory)).round() / 100.0,
                breakfast: Some(tenths(4.1 + 0.2 * chance.normal())).filter(|_| week + 4 >= WEEKS),
                remark: remark(week),
            }
        })
        .collect()
}

fn inspection(week: usize, score: f64) -> Inspection {
    match week {
        17 | 44 | 69 | 95 => Inspection::None,
        51 | 52 | 103 => Inspection::Closed,
        _ => Inspection::Graded([0.6, 1.7, 3.0].iter().filter(|&&limit| score > limit).count()),
    }
}

fn remark(week: usize) -> &'static str {
    match week {
        17 => "Visit cancelled, inspector ill",
        31 => "Summer festival in town",
        51 | 103 => "House closed over Christmas",
        60 => "New check-in desks in use",
        70 => "Laundry scale out of order",
        73 => "Scale repaired",
        88 => "Lift at Lantern House out of service",
        100 => "Breakfast cards introduced",
        _ => "",
    }
}

fn tenths(value: f64) -> f64 {
    (10.0 * value).round() / 10.0
}

fn thousandths(value: f64) -> f64 {
    (1000.0 * value).round() / 1000.0
}

/// Draws from the distributions that the readings need.
struct Chance(fastrand::Rng);

impl Chance {
    /// Nearly standard normal: the sum of twelve uniform draws less six. Plain sums give the same bytes on every machine.
    fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.0.f64()).sum::<f64>() - 6.0
    }

    /// Poisson, by counting how many uniform factors it takes to fall below exp(-mean).
    fn poisson(&mut self, mean: f64) -> u32 {
        let limit = (-mean).exp();
        let mut product = self.0.f64();
        let mut count = 0;
        while product > limit {
            product *= self.0.f64();
            count += 1;
        }
        count
    }
}
