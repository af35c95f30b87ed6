//! Dates and periods of the calendar as people write them: `10.02.2025`, `3 Feb 2025`, `2025-W07`, `Q1 2025`, `Jan-24`,
//! `2019/20`; and periods without a year, such as `Week 7`, `Q3` or `March`.
//!
//! A text alone may be read in two ways (`03/04/2025`); the column in which it stands often decides, see [`Forms`].
//! What stays undecided is left as a label, not guessed.

use jiff::civil::{Date, DateTime, ISOWeekDate, Time, Weekday};

use super::cycle::{Cycle, cycle_of_word};
use crate::reading::Cell;

/// How the texts of a column are to be read.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Forms {
    /// Which of two numbers before a year is the day.
    order: DayOrder,
    /// Whether the number after a month's name is a year of two digits.
    short_years: bool,
}

/// Whether `03/04/2025` is the 3rd of April or March the 4th.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
enum DayOrder {
    DayFirst,
    MonthFirst,
    #[default]
    Unknown,
}

impl Forms {
    /// The forms of a column. A day above twelve tells the order; else the order in which time runs in one direction, if
    /// it does so in one only.
    pub fn of(cells: &[Cell]) -> Forms {
        let texts = || {
            cells.iter().filter_map(|cell| match cell {
                Cell::Text(text) => Some(text.as_str()),
                _ => None,
            })
        };
        Forms { order: day_order(texts), short_years: are_short_years(texts) }
    }
}

fn day_order<'a, T: Iterator<Item = &'a str>>(texts: impl Fn() -> T) -> DayOrder {
    for text in texts() {
        let numbers: Vec<u32> = text.split(['/', '-', ' ']).map_while(|part| part.trim().parse().ok()).take(3).collect();
        match numbers[..] {
            [day, month, _] if day > 12 && day <= 31 && month <= 12 => return DayOrder::DayFirst,
            [month, day, _] if day > 12 && day <= 31 && month <= 12 => return DayOrder::MonthFirst,
            _ => {}
        }
    }
    let runs_one_way = |order| {
        let read: Option<Vec<DateTime>> = texts().map(|text| start(text, Forms { order, short_years: false })).collect();
        read.is_some_and(|read| read.is_sorted() || read.iter().rev().is_sorted())
    };
    match (runs_one_way(DayOrder::DayFirst), runs_one_way(DayOrder::MonthFirst)) {
        (true, false) => DayOrder::DayFirst,
        (false, true) => DayOrder::MonthFirst,
        _ => DayOrder::Unknown,
    }
}

/// `Jan-24`, `Feb-24` are months of a year; `Jan 24`, `Jan 31` are days: years stay or go on by one, while months change.
fn are_short_years<'a, T: Iterator<Item = &'a str>>(texts: impl Fn() -> T) -> bool {
    let pairs = || {
        texts().filter_map(|text| match pieces(text)[..] {
            [Piece::Word(word), Piece::Number(year)] if year.len() == 2 => Some((month_number(word)?, year.parse::<i32>().ok()?)),
            _ => None,
        })
    };
    let one_by_one = pairs().zip(pairs().skip(1)).all(|((_, year), (_, next))| (year - next).abs() <= 1);
    let years = || pairs().map(|(_, year)| year);
    let months_change = pairs().zip(pairs().skip(1)).any(|((month, _), (next, _))| month != next);
    one_by_one && (months_change || years().any(|year| year > 31))
}

/// A word or a number within a text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Piece<'a> {
    Word(&'a str),
    Number(&'a str),
}

/// The words and numbers of a text, without names of weekdays and the endings of `3rd` and `10th`.
fn pieces(text: &str) -> Vec<Piece<'_>> {
    let mut found: Vec<Piece<'_>> = Vec::new();
    let mut rest = text;
    while let Some(first) = rest.chars().next() {
        let same = |c: char| c.is_ascii_digit() == first.is_ascii_digit() && c.is_alphanumeric();
        let end = rest.find(|c: char| !same(c)).unwrap_or(rest.len()).max(first.len_utf8());
        let (piece, after) = rest.split_at(end);
        rest = after;
        if first.is_ascii_digit() {
            found.push(Piece::Number(piece));
        } else if first.is_alphabetic() {
            let ending = matches!(found.last(), Some(Piece::Number(_))) && ["st", "nd", "rd", "th"].contains(&piece);
            if !ending && !is_weekday(piece) && piece != "of" && piece != "de" {
                found.push(Piece::Word(piece));
            }
        } else if !(first.is_whitespace() || "-/.,'’–_".contains(first)) {
            return Vec::new();
        }
    }
    found
}

/// The start of a date or of a period with its year; `None` if the text is neither, or undecided.
pub fn start(text: &str, forms: Forms) -> Option<DateTime> {
    let text = text.trim();
    if !text.contains(|c: char| c.is_ascii_digit()) || text.len() > 48 {
        return None;
    }
    if let Ok(moment) = text.parse::<DateTime>() {
        return Some(moment);
    }
    let (date, time) = match text.split_once([' ', 'T']).filter(|_| text.contains(':')) {
        Some(_) => {
            let (date, time) = text.rsplit_once([' ', 'T'])?;
            (date, clock(time)?)
        }
        None => (text, Time::midnight()),
    };
    first_day(date, forms).map(|date| date.to_datetime(time))
}

