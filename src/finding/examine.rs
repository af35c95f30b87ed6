//! The one use case that everything calls: a series and a request become a finding.

use super::family::{Adjustment, adjust};
use super::{Conclusion, Request, Wanted, Word, conclusion, sentence};
use crate::method::{Card, Outcome, Question, Refusal};
use crate::reading::Series;

/// What a test says of a series.
#[derive(Clone, Debug)]
pub struct Finding {
    /// The test's card.
    pub card: &'static Card,
    /// What was sought, and the accepted risk.
    pub question: Question,
    /// Which direction is good.
    pub wanted: Wanted,
    /// What the test found, or why it does not apply. A refusal is a result, not an error.
    pub result: Result<Outcome, Refusal>,
    /// The p-value adjusted for the indicators judged together with this one.
    pub adjusted: Option<Adjusted>,
    /// What is concluded.
    pub conclusion: Conclusion,
}

/// A p-value adjusted for a family of indicators.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Adjusted {
    /// The adjusted p.
    pub p: f64,
    /// How many indicators were judged together, this one included.
    pub family: usize,
    /// The adjustment.
    pub by: Adjustment,
}

impl Finding {
    /// A finding that the test does not apply, for a reason that came up before the test was run.
    pub fn declined(request: &Request, refusal: Refusal) -> Self {
        Finding::new(request, Err(refusal))
    }

    fn new(request: &Request, result: Result<Outcome, Refusal>) -> Self {
        let mut finding = Finding {
            card: request.test.card(),
            question: request.question.clone(),
            wanted: request.wanted,
            result,
            adjusted: None,
            conclusion: Conclusion { word: Word::Declined, sentence: String::new() },
        };
        finding.conclude();
        finding
    }

    /// The p-value that the conclusion rests on.
    pub fn deciding_p(&self) -> Option<f64> {
        self.adjusted.map(|adjusted| adjusted.p).or_else(|| self.result.as_ref().ok().map(|outcome| outcome.p.value))
    }

    /// Whether a trend was shown in the direction that is not wanted.
    pub fn needs_attention(&self) -> bool {
        self.wanted.welcomes(self.conclusion.word.direction()) == Some(false)
    }

    fn conclude(&mut self) {
        let word = match (&self.result, self.deciding_p()) {
            (Ok(outcome), Some(p)) => conclusion::word(outcome, self.card.claim, &self.question, p),
            (Err(Refusal::TooFewReadings { .. }), _) => Word::TooFew,
            _ => Word::Declined,
        };
        self.conclusion = Conclusion { word, sentence: String::new() };
        self.conclusion.sentence = sentence::of(self);
    }
}

/// Judges one series by itself.
pub fn examine(series: &Series, request: &Request) -> Finding {
    Finding::new(request, request.test.judge(series, &request.question))
}

/// Adjusts findings for being judged together. Findings without a p-value do not count in the family.
pub fn examine_together<'a>(findings: impl IntoIterator<Item = &'a mut Finding>, adjustment: Adjustment) {
    let mut judged: Vec<(f64, &mut Finding)> =
        findings.into_iter().filter_map(|finding| Some((finding.result.as_ref().ok()?.p.value, finding))).collect();
    let own: Vec<f64> = judged.iter().map(|(p, _)| *p).collect();
    for ((_, finding), p) in judged.iter_mut().zip(adjust(&own, adjustment)) {
        finding.adjusted = Some(Adjusted { p, family: own.len(), by: adjustment });
        finding.conclude();
    }
}
