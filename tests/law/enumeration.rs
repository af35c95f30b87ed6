//! The exact p against counting every arrangement of short series, one by one.

use risefall::method::{Claim, METHODS, Outcome, Registered, ScaleNeeded, Seek};
use risefall::null_distribution::By;
use risefall::reading::Value;

use crate::inputs::{Input, Ties, both_tails, fact, forms_of_p};
use crate::random::Random;

/// What is equally probable if there is no trend.
enum Arrangements {
    /// All orders of the readings.
    Orders,
    /// All orders within each block.
    OrdersWithinBlocks,
    /// All ways to exchange the two readings of each pair.
    ExchangesWithinPairs,
    /// All ways to place the events among the trials.
    EventsAmongTrials,
    /// All moments for each event.
    MomentsOfEvents,
}

/// How strongly an outcome speaks for a rise or a smooth order, and how strongly for a fall or an alternating order.
type Evidence = fn(&Outcome) -> (f64, f64);

const BY_STATISTIC: Evidence = |outcome| (outcome.statistic.value, -outcome.statistic.value);
const BY_STATISTIC_TURNED: Evidence = |outcome| (-outcome.statistic.value, outcome.statistic.value);
const BY_K: Evidence = |outcome| (fact(outcome, "k_rising").unwrap(), fact(outcome, "k_falling").unwrap());
const BY_RISES_AND_FALLS: Evidence = |outcome| (fact(outcome, "rises").unwrap(), fact(outcome, "falls").unwrap());

/// Which arrangements a test counts, and what makes one of them more extreme than another.
///
/// Tests that are not listed count all orders, if order is enough for them.
fn arrangements(method: &Registered) -> Option<(Arrangements, Evidence)> {
    Some(match (method.card.key, method.card.scale) {
        ("cox-stuart", _) => (Arrangements::ExchangesWithinPairs, BY_STATISTIC),
        ("page" | "seasonal-kendall" | "regional-kendall", _) => (Arrangements::OrdersWithinBlocks, BY_STATISTIC),
        ("cochran-armitage", _) => (Arrangements::EventsAmongTrials, BY_STATISTIC),
        ("poisson-trend", _) => (Arrangements::MomentsOfEvents, BY_STATISTIC),
        ("reverse-arrangements", _) => (Arrangements::Orders, BY_STATISTIC_TURNED),
        ("pettitt", _) => (Arrangements::Orders, BY_K),
        ("difference-signs", _) => (Arrangements::Orders, BY_RISES_AND_FALLS),
        (key, _) if EXEMPT.iter().any(|(name, _)| *name == key) => return None,
        (_, ScaleNeeded::Ordered) if method.card.claim == Claim::Pattern => (Arrangements::Orders, BY_STATISTIC_TURNED),
        (_, ScaleNeeded::Ordered) if method.card.claim == Claim::Trend => (Arrangements::Orders, BY_STATISTIC),
        _ => return None,
    })
}

/// Tests whose p is not a count of arrangements by their own statistic, and why.
const EXEMPT: [(&str, &str); 5] = [
    (
        "planned-looks",
        "p belongs to the whole path, not to the last S; all paths are counted in tests/published/planned_looks.rs",
    ),
    ("watch", "p is an upper limit; all orders are counted in tests/published/watch.rs"),
    ("partial-kendall", "p is that of the normal approximation; its parts are checked by hand in tests/published"),
    ("laplace", "times are continuous; checked against exact rationals in null_distribution::sum_of_uniforms"),
    ("military-handbook", "times are continuous; checked against high precision in null_distribution::chi_square"),
];

#[test]
fn exact_p_is_the_share_of_all_arrangements() {
    for (number, method) in METHODS.iter().enumerate() {
        let Some((arrangements, evidence)) = arrangements(method) else { continue };
        let mut random = Random::seeded(1_000 + number as u64);
        let mut checked = 0;
        for (n, rounds) in [(2, 4), (3, 4), (5, 4), (6, 4), (7, 2), (8, 1)] {
            for round in 0..rounds {
                let ties = if round % 2 == 0 { Ties::Heavy } else { Ties::None };
                let input = small(method, &mut random, n, ties);
                let Ok(outcome) = input.with(method, "p_by", "exact").judge(method, Seek::Either) else { continue };
                if outcome.p.by == By::Exact {
                    // The statistic of each arrangement is wanted, not its p, so the quickest p will do.
                    let quick = forms_of_p(method).into_iter().find(|form| ["normal", "approximation"].contains(form));
                    let input = input.with(method, "p_by", quick.unwrap_or("exact"));
                    check(method, &input, &outcome, &arrangements, evidence);
                    checked += 1;
                }
            }
        }
        assert!(checked >= 8, "{}: only {checked} inputs could be judged exactly", method.card.key);
    }
}

