//! Kendall's S at planned looks: did it ever cross a boundary that spends the risk over the looks?
//!
//! A series that is judged again each week is claimed to have a trend sooner or later, though it has none. Here the number of
//! readings is planned, and the risk is spent over the looks by a stated function of the information so far, the variance of S
//! at the look as a share of that at the horizon. Without a trend S grows by independent steps 2r - t - 1, r being the rank of
//! the newest of t readings, so the chance of ever having crossed is carried exactly from look to look, and each look
//! has the lowest boundary that keeps it within what may have been spent by then.
//!
//! # Looks
//! There is a look after `first_look` readings, then after `every` further ones, and at the `horizon`. Between two looks
//! the last one counts. A look that nobody made costs a little power and no risk.
//!
//! # Choices
//! `spending`: with `o-brien-fleming` f(t) = 2 - 2Φ(z/√t), z being the normal quantile that is exceeded with half the
//! risk; early claims need very clear trends, and the boundary at the horizon is nearly that of a single test. With
//! `pocock` f(t) = risk · ln(1 + (e - 1)t), which finds a steep trend earlier and a slow one later. Where either direction
//! is sought, twice what half the risk spends is spent on both boundaries together.
//!
//! # What p means
//! The furthest that S came is its largest multiple of the boundary at any look so far. p is the exact chance that S comes as
//! far at any planned look if there is no trend. A path that has crossed has p within the risk. One that has not crossed is
//! given a p above the risk, though the last steps of the lattice may have left a little unspent. So p is at most the risk
//! exactly where the boundary was crossed; it never rises from look to look, and it may be adjusted for other indicators.
//!
//! # Beyond the horizon
//! The risk is spent; later readings are not judged, and the reply says so. A plan for further readings has to be made before
//! they are seen, and starts with its own first reading. `watch` has no horizon.
//!
#![doc = include_str!("looks.md")]
//!
//! # Sources
//! K. K. G. Lan and D. L. DeMets (1983), Discrete sequential boundaries for clinical trials, *Biometrika* 70, 659-663.
//! M. G. Kendall (1975), *Rank Correlation Methods*, 4th ed., chapter 5 (S as a sum of independent steps).

use super::declaration::Count;
use super::successive::{MISSING, Successive, TIES, Ties};
use super::{
    Card, Claim, Column, Datum, Direction, Evidence, Fact, Method, Outcome, Question, Refusal, ScaleNeeded, Seek, Source,
    Statistic, Table,
};
use crate::null_distribution::score_path::{Boundary, Look, MOST_READINGS, Sides};
use crate::null_distribution::{Attained, By, Tails, normal};
use crate::reading::Series;

crate::choices! {
    /// How the risk is spent over the looks.
    pub enum Spending {
        /// Little at first, so that the last look has nearly the whole risk; after P. C. O'Brien and T. R. Fleming.
        OBrienFleming = "o-brien-fleming",
        /// More evenly; after S. J. Pocock.
        Pocock = "pocock",
    }
}

impl Spending {
    /// How much of the risk may have been spent when a share of the information is in.
    pub fn allowance(self, risk: f64, information: f64, sides: Sides) -> f64 {
        match (self, sides) {
            (_, Sides::Two) => 2.0 * self.allowance(risk / 2.0, information, Sides::One),
            _ if information >= 1.0 => risk,
            (Spending::OBrienFleming, _) => 2.0 * normal::upper_tail(normal::upper_quantile(risk / 2.0) / information.sqrt()),
            (Spending::Pocock, _) => risk * ((std::f64::consts::E - 1.0) * information).ln_1p(),
        }
    }
}

