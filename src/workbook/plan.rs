//! Which indicators of a workbook are judged, how, and what is wanted: the plan as it is written.
//!
//! Everything is kept as the text that stands in the cells. It is interpreted when the indicator is judged, so that a
//! wrong entry is answered in its own row and the others are still judged.

/// One row of the plan.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct PlanRow {
    /// Whether the indicator is judged: `yes` or `no`.
    pub judge: String,
    /// The indicator's name.
    pub indicator: String,
    /// Its readings, as a reference such as `Ratings!B2:B53`.
    pub cells: String,
    /// Its moments, as a reference, or nothing.
    pub moments: String,
    /// For a long table: the column of the indicators' names as a reference; else nothing.
    pub names: String,
    /// For graded readings: the grades, lowest first.
    pub grades: String,
    /// The direction that is good.
    pub wanted: String,
    /// The change that counts as evidence.
    pub seek: String,
    /// The test's key.
    pub test: String,
    /// The accepted risk.
    pub risk: String,
    /// Further parameters of the test as `name=value; name=value`.
    pub options: String,
    /// Where the choices come from: found, assumed, stated.
    pub origin: String,
}

/// The whole plan.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Plan {
    /// One row an indicator.
    pub rows: Vec<PlanRow>,
    /// How p-values are adjusted over the plan; nothing means Holm's.
    pub adjustment: String,
}
