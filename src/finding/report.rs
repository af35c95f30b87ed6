//! A finding as headings, facts, tables and remarks, ready for any form of reply.

use super::examine::Finding;
use crate::comparison::Pairings;
use crate::method::{Column, Datum, Evidence, Fact, Table};
use crate::reading::{Series, Understood};

/// The reply contract, independent of its form.
#[derive(Clone, Debug, PartialEq)]
pub struct Report {
    /// The test's key.
    pub method: &'static str,
    /// The test's published name.
    pub method_title: &'static str,
    /// The indicator's name.
    pub indicator: String,
    /// The conclusion's word.
    pub conclusion: &'static str,
    /// The conclusion's sentence.
    pub sentence: String,
    /// The p-value, if the test gave one.
    pub p: Option<f64>,
    /// How p was got: `exact` or the approximation's name.
    pub p_by: Option<String>,
    /// The test statistic's name and value.
    pub statistic: Option<(&'static str, f64)>,
    /// All facts by name.
    pub facts: Vec<Fact>,
    /// The evidence as tables.
    pub evidence: Vec<Table>,
    /// What to bear in mind.
    pub cautions: Vec<String>,
    /// What was understood of the readings.
    pub understood: Vec<Fact>,
}

impl Report {
    /// Makes a report of a finding.
    pub fn new(series: &Series, understood: &Understood, finding: &Finding) -> Self {
        let evidence = finding.result.iter().flat_map(|outcome| &outcome.evidence);
        let evidence = evidence.map(|evidence| table(evidence, series)).collect();
        Report { evidence, ..Report::without_evidence(series, understood, finding) }
    }

    /// Makes a report that has no tables, for where a fact or two are wanted.
    pub fn without_evidence(series: &Series, understood: &Understood, finding: &Finding) -> Self {
        let outcome = finding.result.as_ref().ok();
        let mut facts = vec![
            Fact::new("readings", "Readings", series.len()),
            Fact::new("missing", "Readings without a value", understood.missing.len()),
            Fact::new("readings_used", "Readings used", outcome.map(|outcome| outcome.readings_used)),
            Fact::new("seek", "Change that counts as evidence", finding.question.seek.word()),
            Fact::new("risk", "Accepted risk", finding.question.risk.0),
        ];
        if let Some(adjusted) = finding.adjusted {
            facts.push(Fact::new("p_adjusted", "p adjusted for the indicators judged together", adjusted.p));
            facts.push(Fact::new("family", "Indicators judged together", adjusted.family));
        }
        facts.extend(outcome.iter().flat_map(|outcome| outcome.facts.iter().cloned()));
        Report {
            method: finding.card.key,
            method_title: finding.card.title,
            indicator: series.name.clone(),
            conclusion: finding.conclusion.word.as_str(),
            sentence: finding.conclusion.sentence.clone(),
            p: outcome.map(|outcome| outcome.p.value),
            p_by: outcome.map(|outcome| outcome.p.by.to_string()),
            statistic: outcome.map(|outcome| (outcome.statistic.name, outcome.statistic.value)),
            facts,
            evidence: Vec::new(),
            cautions: outcome.map(|outcome| outcome.cautions.clone()).unwrap_or_default(),
            understood: echo(series, understood),
        }
    }

    /// One fact by name; the headings of the report are facts too.
    pub fn fact(&self, key: &str) -> Option<Datum> {
        Some(match key {
            "method" => self.method.into(),
            "indicator" => self.indicator.clone().into(),
            "conclusion" => self.conclusion.into(),
            "sentence" => self.sentence.clone().into(),
            "p" => self.p.into(),
            "p_by" => self.p_by.clone().into(),
            "statistic" => self.statistic.map(|(_, value)| value).into(),
            _ => return self.facts.iter().find(|fact| fact.key == key).map(|fact| fact.value.clone()),
        })
    }

    /// The names that [`Report::fact`] knows.
    pub fn fact_names(&self) -> Vec<&'static str> {
        let headings = ["conclusion", "sentence", "p", "p_by", "statistic", "method", "indicator"];
        headings.into_iter().chain(self.facts.iter().map(|fact| fact.key)).collect()
    }
}

