//! Whether a column of a table is an indicator, and if not, why not.

use std::collections::HashMap;

use super::cells::Packed;
use super::course::Course;
use super::kind::Kind;
use super::table::Column;
use super::view::{Mostly, View};
use super::words;
use crate::reading::{Cell, Scale, understand};

/// So many different words may be grades whose order is asked for; more are free text.
const MOST_GRADES: usize = 9;

/// What a column is.
#[derive(Clone, Debug, PartialEq)]
pub enum Role {
    /// Readings.
    Readings,
    /// No indicator, and why; nothing is said of a column where nothing stands.
    LeftOut(Option<&'static str>),
}

const fn left_out(why: &'static str) -> Role {
    Role::LeftOut(Some(why))
}

/// Decides what a column is. `dated` tells whether the rows have moments, `is_first` whether it is the table's first.
pub fn role(view: View<'_>, column: &Column, rows: &[u32], dated: bool, is_first: bool) -> Role {
    let heading = column.heading.name.as_str();
    let look = &column.look;
    if look.present() == 0 {
        return Role::LeftOut((!heading.is_empty()).then_some("it holds no readings"));
    }
    if heading.is_empty() && !dated {
        return left_out("it has neither a heading nor dates beside it");
    }
    if look.count(Kind::Code) * 2 > look.present() {
        return left_out("it holds numbers that name something, such as telephone numbers or codes");
    }
    match look.mostly() {
        Mostly::Nothing => Role::LeftOut(None),
        Mostly::Moments => left_out("it holds dates or periods"),
        Mostly::Both => left_out("it mixes numbers with words"),
        Mostly::Numbers => numbers(view, column, rows, dated, is_first),
        Mostly::Words => words(view, column, rows),
    }
}

fn numbers(view: View<'_>, column: &Column, rows: &[u32], dated: bool, is_first: bool) -> Role {
    let heading = column.heading.name.as_str();
    if words::names_running_total(heading) {
        return left_out("a running total carries all earlier readings along and nearly always rises");
    }
    if words::names_change(heading) {
        return left_out("it holds differences from an earlier reading, not readings");
    }
    let times = column.look.count(Kind::Duration) * 2 > column.look.present();
    if dated && times && words::names_times_of_day(heading) {
        return left_out("it holds times of day");
    }
    let (codes, calendar, set) = (words::names_codes(heading), words::names_calendar(heading), words::names_set_level(heading));
    let long_number = matches!(rows.first().map(|&row| view.get(row, column.column)), Some(Packed::Number(n)) if n >= 1e9);
    if !(codes || calendar || set || is_first || heading.is_empty() || long_number) {
        return Role::Readings;
    }
    let Some(course) = Course::of(view, column.column, rows.iter().copied()) else { return Role::Readings };
    let several = course.count() >= 3;
    if codes && course.is_whole() {
        return left_out("its numbers name something");
    }
    if dated && calendar && course.is_whole() && (course.is_years() || course.is_within(0.0, 366.0)) {
        return left_out("it repeats the calendar");
    }
    if dated && (heading.is_empty() || is_first) && course.counts_rows() {
        return left_out("it counts the rows");
    }
    if set && several && course.distinct() <= 1 + course.count() / 10 {
        return left_out("it holds a level that is set, not read");
    }
    if course.is_as_long_as_codes() {
        return left_out("its numbers are as long as codes");
    }
    Role::Readings
}

fn words(view: View<'_>, column: &Column, rows: &[u32]) -> Role {
    let heading = column.heading.name.as_str();
    if words::names_notes(heading) {
        return left_out("it holds notes");
    }
    let mut tally: HashMap<u32, usize> = HashMap::new();
    for &row in rows {
        let Packed::Text(text) = view.get(row, column.column) else { continue };
        if !view.kind(row, column.column).is_absent() {
            *tally.entry(text).or_default() += 1;
        }
    }
    let words: Vec<Cell> = tally.keys().take(MOST_GRADES * 4).map(|&text| Cell::text(view.cells.text(text))).collect();
    if words.iter().all(|word| words::is_weekday(&word.quote())) {
        return left_out("it names the days of the week");
    }
    let few = tally.len() <= MOST_GRADES * 4;
    let usual = few && matches!(understand(&words, None), Ok((_, Scale::Graded(_), _)));
    if usual && !(tally.len() == 1 && words::names_things(heading)) {
        return Role::Readings;
    }
    if words::names_things(heading) {
        return left_out("it names who or what the row is about");
    }
    if tally.len() == 1 {
        return left_out("it says the same in every row");
    }
    let total: usize = tally.values().sum();
    if words::names_grades(heading) && tally.len() <= MOST_GRADES && total >= tally.len() * 2 {
        return Role::Readings;
    }
    left_out("it holds words; if they are grades, name the column and the grades in the plan")
}
