//! Words by which people head columns and close tables. Common practice in English-language workbooks.

/// Rows below a table that sum it up.
pub fn is_summary(text: &str) -> bool {
    const WORDS: [&str; 18] = [
        "total", "totals", "sum", "subtotal", "grand", "average", "averages", "avg", "mean", "median", "min", "minimum", "max",
        "maximum", "count", "std", "stdev", "ytd",
    ];
    let first = text.trim_start().split(|c: char| !c.is_alphanumeric()).next().unwrap_or_default().to_lowercase();
    WORDS.contains(&first.as_str())
}

/// Headings of a column that tells when; plain whole numbers count as moments only under one of them.
pub fn is_moment_heading(text: &str) -> bool {
    const WORDS: [&str; 19] = [
        "date",
        "day",
        "week",
        "wk",
        "month",
        "quarter",
        "year",
        "period",
        "time",
        "when",
        "moment",
        "visit",
        "round",
        "hour",
        "shift",
        "sample",
        "run",
        "inspection",
        "term",
    ];
    words_of(text).any(|word| WORDS.contains(&word.as_str()))
}

/// Headings of a column that only numbers or names its rows.
pub fn is_label_heading(text: &str) -> bool {
    const WORDS: [&str; 17] = [
        "id",
        "no",
        "nr",
        "number",
        "code",
        "ref",
        "reference",
        "key",
        "phone",
        "telephone",
        "zip",
        "postcode",
        "room",
        "row",
        "index",
        "isbn",
        "sku",
    ];
    let all: Vec<String> = words_of(text).collect();
    text.trim() == "#" || !all.is_empty() && all.iter().any(|word| WORDS.contains(&word.as_str())) && all.len() <= 2
}

/// Headings of a column that names the indicator in a long table.
pub fn is_indicator_heading(text: &str) -> bool {
    const WORDS: [&str; 11] =
        ["indicator", "measure", "metric", "kpi", "item", "parameter", "variable", "series", "category", "aspect", "question"];
    words_of(text).any(|word| WORDS.contains(&word.as_str()))
}

/// Headings under which words are grades rather than notes.
pub fn is_grade_heading(text: &str) -> bool {
    const WORDS: [&str; 14] = [
        "grade",
        "grading",
        "rating",
        "score",
        "level",
        "condition",
        "state",
        "quality",
        "mood",
        "behaviour",
        "behavior",
        "assessment",
        "impression",
        "verdict",
    ];
    words_of(text).any(|word| WORDS.contains(&word.as_str()))
}

fn words_of(text: &str) -> impl Iterator<Item = String> {
    text.split(|c: char| !c.is_alphanumeric())
        .filter(|word| !word.is_empty())
        .map(str::to_lowercase)
        .collect::<Vec<_>>()
        .into_iter()
}

/// Splits `Wait (min)` or `Rainfall [mm]` into the name and the unit.
pub fn name_and_unit(heading: &str) -> (String, Option<String>) {
    let heading = heading.split_whitespace().collect::<Vec<_>>().join(" ");
    for (open, close) in [('(', ')'), ('[', ']')] {
        if let Some(rest) = heading.strip_suffix(close)
            && let Some((name, unit)) = rest.rsplit_once(open)
            && !name.trim().is_empty()
            && !unit.trim().is_empty()
        {
            return (name.trim().to_owned(), Some(unit.trim().to_owned()));
        }
    }
    (heading, None)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn headings_are_told_apart() {
        assert!(is_summary("Total") && is_summary("Average of year") && !is_summary("Summary visits") && !is_summary("North"));
        assert!(is_moment_heading("Week no.") && is_moment_heading("Date") && !is_moment_heading("Update"));
        assert!(is_label_heading("ID") && is_label_heading("Room no") && !is_label_heading("Number of complaints received"));
        assert_eq!(name_and_unit("Wait (min)"), ("Wait".into(), Some("min".into())));
        assert_eq!(name_and_unit(" Rainfall  [mm] "), ("Rainfall".into(), Some("mm".into())));
        assert_eq!(name_and_unit("(all)"), ("(all)".into(), None));
    }
}