fn clock(text: &str) -> Option<Time> {
    let mut parts = text.trim().splitn(3, ':').map(|part| part.parse::<i8>().ok());
    let (hour, minute) = (parts.next()??, parts.next()??);
    let second = parts.next().map_or(Some(0), |second| second)?;
    Time::new(hour, minute, second, 0).ok()
}

fn first_day(text: &str, forms: Forms) -> Option<Date> {
    use Piece::{Number, Word};
    if let Ok(date) = text.parse::<Date>() {
        return Some(date);
    }
    let comma_alone = text.contains(',') && !text.contains([' ', '/', '-', '.']);
    match pieces(text)[..] {
        [Number(a), Number(b)] if !comma_alone && (!text.contains('.') || a.len() + b.len() == 6) => {
            let (year, month) = if a.len() == 4 { (a, b) } else { (b, a) };
            Date::new(full_year(year)?, small(month)?, 1).ok()
        }
        [Number(a), Number(b), Number(c)] if a.len() == 4 => Date::new(full_year(a)?, small(b)?, small(c)?).ok(),
        [Number(a), Number(b), Number(c)] => {
            let day_first = text.contains('.') || forms.order == DayOrder::DayFirst;
            let (day, month) = match (day_first, forms.order) {
                (true, _) => (a, b),
                (false, DayOrder::MonthFirst) => (b, a),
                (false, _) => return None,
            };
            Date::new(any_year(c)?, small(month)?, small(day)?).ok()
        }
        [Word(word), Number(year)] | [Number(year), Word(word)] if month_number(word).is_some() => {
            let year = if forms.short_years { any_year(year) } else { full_year(year) };
            Date::new(year?, month_number(word)?, 1).ok()
        }
        [Number(day), Word(word), Number(year)] if month_number(word).is_some() => match full_year(day) {
            Some(year_first) => Date::new(year_first, month_number(word)?, small(year)?).ok(),
            None => Date::new(any_year(year)?, month_number(word)?, small(day)?).ok(),
        },
        [Word(word), Number(day), Number(year)] if month_number(word).is_some() => {
            Date::new(full_year(year)?, month_number(word)?, small(day)?).ok()
        }
        [Word(word), Number(part), Number(year)] | [Number(year), Word(word), Number(part)]
            if year.len() == 4 || year.len() == 2 && part.len() == 1 =>
        {
            part_of_year(word, small(part)?, any_year(year)?)
        }
        [Number(part), Word(word), Number(year)] if part.len() == 1 => part_of_year(word, small(part)?, any_year(year)?),
        _ => None,
    }
}

fn part_of_year(word: &str, part: i8, year: i16) -> Option<Date> {
    match cycle_of_word(word)? {
        Cycle::Weeks => ISOWeekDate::new(year, part, Weekday::Monday).ok().map(|week| week.date()),
        Cycle::Quarters => (1..=4).contains(&part).then(|| Date::new(year, part * 3 - 2, 1).ok()).flatten(),
        Cycle::Halves => (1..=2).contains(&part).then(|| Date::new(year, part * 6 - 5, 1).ok()).flatten(),
        Cycle::Months | Cycle::MonthNames => Date::new(year, part, 1).ok(),
    }
}

fn full_year(text: &str) -> Option<i16> {
    text.parse().ok().filter(|year| text.len() == 4 && (1500..=2500).contains(year))
}

/// A year of four digits, or of two: 70 and later is of the last century.
fn any_year(text: &str) -> Option<i16> {
    match text.len() {
        2 => text.parse::<i16>().ok().map(|year| if year >= 70 { 1900 + year } else { 2000 + year }),
        _ => full_year(text),
    }
}

fn small(text: &str) -> Option<i8> {
    text.parse().ok().filter(|_| text.len() <= 2)
}

/// The first of two years that a season or school year spans: `2019/20`, `2019-2020`.
pub fn pair_of_years(text: &str) -> Option<f64> {
    let [Piece::Number(first), Piece::Number(second)] = pieces(text)[..] else { return None };
    let year = full_year(first)?;
    let next: i16 = second.parse().ok()?;
    let follows = second.len() == 2 && next == (year + 1) % 100 || second.len() == 4 && next == year + 1;
    follows.then(|| f64::from(year))
}

/// The number in `Week 7`, `W7`, `Month 3`, `Day 12`: words, then one whole number.
pub fn numbered(text: &str) -> Option<f64> {
    let text = text.trim();
    let digits = text.find(|c: char| c.is_ascii_digit())?;
    let (word, number) = text.split_at(digits);
    if !word.trim().chars().all(|c| c.is_alphabetic() || c == '.') {
        return None;
    }
    number.parse::<u32>().ok().map(f64::from)
}

/// Whether a text is by its looks a date or a period of the calendar with its year, or the name of a month.
pub fn is_calendar_text(text: &str) -> bool {
    let read = |order, short_years| start(text, Forms { order, short_years }).is_some();
    read(DayOrder::DayFirst, true)
        || read(DayOrder::MonthFirst, true)
        || pair_of_years(text).is_some()
        || month_number(text).is_some()
}