crate::parameters! {
    /// What planned looks take beyond readings, seek and risk.
    pub struct Parameters {
        /// How many readings are planned; the plan is made before looking.
        horizon: Count<2, MOST_READINGS> = Count(104),
        /// After how many readings the first look is made.
        first_look: Count<2, MOST_READINGS> = Count(10),
        /// After how many further readings each next look is made.
        every: Count<1, MOST_READINGS> = Count(1),
        /// How the risk is spent over the looks.
        spending: Spending = Spending::OBrienFleming,
        /// What becomes of equal readings.
        ties: Ties = Ties::Seeded,
        /// For ties=seeded: the seed; the same seed breaks the same ties at every look.
        seed: Count<0, 4_294_967_295> = Count(1),
    }
}

/// The test itself.
pub struct PlannedLooks;

impl Method for PlannedLooks {
    type Parameters = Parameters;

    const CARD: Card = Card {
        key: "planned-looks",
        title: "Kendall's S at planned looks",
        question: "Has a series that is looked at again and again, up to a planned number of readings, shown a trend by now?",
        null_hypothesis: "Every order of the readings is equally probable, those still to come among them.",
        claim: Claim::Trend,
        scale: ScaleNeeded::Ordered,
        least_readings: 2,
        exact: "Always, up to a horizon of 520 readings; with ties=against p is an upper limit if readings are equal.",
        assumes: &[
            "Apart from a trend, the readings are independent and come from one distribution; there is no season.",
            "Readings can be ordered; their differences need not mean anything.",
            "Horizon, looks, spending, seed, seek and risk were declared before the first look and are never changed.",
            "A claim stands once it is made, whatever later readings show.",
        ],
        ties: TIES,
        missing: MISSING,
        cost: "the cube of the horizon",
        fits_better: &[
            ("watch", "no number of readings can be planned"),
            ("mann-kendall", "the series is judged once, or the readings remember their predecessors"),
        ],
        sources: &[
            Source {
                authors: "K. K. G. Lan, D. L. DeMets",
                year: 1983,
                title: "Discrete sequential boundaries for clinical trials",
                place: "Biometrika 70, 659-663",
            },
            Source {
                authors: "M. G. Kendall",
                year: 1975,
                title: "Rank Correlation Methods, 4th edition",
                place: "Griffin, chapter 5",
            },
        ],
        repeated_moments: false,
        blocks: false,
    };

    fn judge(series: &Series, question: &Question, parameters: &Parameters) -> Result<Outcome, Refusal> {
        let have = series.count_present();
        let looks = parameters.looks()?;
        if have < looks[0] {
            return Err(Refusal::TooFewReadings { have, need: looks[0] });
        }
        let horizon = parameters.horizon.0 as usize;
        let readings = Successive::of(series, horizon, parameters.ties, parameters.seed.0)?;
        let paths = Paths::at(&looks, &readings);
        let design = |sides| {
            let allowance = |information| parameters.spending.allowance(question.risk.0, information, sides);
            Boundary::spending(&looks, sides, allowance)
        };
        let (one, two) = (design(Sides::One), design(Sides::Two));
        let attained = paths.attained(&one, &two, question.risk.0, parameters.ties, readings.tied_pairs);
        let (p, smallest) = question.judge(&attained);
        let boundary = if question.seek == Seek::Either { &two } else { &one };
        let sought = Sought { series, readings: &readings, paths: &paths, boundary, seek: question.seek };
        let mut facts = sought.facts(question.risk.0);
        facts.push(readings.fact());
        facts.extend(question.p_facts(&attained));
        let mut cautions = readings.cautions(series, parameters.ties);
        if have > horizon {
            cautions.push(format!(
                "The plan ended with reading {horizon}; {} later readings are not judged. A plan for them has to be made before they are seen, and starts with its own first reading.",
                have - horizon
            ));
        }
        cautions.extend(sought.caution(have));
        Ok(Outcome {
            statistic: Statistic { name: "S", value: sought.latest() as f64 },
            p,
            direction: sought.direction(),
            smallest_p: Some(smallest),
            readings_used: looks[paths.made() - 1],
            facts,
            evidence: vec![Evidence::Table(sought.table())],
            cautions,
        })
    }
}

