//! The words by which people label tables, in the languages of western Europe: what a column or a row is about.
//!
//! Common usage, not a standard. A word decides only where the cells leave a question open, and what was decided is said.

/// Words that name moments.
const MOMENTS: &str = "\
    date, dates, day, week, wk, w, kw, cw, month, mth, quarter, q, qtr, year, yr, fy, period, time, moment, when, \
    visit, round, wave, sprint, term, semester, season, trimester, half, h, sample, survey, inspection, \
    measurement, session, run, test, shift, cycle, datum, tag, woche, monat, quartal, jahr, zeitraum, termin, \
    jour, semaine, mois, trimestre, année, annee, an, période, fecha, día, dia, semana, mes, año, periodo, \
    giorno, settimana, mese, anno, data, mês, ano, week ending, week starting, reporting date";

/// Words that name one row of a calendar axis even when it holds plain numbers.
const CALENDAR: &str = "\
    day, week, wk, kw, cw, month, quarter, year, fy, weekday, woche, monat, quartal, jahr, semaine, mois, \
    trimestre, année, semana, mes, año, settimana, mese, anno";

/// Words that begin a row which sums up other rows.
const SUMMARIES: &str = "\
    total, totals, grand total, sub-total, subtotal, sum, average, avg, mean, median, min, minimum, max, maximum, \
    count, range, std, stdev, st. dev., sd, standard deviation, variance, ytd, year to date, overall, target, \
    goal, benchmark, summe, gesamt, mittelwert, durchschnitt, schnitt, total général, moyenne, somme, promedio, \
    suma, media, totale, somma, média, soma, gemiddelde";

/// Words that name what a row is about rather than how it was.
const NAMES: &str = "\
    name, id, no, nr, no., nr., #, number, code, ref, reference, key, ticket, account, phone, telephone, tel, \
    fax, mobile, email, e-mail, mail, zip, postcode, post code, postal code, address, url, link, inspector, \
    inspected by, by, who, staff, employee, person, patient, teacher, nurse, operator, technician, recorded by, \
    entered by, checked by, site, location, place, station, room, hotel, house, building, team, department, \
    group, category, type, class, shift, machine, asset, line, region, country, city, product, item";

/// Words that end such a header.
const NAME_TAILS: &str = "\
    id, no, nr, code, name, phone, number, officer, master, manager, leader, owner, author, auditor, assessor, reviewer, \
    inspector, observer, contact, supervisor";

/// Words for a time of day.
const TIMES_OF_DAY: &str = "\
    time, time of day, hour, clock, at, from, to, until, start, end, started, ended, start time, end time, uhrzeit, zeit, \
    heure, hora, ora";

/// Words that name who recorded a row, which does not tell indicators apart.
const RECORDERS: &str = "\
    by, who, staff, employee, teacher, nurse, operator, technician, inspector, observer, auditor, assessor, reviewer, \
    contact, supervisor, prüfer, inspecteur, note, notes, comment, comments, remark, remarks, weekday";

/// Words that name numbers which count nothing.
const CODES: &str = "\
    id, no, nr, #, code, ref, reference, key, ticket, account, phone, telephone, tel, fax, mobile, zip, postcode, \
    post code, postal code, barcode, serial number, order number, invoice number, ticket number, row, index";

/// Words that name free text.
const NOTES: &str = "\
    note, notes, comment, comments, remark, remarks, description, details, action, actions, reason, cause, \
    bemerkung, bemerkungen, kommentar, remarque, observaciones, nota";

/// Words that name the indicator in a long table.
const INDICATORS: &str = "\
    indicator, measure, metric, kpi, parameter, variable, series, question, item, aspect, criterion, quantity, \
    determinand, analyte, test, measurement, what, kennzahl, merkmal, indicateur, indicador, indicatore";

