//! Every label of the new sheets, so that another language is another file.

pub const CONCLUSIONS: &str = "Trend conclusions";
pub const STATISTICS: &str = "Trend statistics";
pub const PAIRINGS: &str = "Trend pairings";
pub const CHARTS: &str = "Trend charts";
pub const PLAN: &str = "Trend plan";
pub const LOG: &str = "Trend log";

pub const LOG_TITLE: &str =
    "What was said at each run. Rows are only ever added; the checksum changes when a reading was corrected.";
pub const LOG_COLUMNS: [(&str, f64); 11] = [
    ("When", 19.0),
    ("Indicator", 30.0),
    ("Cells", 28.0),
    ("Readings", 9.0),
    ("Conclusion", 12.0),
    ("In words", 60.0),
    ("p", 10.0),
    ("p, judged together", 10.0),
    ("Test", 18.0),
    ("Checksum", 18.0),
    ("Program", 16.0),
];

pub const CONCLUSION_COLUMNS: [(&str, f64); 13] = [
    ("Indicator", 22.0),
    ("Conclusion", 12.0),
    ("Wanted?", 11.0),
    ("In words", 48.0),
    ("p", 9.0),
    ("p, judged together", 10.0),
    ("Readings", 9.0),
    ("Missing", 8.0),
    ("Course", 18.0),
    ("How fast", 22.0),
    ("Since about", 12.0),
    ("To bear in mind", 36.0),
    ("Cells", 20.0),
];
/// Between the limits of a slope.
pub const TO: &str = "to";
pub const WANTED: &str = "wanted";
pub const UNWANTED: &str = "not wanted";
pub const NOTHING_FOUND: &str = "No indicator was found to judge.";
pub const LOOKED_FOR: &str = "Looked for: tables with a heading row, a column of dates or periods, and columns of numbers or of words in a known order, with at least two readings each.";
pub const NOTES: &str = "Notes";
pub const WORDS: [(&str, &str); 6] = [
    ("rising, falling", "A trend in this direction is shown at the stated risk."),
    ("level", "The slope is shown to lie within the margin that the plan states."),
    ("not shown", "The readings do not show a trend. That does not show that there is none."),
    ("too few", "No readings of this number could have reached the risk."),
    ("declined", "The test does not apply; the reason is stated."),
    (
        "p",
        "The chance of evidence at least as clear if there were no trend. Small values speak for a trend. The conclusion rests on the value judged together.",
    ),
];
pub const CAUTION: &str = "A conclusion is a statement about these readings, not a diagnosis or a finding of compliance. Where readings concern health, safety or rules, local procedures and licensed practice decide.";

pub const FAMILY_TITLE: &str = "p-values judged together";
pub const FAMILY_COLUMNS: [&str; 6] = ["Indicator", "Test", "p", "Not smaller", "p, judged together", "How p was got"];
pub const FACTS_TITLE: &str = "Facts";
pub const FACT_COLUMNS: [&str; 6] = ["Indicator", "Fact", "Value", "Unit", "Name", "How"];
pub const BY_FORMULA: &str = "formula on the cells";
pub const BY_RISEFALL: &str = "computed by Risefall";

pub const PAIRING_COLUMNS: [(&str, f64); 11] = [
    ("Indicator", 26.0),
    ("Pair", 7.0),
    ("Earlier reading", 9.0),
    ("Its moment", 14.0),
    ("Its value", 12.0),
    ("Later reading", 9.0),
    ("Its moment", 14.0),
    ("Its value", 12.0),
    ("Sign", 7.0),
    ("Weight", 8.0),
    ("Remark", 34.0),
];
pub const READ_AS: &str = "a cell holds text; the value that was read stands here";
pub const NO_PAIRINGS: &str = "No test that compares pairs was used.";

pub const PLAN_COLUMNS: [(&str, f64, &str); 13] = [
    ("Judge", 8.0, "yes: the indicator is judged. no: it is left out."),
    ("Indicator", 26.0, "The name, as the heading has it. Change it as you like."),
    ("Cells", 28.0, "The cells of the readings: one column, oldest first or newest first."),
    ("Moments", 28.0, "The cells of the dates or periods beside the readings, or nothing."),
    ("Names", 24.0, "In a long table: the cells of the indicators' names. Else nothing."),
    ("Grades", 30.0, "For readings that are words: the words, lowest first: poor < fair < good."),
    ("Wanted", 10.0, "Which direction is good: higher, lower or neither. It never changes a p-value."),
    ("Seek", 10.0, "Which change counts as evidence: either, rising or falling. Decide before looking."),
    ("Test", 16.0, "The published test."),
    ("Risk", 8.0, "The accepted chance of claiming a trend where there is none."),
    ("Options", 26.0, "Further parameters of the test: name=value; name=value."),
    ("Origin", 34.0, "Where the choices come from."),
    ("Remark", 44.0, "What is to be said of this row."),
];
/// The list of tests beside the plan.
pub const TEST_COLUMNS: [(&str, f64); 2] = [("Name of the test", 22.0), ("What it asks", 90.0)];
pub const PLAN_TITLE: &str = "What is judged, and how. Edits are obeyed at the next annotation.";
pub const ADJUSTMENT: &str = "Judged together by";
