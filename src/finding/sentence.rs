//! Every English sentence of a conclusion.

use super::examine::Finding;
use super::{Adjustment, Word};
use crate::method::{Claim, Datum, Outcome, Refusal, Seek};

/// A number for reading: up to four significant digits, very small ones as powers of ten.
pub fn number(value: f64) -> String {
    if value == 0.0 || value.fract() == 0.0 && value.abs() < 1e9 {
        return format!("{value}");
    }
    let magnitude = value.abs().log10().floor() as i32;
    if !(-4..9).contains(&magnitude) {
        return format!("{value:.2e}");
    }
    let text = format!("{value:.*}", (3 - magnitude).max(0) as usize);
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A share as a percentage.
pub fn percent(share: f64) -> String {
    format!("{} %", number(share * 100.0))
}

/// The conclusion of a finding in one or two plain sentences.
pub fn of(finding: &Finding) -> String {
    match &finding.result {
        Err(Refusal::TooFewReadings { have, need }) => {
            format!("Too few readings to judge: {have} with a value, at least {need} are needed.")
        }
        Err(refusal) => format!("The test does not apply: {refusal}."),
        Ok(outcome) => judged(finding, outcome),
    }
}

fn judged(finding: &Finding, outcome: &Outcome) -> String {
    let evidence = evidence(outcome);
    let p = p_phrase(finding, outcome);
    let risk = percent(finding.question.risk.0);
    let claim = match finding.conclusion.word {
        Word::Rising => format!("A rise is shown at a risk of {risk}"),
        Word::Falling => format!("A fall is shown at a risk of {risk}"),
        Word::Changed => format!("A change of level is shown at a risk of {risk}"),
        Word::NotRandom => format!("The order of the readings is not random, at a risk of {risk}"),
        Word::TooFew => {
            let smallest = outcome.smallest_p.map(number).unwrap_or_default();
            return format!(
                "Too few readings: even the clearest possible pattern would have given p = {smallest}, above the risk of {risk}."
            );
        }
        _ => {
            let sought = match (finding.card.claim, finding.question.seek) {
                (Claim::Pattern, _) => "A pattern in the order of the readings",
                (Claim::Change, Seek::Either) => "A change of level",
                (Claim::Change, Seek::Rising) => "A change to a higher level",
                (Claim::Change, Seek::Falling) => "A change to a lower level",
                (Claim::Trend, Seek::Either) => "A trend",
                (Claim::Trend, Seek::Rising) => "A rise",
                (Claim::Trend, Seek::Falling) => "A fall",
            };
            return format!("{sought} is not shown{evidence} ({p}). This does not show that there is none.");
        }
    };
    let wanted = match finding.wanted.welcomes(finding.conclusion.word.direction()) {
        Some(true) => " This is the wanted direction.",
        Some(false) => " This is not the wanted direction.",
        None => "",
    };
    format!("{claim}{evidence} ({p}).{wanted}")
}

/// The evidence in a few words, from the facts that the test gives.
fn evidence(outcome: &Outcome) -> String {
    let count = |key: &str| {
        outcome.facts.iter().find(|fact| fact.key == key).and_then(|fact| match fact.value {
            Datum::Integer(count) => Some(count),
            _ => None,
        })
    };
    match (count("rises"), count("falls"), count("pairs")) {
        (Some(rises), Some(falls), Some(pairs)) => {
            let ties = pairs - rises - falls;
            let tied = if ties > 0 { format!(", {ties} tie") } else { String::new() };
            format!(": of {pairs} pairs of an earlier and a later reading {rises} rise, {falls} fall{tied}")
        }
        _ => String::new(),
    }
}

fn p_phrase(finding: &Finding, outcome: &Outcome) -> String {
    let own = format!("p = {}, {}", number(outcome.p.value), outcome.p.by);
    match finding.adjusted {
        Some(adjusted) if adjusted.family > 1 && adjusted.by != Adjustment::None => {
            let others = adjusted.family - 1;
            let plural = if others == 1 { "one other".to_owned() } else { format!("{others} others") };
            format!("{own}; judged together with {plural}, p = {}", number(adjusted.p))
        }
        _ => own,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_read_well() {
        for (value, text) in [
            (0.0078125, "0.007812"),
            (0.05, "0.05"),
            (1e-40, "1.00e-40"),
            (3.0, "3"),
            (0.333333333, "0.3333"),
            (1234.5678, "1235"),
            (12.5, "12.5"),
            (1.0, "1"),
        ] {
            assert_eq!(number(value), text);
        }
    }
}