/// Months in languages of western Europe, in full; a word of at least three letters with which only one of them begins
/// names that month.
const MONTHS: [&str; 12] = [
    "january januar janvier enero gennaio januari janeiro",
    "february februar février fevrier febrero febbraio februari fevereiro",
    "march märz maerz mars marzo maart março",
    "april avril abril aprile",
    "may mai mayo maggio mei maio",
    "june juni juin junio giugno junho",
    "july juli juillet julio luglio julho",
    "august août aout agosto augustus",
    "september septembre septiembre settembre setembro",
    "october oktober octobre octubre ottobre outubro",
    "november novembre noviembre novembro",
    "december dezember décembre decembre diciembre dicembre december dezembro",
];

/// The number of a month's name in full or by at least its first three letters.
pub fn month_number(word: &str) -> Option<i8> {
    let word = word.trim().trim_end_matches('.').to_lowercase();
    if word.chars().count() < 3 {
        return None;
    }
    let begins =
        |months: &&str| months.split(' ').any(|month| month.starts_with(&word)) || word == "sept" && months.starts_with("sept");
    let mut found = MONTHS.iter().enumerate().filter(|(_, months)| begins(months));
    match (found.next(), found.next()) {
        (Some((index, _)), None) => Some(index as i8 + 1),
        _ => None,
    }
}

fn is_weekday(word: &str) -> bool {
    const WEEKDAYS: &str =
        "monday tuesday wednesday thursday friday saturday sunday montag dienstag mittwoch donnerstag freitag samstag sonntag";
    let word = word.to_lowercase();
    word.len() >= 3 && WEEKDAYS.split(' ').any(|day| day.starts_with(&word)) && month_number(&word).is_none()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn read(texts: &[&str]) -> Option<Vec<String>> {
        let cells: Vec<Cell> = texts.iter().map(|text| Cell::text(text)).collect();
        let forms = Forms::of(&cells);
        texts.iter().map(|text| start(text, forms).map(|start| start.to_string().replace("T00:00:00", ""))).collect()
    }

    #[test]
    fn dates_and_periods_as_people_write_them() {
        for (text, expected) in [
            ("2025-02-03", "2025-02-03"),
            ("3.2.25", "2025-02-03"),
            ("03.02.2025 08:30", "2025-02-03T08:30:00"),
            ("Mon 3 Feb 2025", "2025-02-03"),
            ("Monday, 3rd of February 2025", "2025-02-03"),
            ("Feb 3, 2025", "2025-02-03"),
            ("3-Feb-25", "2025-02-03"),
            ("3. März 2025", "2025-03-03"),
            ("2025-W06", "2025-02-03"),
            ("2025W06", "2025-02-03"),
            ("Week 6, 2025", "2025-02-03"),
            ("KW 6/2025", "2025-02-03"),
            ("Q1 2025", "2025-01-01"),
            ("2025Q2", "2025-04-01"),
            ("1Q25", "2025-01-01"),
            ("H2 2024", "2024-07-01"),
            ("2025/03", "2025-03-01"),
            ("03.2025", "2025-03-01"),
            ("Sept 2024", "2024-09-01"),
            ("août 2024", "2024-08-01"),
        ] {
            assert_eq!(read(&[text]), Some(vec![expected.to_owned()]), "{text}");
        }
        for text in
            ["", "good", "12", "1,5", "1000,5", "2025,1", "12.5", "1/2", "Room 3", "Q5 2025", "2025-13", "31.02.2025", "a@b 3"]
        {
            assert_eq!(read(&[text]), None, "{text}");
        }
    }

    #[test]
    fn the_column_decides_what_a_text_alone_does_not() {
        let first = |texts: &[&str]| read(texts).map(|read| read[0].clone());
        assert_eq!(first(&["03/04/2025", "17/04/2025"]).as_deref(), Some("2025-04-03"));
        assert_eq!(first(&["03/04/2025", "03/17/2025"]).as_deref(), Some("2025-03-04"));
        assert_eq!(first(&["05/01/2025", "12/01/2025", "05/02/2025"]).as_deref(), Some("2025-01-05"));
        assert_eq!(first(&["03/04/2025", "04/04/2025"]), None, "in order either way");
        assert_eq!(first(&["Nov-24", "Dec-24", "Jan-25"]).as_deref(), Some("2024-11-01"));
        assert_eq!(first(&["Jan 3", "Jan 10", "Jan 17"]), None, "days without a year");
    }

    #[test]
    fn months_are_known_by_their_first_letters() {
        for (word, month) in
            [("Jan", 1), ("fév", 2), ("Mär", 3), ("mai", 5), ("Juni", 6), ("JUL", 7), ("ago", 8), ("Okt.", 10), ("dic", 12)]
        {
            assert_eq!(month_number(word), Some(month), "{word}");
        }
        for word in ["ja", "jui", "mon", "good", ""] {
            assert_eq!(month_number(word), None, "{word}");
        }
    }
}
