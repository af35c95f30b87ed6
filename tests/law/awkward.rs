//! Input that nobody should send, and somebody will: a finding comes back, and every number in it is a number.

use std::panic::{AssertUnwindSafe, catch_unwind};

use risefall::finding::{Request, Wanted, examine};
use risefall::method::question::Question;
use risefall::method::{Datum, Evidence, METHODS, Registered, Seek};
use risefall::reading::{Missing, Value};

use crate::inputs::{Input, Ties, forms_of_p};
use crate::random::Random;

const BLANK: Value = Value::Missing(Missing::Blank);

fn awkward() -> Vec<Vec<Value>> {
    let number = Value::Number;
    let mut lists = vec![
        vec![],
        vec![number(1.0)],
        vec![number(1.0), number(2.0)],
        vec![number(2.0), number(1.0)],
        vec![number(1.0); 2],
        vec![number(0.0); 9],
        vec![number(7.0); 16],
        vec![BLANK; 8],
        vec![BLANK, number(3.0), BLANK],
        vec![BLANK, number(3.0), BLANK, number(4.0), BLANK, number(2.0), number(9.0), BLANK],
        vec![number(f64::MAX), number(f64::MIN), number(f64::MAX), number(0.0), number(f64::MIN)],
        vec![number(f64::MIN_POSITIVE), number(5e-324), number(0.0), number(-5e-324), number(1e-300)],
        vec![number(1e300), number(2e300), number(3e300), number(1e308), number(1.7e308)],
        vec![number(1e15), number(1e15 + 1.0), number(1e15 + 2.0), number(1e15 - 1.0)],
        vec![Value::Below(0.5); 6],
        vec![Value::Below(0.5), number(0.3), Value::Below(0.1), Value::Above(9.0), number(4.0), Value::Above(2.0), number(0.4)],
        vec![Value::Above(f64::MAX), Value::Below(f64::MIN), number(1.0), number(2.0)],
        vec![number(-3.0), number(-2.0), number(-2.0), number(-1.0)],
        vec![number(0.1), number(0.2), number(0.30000000000000004), number(0.3)],
        (1..=9).map(|x| number(f64::from(x))).collect(),
        (1..=9).rev().map(|x| number(f64::from(x))).collect(),
        (0..10).map(|x| number(f64::from(x % 2))).collect(),
        (0..60).map(|x| number(f64::from(x))).collect(),
    ];
    let mut random = Random::seeded(99);
    for _ in 0..24 {
        let n = random.whole(10);
        let value = |random: &mut Random| match random.whole(8) {
            0 => BLANK,
            1 => Value::Below(random.whole(4) as f64),
            2 => Value::Above(random.whole(4) as f64),
            _ => number(random.whole(5) as f64),
        };
        lists.push((0..n).map(|_| value(&mut random)).collect());
    }
    lists
}

/// Awkward readings as they are, and in the surroundings that the test needs.
fn surroundings(method: &Registered, values: &[Value], random: &mut Random) -> Vec<Input> {
    let n = values.len();
    let suited = Input::random(method, random, n, Ties::Heavy);
    let mut inputs = vec![Input::plain(values.to_vec())];
    let moments: Vec<f64> = (0..n).map(|index| (index / 2) as f64).collect();
    inputs.push(Input { moments: Some(moments.clone()), ..Input::plain(values.to_vec()) });
    inputs.push(Input { moments: Some(vec![0.0; n]), ..Input::plain(values.to_vec()) });
    inputs.push(Input {
        moments: Some(moments),
        blocks: Some((0..n).map(|index| index % 2).collect()),
        ..Input::plain(values.to_vec())
    });
    inputs.push(Input { blocks: Some((0..n).collect()), ..Input::plain(values.to_vec()) });
    if suited.values.len() == n {
        inputs.push(Input { values: values.to_vec(), ..suited.clone() });
        for (index, (name, _)) in suited.beside.iter().enumerate() {
            for list in [vec![0.0; n], vec![-1.0; n], vec![1e15; n], vec![1e300; n], vec![0.5; n], vec![], vec![9.0; n + 1]] {
                let mut input = Input { values: values.to_vec(), ..suited.clone() };
                input.beside[index] = (name, list);
                inputs.push(input);
            }
        }
    }
    inputs
}

#[test]
fn nothing_panics_and_every_number_is_one() {
    let mut random = Random::seeded(7);
    for method in METHODS {
        for values in awkward() {
            for input in surroundings(method, &values, &mut random) {
                for p_by in forms_of_p(method) {
                    let input = input.with(method, "p_by", p_by).with(method, "draws", "1000");
                    let checked = catch_unwind(AssertUnwindSafe(|| check(method, &input)));
                    assert!(checked.is_ok(), "{}: {input:?}", method.card.key);
                }
            }
        }
    }
}

fn check(method: &Registered, input: &Input) {
    for seek in [Seek::Either, Seek::Rising, Seek::Falling] {
        let test = method.read(&input.arguments()).unwrap();
        let question = Question { seek, ..Question::default() };
        let finding = examine(&input.series(), &Request { test, question, wanted: Wanted::Higher });
        assert!(!finding.conclusion.sentence.is_empty());
        let Ok(outcome) = finding.result else { continue };
        assert!((0.0..=1.0).contains(&outcome.p.value), "p = {}", outcome.p.value);
        assert!(outcome.statistic.value.is_finite(), "{} = {}", outcome.statistic.name, outcome.statistic.value);
        assert!(outcome.smallest_p.is_none_or(|p| (0.0..=1.0).contains(&p)));
        assert!(outcome.readings_used <= input.values.len());
        for fact in &outcome.facts {
            assert!(is_number(&fact.value), "{} = {:?}", fact.key, fact.value);
        }
        for evidence in &outcome.evidence {
            if let Evidence::Table(table) = evidence {
                assert!(table.rows.iter().flatten().all(is_number), "{}: {:?}", table.caption, table.rows);
            }
        }
    }
}

/// Whether a cell holds no infinity and nothing undefined.
fn is_number(datum: &Datum) -> bool {
    !matches!(datum, Datum::Number(number) if !number.is_finite())
}