impl Parameters {
    /// The numbers of readings at which there are looks.
    fn looks(&self) -> Result<Vec<usize>, Refusal> {
        let (first, every, horizon) = (self.first_look.0 as usize, self.every.0 as usize, self.horizon.0 as usize);
        if first > horizon {
            return Err(Refusal::Because(format!(
                "the first look is planned after {first} readings, but the horizon is {horizon}; plan the first look at the horizon or before"
            )));
        }
        let mut looks: Vec<usize> = (first..=horizon).step_by(every).collect();
        if looks.last() != Some(&horizon) {
            looks.push(horizon);
        }
        Ok(looks)
    }
}

/// S at each look that has been made.
struct Paths {
    /// As counted where a rise is sought.
    rising: Vec<i64>,
    /// As counted where a fall is sought, with its sign turned.
    falling: Vec<i64>,
    /// If every reading so far had exceeded all earlier ones.
    steepest: Vec<i64>,
}

impl Paths {
    fn at(looks: &[usize], readings: &Successive) -> Self {
        let sums = |parts: &[i64]| -> Vec<i64> {
            let made = looks.iter().take_while(|&&look| look <= parts.len());
            made.map(|&look| parts[..look].iter().sum()).collect()
        };
        let steepest: Vec<i64> = (0..readings.rising.len() as i64).collect();
        Paths {
            rising: sums(&readings.rising),
            falling: sums(&readings.falling).into_iter().map(|s| -s).collect(),
            steepest: sums(&steepest),
        }
    }

    /// How many looks have been made.
    fn made(&self) -> usize {
        self.rising.len()
    }

    /// At each look, the side that comes further.
    fn either(&self) -> Vec<i64> {
        self.rising.iter().zip(&self.falling).map(|(&up, &down)| up.max(down)).collect()
    }

    fn attained(&self, one: &Boundary, two: &Boundary, risk: f64, ties: Ties, tied_pairs: u64) -> Attained {
        let p = |boundary: &Boundary, path: &[i64]| {
            let Some(reach) = boundary.reach(path) else { return 1.0 };
            let chance = boundary.chance(reach).max(f64::MIN_POSITIVE);
            if reach.multiple() >= 1.0 { chance } else { chance.max(risk * (1.0 + 1e-12)).min(1.0) }
        };
        let smallest = p(one, &self.steepest);
        let limit = By::Approximation("upper limit, ties counted against the direction");
        Attained {
            tails: Tails { lower: p(one, &self.falling), upper: p(one, &self.rising) },
            either: p(two, &self.either()),
            extremes: Tails { lower: smallest, upper: smallest },
            least_either: p(two, &self.steepest),
            by: if ties == Ties::Against && tied_pairs > 0 { limit } else { By::Exact },
        }
    }
}

/// The path beside the boundary for what is sought.
struct Sought<'a> {
    series: &'a Series,
    readings: &'a Successive,
    paths: &'a Paths,
    boundary: &'a Boundary,
    seek: Seek,
}