/// Random readings small enough that all arrangements can be counted.
fn small(method: &Registered, random: &mut Random, n: usize, ties: Ties) -> Input {
    let mut input = Input::random(method, random, n, ties);
    if method.card.scale == ScaleNeeded::Counts {
        let trials = input.beside.iter_mut().find(|(name, _)| *name == "trials");
        match trials {
            Some((_, trials)) => {
                trials.iter_mut().for_each(|size| *size = 1.0 + random.whole(3) as f64);
                input.values = trials.iter().map(|&size| Value::Number(random.whole(size as usize + 1) as f64)).collect();
            }
            None => input.values = (0..n).map(|_| Value::Number((random.whole(4) / 2) as f64)).collect(),
        }
    }
    input
}

/// Judges every arrangement and compares the shares that are at least as extreme with the tails.
fn check(method: &Registered, input: &Input, outcome: &Outcome, arrangements: &Arrangements, evidence: Evidence) {
    let observed = evidence(outcome);
    let (mut all, mut as_rising, mut as_falling) = (0.0, 0.0, 0.0);
    let mut visit = |arranged: &Input| {
        let arranged = arranged.judge(method, Seek::Either).unwrap_or_else(|refusal| panic!("{}: {refusal}", method.card.key));
        let (rising, falling) = evidence(&arranged);
        all += 1.0;
        as_rising += f64::from(u8::from(rising >= observed.0 - 1e-9));
        as_falling += f64::from(u8::from(falling >= observed.1 - 1e-9));
    };
    let n = input.values.len();
    match arrangements {
        Arrangements::Orders => orders(&|a, b| input.values[a] == input.values[b], &mut (0..n).collect(), 0, &mut |order| {
            visit(&input.rearranged(order))
        }),
        Arrangements::OrdersWithinBlocks => {
            let blocks = input.blocks.clone().unwrap();
            let alike = |a: usize, b: usize| input.values[a] == input.values[b] && blocks[a] == blocks[b];
            orders(&alike, &mut (0..n).collect(), 0, &mut |order| {
                if order.iter().enumerate().all(|(place, &index)| blocks[place] == blocks[index]) {
                    visit(&input.rearranged(order));
                }
            });
        }
        Arrangements::ExchangesWithinPairs => {
            let lag = n.div_ceil(2);
            for exchanged in 0..1_usize << (n / 2) {
                let mut order: Vec<usize> = (0..n).collect();
                (0..n / 2).filter(|pair| exchanged >> pair & 1 == 1).for_each(|pair| order.swap(pair, pair + lag));
                visit(&input.rearranged(&order));
            }
        }
        Arrangements::EventsAmongTrials => {
            let trials: Vec<usize> = input.beside[0].1.iter().map(|&size| size as usize).collect();
            let moment: Vec<usize> = trials.iter().enumerate().flat_map(|(moment, &size)| vec![moment; size]).collect();
            let events = total(input);
            for chosen in (0..1_usize << moment.len()).filter(|chosen| chosen.count_ones() as usize == events) {
                let at = (0..moment.len()).filter(|trial| chosen >> trial & 1 == 1).map(|trial| moment[trial]);
                visit(&counted(input, at));
            }
        }
        Arrangements::MomentsOfEvents => {
            let events = total(input);
            for outcome in 0..n.pow(events as u32) {
                let at = (0..events).map(|event| outcome / n.pow(event as u32) % n);
                visit(&counted(input, at));
            }
        }
    }
    let (rising, falling) = both_tails(outcome).unwrap();
    for (got, count, tail) in [(rising, as_rising, "rising"), (falling, as_falling, "falling")] {
        let expected: f64 = count / all;
        assert!((got - expected).abs() <= 1e-11 * expected, "{}, {tail}: {got} and {expected}, {input:?}", method.card.key);
    }
}

fn total(input: &Input) -> usize {
    input.values.iter().filter_map(|value| value.number()).sum::<f64>() as usize
}

/// The input with events counted at the given moments.
fn counted(input: &Input, events: impl Iterator<Item = usize>) -> Input {
    let mut counts = vec![0.0; input.values.len()];
    events.for_each(|moment| counts[moment] += 1.0);
    Input { values: counts.into_iter().map(Value::Number).collect(), ..input.clone() }
}

/// Visits all orders of a list that look different; each of them stands for as many as any other.
fn orders(alike: &dyn Fn(usize, usize) -> bool, list: &mut Vec<usize>, done: usize, visit: &mut dyn FnMut(&[usize])) {
    if done == list.len() {
        return visit(list);
    }
    for index in done..list.len() {
        if list[done..index].iter().any(|&other| alike(other, list[index])) {
            continue;
        }
        list.swap(done, index);
        orders(alike, list, done + 1, visit);
        list.swap(done, index);
    }
}
