//! What kind of thing the values are.

/// An ordered list of words, the lowest first: `poor < fair < good`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Grades(Vec<String>);

/// What is wrong with a list of grades.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum GradesError {
    /// Fewer than two grades.
    #[error("a scale of grades needs at least two words, lowest first, such as `poor < fair < good`; got {0}")]
    TooFew(usize),
    /// The same word twice.
    #[error("the grade `{0}` stands twice in the scale; each grade has one place")]
    Twice(String),
}

impl Grades {
    /// Grades from the lowest to the highest; upper and lower case do not matter.
    pub fn new(words: impl IntoIterator<Item = impl Into<String>>) -> Result<Self, GradesError> {
        let words: Vec<String> = words.into_iter().map(|word| word.into().trim().to_owned()).collect();
        let words: Vec<String> = words.into_iter().filter(|word| !word.is_empty()).collect();
        if words.len() < 2 {
            return Err(GradesError::TooFew(words.len()));
        }
        for (i, word) in words.iter().enumerate() {
            if words[..i].iter().any(|earlier| same_word(earlier, word)) {
                return Err(GradesError::Twice(word.clone()));
            }
        }
        Ok(Grades(words))
    }

    /// Reads `poor < fair < good`, or the same words separated by commas, semicolons or newlines.
    pub fn parse(text: &str) -> Result<Self, GradesError> {
        let separator: &[char] = if text.contains('<') { &['<'] } else { &[',', ';', '\n', '\t'] };
        Grades::new(text.split(separator))
    }

    /// The place of a word in the order, the lowest being 1.
    pub fn place(&self, word: &str) -> Option<usize> {
        self.0.iter().position(|grade| same_word(grade, word.trim())).map(|index| index + 1)
    }

    /// The words, lowest first.
    pub fn words(&self) -> &[String] {
        &self.0
    }

    /// The word at a place, the lowest being 1.
    pub fn word(&self, place: f64) -> Option<&str> {
        let index = place as usize;
        (index as f64 == place && index >= 1).then(|| self.0.get(index - 1).map(String::as_str)).flatten()
    }
}

impl std::fmt::Display for Grades {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.0.join(" < "))
    }
}

fn same_word(a: &str, b: &str) -> bool {
    a == b || a.to_lowercase() == b.to_lowercase()
}

/// What kind of thing a series' values are.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Scale {
    /// Numbers whose differences mean something.
    Numeric,
    /// Words whose order is all that is known.
    Graded(Grades),
}

impl Scale {
    /// The grades, if the scale is graded.
    pub fn grades(&self) -> Option<&Grades> {
        match self {
            Scale::Numeric => None,
            Scale::Graded(grades) => Some(grades),
        }
    }
}