fn table(evidence: &Evidence, series: &Series) -> Table {
    match evidence {
        Evidence::Table(table) => table.clone(),
        Evidence::Pairings(pairings) => pairings_table(pairings, series),
    }
}

fn pairings_table(pairings: &Pairings, series: &Series) -> Table {
    let weighted = pairings.list.iter().any(|pairing| pairing.weight != 1);
    let mut columns = vec![
        Column { key: "pair", label: "Pair" },
        Column { key: "earlier", label: "Earlier reading" },
        Column { key: "earlier_moment", label: "Its moment" },
        Column { key: "earlier_value", label: "Its value" },
        Column { key: "later", label: "Later reading" },
        Column { key: "later_moment", label: "Its moment" },
        Column { key: "later_value", label: "Its value" },
        Column { key: "sign", label: "Sign of the difference" },
    ];
    if weighted {
        columns.push(Column { key: "weight", label: "Weight" });
    }
    if series.blocks.is_some() {
        columns.push(Column { key: "block", label: "Block" });
    }
    let moment = |index: usize| match series.moments.kind() {
        crate::reading::moment::MomentKind::Position => Datum::from(index + 1),
        _ => series.moments.label(index).into(),
    };
    let rows = pairings.list.iter().enumerate().map(|(row, pairing)| {
        let (earlier, later) = (pairing.earlier as usize, pairing.later as usize);
        let mut cells: Vec<Datum> = vec![
            (row + 1).into(),
            (earlier + 1).into(),
            moment(earlier),
            Datum::of_reading(series, earlier),
            (later + 1).into(),
            moment(later),
            Datum::of_reading(series, later),
            pairing.sign.into(),
        ];
        if weighted {
            cells.push(pairing.weight.into());
        }
        if let Some(blocks) = &series.blocks {
            cells.push(blocks.label(blocks.block(earlier)).into());
        }
        cells
    });
    Table { caption: "Pairings of an earlier and a later reading".into(), rows: rows.collect(), columns }
}

/// What was understood, said back.
fn echo(series: &Series, understood: &Understood) -> Vec<Fact> {
    let places: Vec<String> =
        understood.missing.iter().map(|reading| format!("{} ({})", reading.index + 1, reading.why)).collect();
    let moments = match series.moments.kind() {
        crate::reading::moment::MomentKind::Position => "none sent; positions 1, 2, 3, ... stand in",
        crate::reading::moment::MomentKind::Date => "dates or calendar periods",
        crate::reading::moment::MomentKind::Number => "numbers",
        crate::reading::moment::MomentKind::Label => "words in the order they came",
    };
    let numbers: Vec<f64> = series.values.iter().filter_map(|value| value.number()).collect();
    let ends = |pick: fn(f64, f64) -> f64| numbers.iter().copied().reduce(pick);
    let mut echo = vec![
        Fact::new("readings", "Readings", understood.readings),
        Fact::new("missing", "Without a value", understood.missing.len()),
        Fact::new(
            "missing_at",
            "Positions without a value",
            if places.is_empty() { Datum::Nothing } else { places.join(", ").into() },
        ),
        Fact::new("limits", "Known only as limits", understood.censored),
        Fact::new("moments", "Moments", moments),
        Fact::new("first", "First reading", (!series.is_empty()).then(|| series.show(0))),
        Fact::new("last", "Last reading", (!series.is_empty()).then(|| series.show(series.len() - 1))),
    ];
    match &understood.grades {
        Some(grades) => {
            echo.push(Fact::new("grades", "Grades, lowest first", grades.to_string()));
            echo.push(Fact::new(
                "grades_by",
                "Order of the grades",
                if understood.grades_assumed { "assumed" } else { "stated" },
            ));
        }
        None => {
            echo.push(Fact::new("lowest", "Lowest value", ends(f64::min)));
            echo.push(Fact::new("highest", "Highest value", ends(f64::max)));
        }
    }
    if understood.percentages > 0 {
        echo.push(Fact::new("percentages", "Percentages, kept as fractions", understood.percentages));
    }
    if let Some(unit) = &series.unit {
        echo.push(Fact::new("unit", "Unit", unit.clone()));
    }
    echo
}