/// Words that name a reading without saying of what.
const VALUES: &str = "\
    value, values, reading, readings, result, results, score, scores, rating, grade, measured, measurement, \
    amount, quantity, number, wert, messwert, ergebnis, valeur, valor, valore, data";

/// Words for a level that is set, not read.
const SET_LEVELS: &str = "\
    target, goal, limit, threshold, benchmark, budget, plan, planned, standard, lower limit, upper limit, ziel, \
    soll, objectif, objetivo, obiettivo";

/// Words for figures worked out from the rows before.
const RUNNING: &str = "\
    cumulative, cumulated, running total, running sum, year to date, ytd, kumuliert, cumul, cumulé, acumulado, \
    cumulato, to date, running average, moving average";

/// Words for the difference from the row before.
const CHANGES: &str = "\
    change, difference, delta, diff, % change, change %, veränderung, variation, variación";

/// Words under which other words are grades rather than notes.
const GRADES: &str = "\
    grade, grading, rating, score, level, condition, state, status, quality, mood, behaviour, behavior, assessment, \
    impression, verdict, severity, urgency, risk, priority, pain, effort, attitude, zustand, stufe";

const WEEKDAYS: &str = "\
    monday, tuesday, wednesday, thursday, friday, saturday, sunday, mon, tue, wed, thu, fri, sat, sun, montag, \
    dienstag, mittwoch, donnerstag, freitag, samstag, sonntag, lundi, mardi, mercredi, jeudi, vendredi, samedi, \
    dimanche, lunes, martes, miércoles, jueves, viernes, sábado, domingo";