impl Sought<'_> {
    /// Where the path has crossed at a look, and where to.
    fn crossed(&self, number: usize) -> Option<Direction> {
        let least = self.boundary.looks()[number].least?;
        let reaches = |path: &[i64]| path.get(number).is_some_and(|&s| s >= least);
        match self.seek {
            Seek::Rising | Seek::Either if reaches(&self.paths.rising) => Some(Direction::Rising),
            Seek::Falling | Seek::Either if reaches(&self.paths.falling) => Some(Direction::Falling),
            _ => None,
        }
    }

    /// The first look at which the path has crossed.
    fn first(&self) -> Option<(&Look, Direction)> {
        (0..self.paths.made()).find_map(|number| Some((&self.boundary.looks()[number], self.crossed(number)?)))
    }

    /// S at a look that has been made, as counted for what is sought.
    fn score(&self, number: usize) -> Option<i64> {
        let (up, down) = (*self.paths.rising.get(number)?, -*self.paths.falling.get(number)?);
        Some(match self.seek {
            Seek::Rising => up,
            Seek::Falling => down,
            // Ties that count against both directions leave S between the two counts.
            Seek::Either => (up + down) / 2,
        })
    }

    /// S at the latest look.
    fn latest(&self) -> i64 {
        self.score(self.paths.made() - 1).unwrap_or(0)
    }

    /// The claimed direction; without a claim, where S points.
    fn direction(&self) -> Direction {
        self.first().map_or(Direction::of(self.latest() as f64), |(_, direction)| direction)
    }

    fn moment(&self, look: &Look) -> Option<String> {
        self.readings.indices.get(look.readings - 1).map(|&index| self.series.moments.label(index))
    }

    fn facts(&self, risk: f64) -> Vec<Fact> {
        let looks = self.boundary.looks();
        let made = self.paths.made();
        let (latest, next) = (&looks[made - 1], looks.get(made));
        let first = self.first().map(|(look, _)| look);
        let pairs = (latest.readings * (latest.readings - 1) / 2) as f64;
        vec![
            Fact::new("s", "S: rises less falls, at the latest look", self.latest()),
            Fact::new("boundary", "Boundary at the latest look", latest.least),
            Fact::new("tau", "S as a share of all pairs", self.latest() as f64 / pairs),
            Fact::new("first_claim", "Moment of the first claim", first.and_then(|look| self.moment(look))),
            Fact::new("claimed_after", "Readings at the first claim", first.map(|look| look.readings)),
            Fact::new("looks_made", "Looks made", made),
            Fact::new("looks_planned", "Looks planned", looks.len()),
            Fact::new("information", "Information so far, as a share of that at the horizon", latest.information),
            Fact::new("spent", "Risk spent so far", latest.spent),
            Fact::new("left", "Risk left to spend", (risk - latest.spent).max(0.0)),
            Fact::new("next_look", "Readings at the next look", next.map(|look| look.readings)),
            Fact::new("next_boundary", "Boundary at the next look", next.and_then(|look| look.least)),
        ]
    }

    fn caution(&self, have: usize) -> Option<String> {
        let (made, looks) = (self.paths.made(), self.boundary.looks());
        let latest = looks[made - 1].readings;
        let next = looks.get(made)?;
        (have > latest).then(|| {
            format!(
                "The plan has no look between readings {latest} and {}; what stands here is as of reading {latest}.",
                next.readings
            )
        })
    }

    fn table(&self) -> Table {
        let columns = vec![
            Column { key: "look", label: "Look" },
            Column { key: "readings", label: "Readings" },
            Column { key: "moment", label: "Moment" },
            Column { key: "s", label: "S" },
            Column { key: "lower", label: "Lower boundary" },
            Column { key: "upper", label: "Upper boundary" },
            Column { key: "spent", label: "Risk spent by then" },
            Column { key: "crossed", label: "Crossed" },
        ];
        let row = |(number, look): (usize, &Look)| -> Vec<Datum> {
            let boundary = |counts: bool, sign: i64| look.least.filter(|_| counts).map(|least| sign * least);
            let crossed = match self.crossed(number) {
                Some(Direction::Rising) => "upper",
                Some(_) => "lower",
                None => "",
            };
            vec![
                (number + 1).into(),
                look.readings.into(),
                self.moment(look).into(),
                self.score(number).into(),
                boundary(self.seek != Seek::Rising, -1).into(),
                boundary(self.seek != Seek::Falling, 1).into(),
                look.spent.into(),
                crossed.into(),
            ]
        };
        Table {
            caption: "S and its boundary at every look, those to come included".into(),
            rows: self.boundary.looks().iter().enumerate().map(row).collect(),
            columns,
        }
    }
}
