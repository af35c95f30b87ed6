//! The unit in a header: `Wait (min)`, `Rainfall [mm]`, `Occupancy %`.

/// Units as people write them in headers. What stands in square brackets is a unit in any case.
const UNITS: &str = "\
    mm cm dm m km in ft yd mi ml cl dl l L µl ul g mg kg t µg ug ng lb oz s sec secs second seconds ms min mins minute minutes \
    h hr hrs hour hours d day days wk week weeks month months yr yrs year years % ‰ pct percent °C °F C F K € $ £ ¥ EUR USD GBP CHF \
    JPY k€ kEUR T€ TEUR k$ m€ mEUR bar mbar hPa kPa MPa Pa psi mmHg bpm /min mg/l mg/L µg/l ug/l ug/L ng/l mg/dl mmol/l mmol/L mol \
    W kW MW GW Wh kWh MWh GWh J kJ MJ kcal cal V mV A mA Hz kHz MHz dB dBA lx lm m² m2 m³ m3 cm³ ha km² km2 km/h m/s l/s m³/s m3/s \
    m³/h m3/h ppm ppb NTU FNU pH µS/cm uS/cm mS/cm pcs pc units points pts calls visits guests rooms persons people \
    patients cases events failures complaints count counts number ratio share thousand thousands million millions 000s '000 000 k M Mio Tsd Stk Std Min Sek Tage \
    jours heures Stunden Minuten Sekunden horas minutos días";

/// Whether a text is a unit by its looks.
pub fn is_unit(text: &str) -> bool {
    let text = text.trim();
    let lower = text.to_lowercase();
    !text.is_empty()
        && text.chars().count() <= 24
        && (UNITS.split_whitespace().any(|unit| unit == text || unit == lower)
            || lower.starts_with("per ")
            || lower.starts_with("in ") && is_unit(&text[3..])
            || lower.starts_with("% of ")
            || is_quotient(text)
            || text.chars().next().is_some_and(|c| "€$£¥".contains(c)) && text.chars().count() <= 8)
}

/// `mg/100 ml`, `calls / day`: a quotient of short parts, one of them a unit.
fn is_quotient(text: &str) -> bool {
    let Some((above, below)) = text.split_once('/') else { return false };
    let (above, below) = (above.trim(), below.trim());
    let known = |part: &str| {
        UNITS.split_whitespace().any(|unit| unit == part.trim_start_matches(|c: char| c.is_ascii_digit() || c == ' '))
    };
    above.chars().count() <= 12 && below.chars().count() <= 12 && (known(above) || known(below))
}

/// A header parted into the name and the unit.
pub fn split_unit(header: &str) -> (String, Option<String>) {
    let header = header.trim();
    for (open, close, certain) in [('[', ']', true), ('(', ')', false)] {
        if let Some(rest) = header.strip_suffix(close)
            && let Some(start) = rest.rfind(open)
        {
            let (name, unit) = (rest[..start].trim(), rest[start + 1..].trim());
            let counts = |text: &str| text.chars().any(|c| !c.is_ascii_digit() && !"-–. ".contains(c));
            if !name.is_empty() && !unit.is_empty() && (certain && counts(unit) || is_unit(unit)) {
                let unit = unit.strip_prefix("in ").unwrap_or(unit);
                return (name.trim_end_matches([',', ':']).to_owned(), Some(unit.to_owned()));
            }
        }
    }
    for sign in ["%", "‰"] {
        if let Some(name) = header.strip_suffix(sign)
            && name.ends_with(' ')
        {
            return (name.trim().to_owned(), Some(sign.to_owned()));
        }
    }
    for between in [", ", " in "] {
        if let Some((name, unit)) = header.rsplit_once(between)
            && is_unit(unit)
            && !name.trim().is_empty()
        {
            return (name.trim().to_owned(), Some(unit.trim().to_owned()));
        }
    }
    (header.to_owned(), None)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn units_are_parted_from_names() {
        for (header, name, unit) in [
            ("Wait (min)", "Wait", Some("min")),
            ("Rainfall [mm]", "Rainfall", Some("mm")),
            ("Complaints (per 1,000 calls)", "Complaints", Some("per 1,000 calls")),
            ("Nitrate, mg/l", "Nitrate", Some("mg/l")),
            ("Occupancy %", "Occupancy", Some("%")),
            ("Rainfall in mm", "Rainfall", Some("mm")),
            ("Score (1-5)", "Score (1-5)", None),
            ("Hall (north)", "Hall (north)", None),
            ("Systolic", "Systolic", None),
            ("[mm]", "[mm]", None),
            ("Revenue (€)", "Revenue", Some("€")),
            ("Friendly, helpful", "Friendly, helpful", None),
        ] {
            assert_eq!(split_unit(header), (name.to_owned(), unit.map(str::to_owned)), "{header}");
        }
    }
}