fn listed(words: &'static str) -> impl Iterator<Item = &'static str> {
    words.split(", ")
}

fn among(words: &'static str, word: &str) -> bool {
    listed(words).any(|listed| listed == word)
}

/// A text in small letters without what stands in brackets or after them, and without a closing colon or point.
fn plain(text: &str) -> String {
    let end = text.find(['(', '[']).filter(|&end| end > 0).unwrap_or(text.len());
    text[..end].trim().trim_end_matches([':', '.']).to_lowercase()
}

fn first_word(text: &str) -> &str {
    text.split(|c: char| c.is_whitespace() || "_/:".contains(c)).next().unwrap_or("")
}

fn last_word(text: &str) -> &str {
    text.rsplit(|c: char| c.is_whitespace() || "_/:".contains(c)).next().unwrap_or("")
}

/// Whether a word names moments: `week`, `month`, `visit`.
pub fn is_moment_word(word: &str) -> bool {
    among(MOMENTS, &plain(word))
}

/// Words that say of a whole header that it is about moments, wherever they stand in it.
const STRONG_MOMENTS: &str = "\
    date, week, month, quarter, year, day, period, datum, woche, monat, quartal, jahr, fecha, semana";

/// What may stand after such a word.
const MOMENT_TAILS: &str = "\
    no, number, ending, starting, beginning, commencing, end, start, from, of year, of visit, of reading, of inspection, \
    of sample, of test";

/// Whether a header speaks of moments: `Date`, `Week ending`, `Reporting month`.
pub fn names_moments(header: &str) -> bool {
    let header = plain(header);
    let first = first_word(&header);
    let rest = header[first.len()..].trim();
    among(MOMENTS, &header) || among(STRONG_MOMENTS, last_word(&header)) || among(MOMENTS, first) && among(MOMENT_TAILS, rest)
}

/// Whether a header is that of a part of the calendar, such as `Year` or `Week no.`.
pub fn names_calendar(header: &str) -> bool {
    let header = plain(header);
    among(CALENDAR, &header) || among(CALENDAR, header.trim_end_matches(" no").trim_end_matches(" number"))
}

/// Whether a text begins a row that sums up others.
pub fn is_summary(text: &str) -> bool {
    let text = plain(text);
    listed(SUMMARIES).any(|word| {
        text.strip_prefix(word).is_some_and(|rest| rest.is_empty() || rest.starts_with(|c: char| !c.is_alphanumeric()))
    })
}

/// Whether a header names what rows are about: `Inspector`, `Room`, `Ticket no.`.
pub fn names_things(header: &str) -> bool {
    let header = plain(header);
    let tail = last_word(&header);
    among(NAMES, &header) || among(NAME_TAILS, tail) && !header.starts_with("number of") || header.ends_with(" by")
}

/// Whether a header names numbers that are names: `Ticket no.`, `ID`, `Phone`.
pub fn names_codes(header: &str) -> bool {
    let run_together = ["No", "Nr", "ID", "Id"].iter().filter_map(|tail| header.strip_suffix(tail));
    if run_together.into_iter().any(|rest| rest.ends_with(char::is_lowercase)) {
        return true;
    }
    let header = plain(header);
    among(CODES, &header) || among("id, no, nr, code, phone, barcode", last_word(&header))
}

/// Whether a header names who recorded a row: `Inspector`, `Entered by`.
pub fn names_recorders(header: &str) -> bool {
    let header = plain(header);
    among(RECORDERS, &header) || header.ends_with(" by") || among(RECORDERS, last_word(&header))
}

/// Whether a header announces times of day.
pub fn names_times_of_day(header: &str) -> bool {
    among(TIMES_OF_DAY, &plain(header))
}

/// Whether a header announces free text.
pub fn names_notes(header: &str) -> bool {
    let header = plain(header);
    among(NOTES, &header) || among(NOTES, last_word(&header))
}

/// Whether a header announces the names of indicators.
pub fn names_indicators(header: &str) -> bool {
    among(INDICATORS, &plain(header))
}

/// Whether a header says only that there are readings, not of what.
pub fn names_values(header: &str) -> bool {
    let header = plain(header);
    header.is_empty() || among(VALUES, &header)
}

/// Whether a header names a level that is set, not read.
pub fn names_set_level(header: &str) -> bool {
    let header = plain(header);
    among(SET_LEVELS, &header) || among(SET_LEVELS, first_word(&header)) || among(SET_LEVELS, last_word(&header))
}

/// Whether a header names a figure that carries all rows before it along.
pub fn names_running_total(header: &str) -> bool {
    let header = plain(header);
    listed(RUNNING).any(|word| header == word || header.starts_with(&format!("{word} ")) || header.ends_with(&format!(" {word}")))
}

/// Whether a header names the difference from the row before.
pub fn names_change(header: &str) -> bool {
    let header = plain(header);
    among(CHANGES, &header)
        || listed(CHANGES)
            .any(|word| ["to ", "from ", "vs", "on "].iter().any(|next| header.starts_with(&format!("{word} {next}"))))
}

/// Whether a header announces a sum over its row.
pub fn names_total(header: &str) -> bool {
    let header = plain(header);
    ["total", "sum", "all", "overall", "gesamt", "summe", "totale"].contains(&first_word(&header))
}

/// Whether a header announces grades.
pub fn names_grades(header: &str) -> bool {
    plain(header).split(|c: char| !c.is_alphanumeric()).any(|word| among(GRADES, word))
}

/// Whether a word is the name of a day of the week.
pub fn is_weekday(word: &str) -> bool {
    among(WEEKDAYS, &word.trim_end_matches('.').to_lowercase())
}

/// The word and the whole number of `Week 7`, `W7`, `Room 101`.
pub fn word_and_number(text: &str) -> Option<(&str, u32)> {
    let digits = text.find(|c: char| c.is_ascii_digit()).filter(|&digits| digits > 0)?;
    let (word, number) = text.split_at(digits);
    let word = word.trim_end_matches([' ', '-', '.', '#', '_']).trim();
    let plain_word = !word.is_empty() && word.chars().all(|c| c.is_alphabetic() || c == ' ');
    plain_word.then(|| number.trim().parse().ok()).flatten().map(|number| (word, number))
}
