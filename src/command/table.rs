//! A short table for the terminal.

/// Lays rows out in columns; the last column is not padded.
pub fn lay_out(header: &[&str], rows: &[Vec<String>]) -> String {
    let mut widths: Vec<usize> = header.iter().map(|cell| cell.chars().count()).collect();
    for row in rows {
        for (width, cell) in widths.iter_mut().zip(row) {
            *width = (*width).max(cell.chars().count());
        }
    }
    let line = |cells: Vec<&str>| {
        let padded = cells.iter().zip(&widths).map(|(cell, &width)| format!("{cell:<width$}"));
        format!("{}\n", padded.collect::<Vec<_>>().join("  ").trim_end())
    };
    let mut text = line(header.to_vec());
    text.push_str(&line(widths.iter().map(|&width| &RULE[..width.min(RULE.len())]).collect()));
    for row in rows {
        text.push_str(&line(row.iter().map(String::as_str).collect()));
    }
    text
}

const RULE: &str = "--------------------------------------------------------------------------------";

/// Cuts a text to a number of characters, saying so with three points.
pub fn cut(text: &str, most: usize) -> String {
    if text.chars().count() <= most {
        return text.to_owned();
    }
    let kept: String = text.chars().take(most.saturating_sub(3)).collect();
    format!("{}...", kept.trim_end())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_line_up() {
        let text = lay_out(&["Indicator", "p"], &[vec!["Wait".into(), "0.01".into()], vec!["Complaints".into(), "1".into()]]);
        assert_eq!(text, "Indicator   p\n----------  ----\nWait        0.01\nComplaints  1\n");
    }

    #[test]
    fn long_text_is_cut() {
        assert_eq!(cut("Response minutes", 11), "Response...");
        assert_eq!(cut("Wait", 11), "Wait");
    }
}
