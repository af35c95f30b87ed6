//! One declaration a method, from which route, parser, help, OpenAPI, sheet and page are made.
//!
//! A method's parameters are declared once, with [`parameters!`](crate::parameters) and [`choices!`](crate::choices):
//!
//! ```
//! use risefall::method::declaration::{Argument, Arguments, Count, Declared};
//!
//! risefall::choices! {
//!     /// What is done with equal readings.
//!     pub enum Ties {
//!         /// Leaves them out.
//!         Drop = "drop",
//!         /// Counts half of each as a rise.
//!         Split = "split",
//!     }
//! }
//! risefall::parameters! {
//!     /// What the test takes.
//!     pub struct Parameters {
//!         /// What is done with ties.
//!         ties: Ties = Ties::Drop,
//!         /// Length of a season in readings.
//!         period: Count<1, 366> = Count(12),
//!     }
//! }
//!
//! let arguments = Arguments::from_iter([("period", Argument::Text("4".into()))]);
//! assert_eq!(Parameters::read(&arguments).unwrap().period, Count(4));
//! let wrong = Arguments::from_iter([("period", Argument::Text("0".into()))]);
//! assert_eq!(
//!     Parameters::read(&wrong).unwrap_err().to_string(),
//!     "period: expected a whole number from 1 to 366, got `0`"
//! );
//! assert_eq!(Parameters::LIST[0].doc, "What is done with ties.");
//! ```

use crate::problem::{Problem, ProblemKind};
use crate::reading::{Cell, Grades, list};

/// A value as it was sent, before its kind is known.
#[derive(Clone, Debug, PartialEq)]
pub enum Argument {
    /// Text from an address, a cell or a form.
    Text(String),
    /// A number from JSON.
    Number(f64),
    /// TRUE or FALSE from JSON.
    Truth(bool),
    /// A range of cells, row by row, as macros and JSON send it.
    Cells(Vec<Vec<Cell>>),
}

impl Argument {
    /// The argument as text, for quoting back; a range is described by its size.
    pub fn quote(&self) -> String {
        match self {
            Argument::Text(text) => text.clone(),
            Argument::Number(number) => number.to_string(),
            Argument::Truth(truth) => truth.to_string(),
            Argument::Cells(rows) => format!("a range of {} rows and {} columns", rows.len(), rows.first().map_or(0, Vec::len)),
        }
    }
}

/// Named values as they were sent, in the order they came.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Arguments(Vec<(String, Argument)>);

impl Arguments {
    /// The value of a name; the last one if it was sent more than once.
    pub fn get(&self, name: &str) -> Option<&Argument> {
        self.0.iter().rev().find(|(key, _)| key == name).map(|(_, value)| value)
    }

    /// Adds a value.
    pub fn push(&mut self, name: impl Into<String>, value: Argument) {
        self.0.push((name.into(), value));
    }

    /// The names with their values, in the order they came.
    pub fn into_pairs(self) -> impl Iterator<Item = (String, Argument)> {
        self.0.into_iter()
    }

    /// The values in the order they came.
    pub fn values(&self) -> impl Iterator<Item = &Argument> {
        self.0.iter().map(|(_, value)| value)
    }

    /// The names in the order they came.
    pub fn names(&self) -> impl Iterator<Item = &str> {
        self.0.iter().map(|(name, _)| name.as_str())
    }
}

impl<N: Into<String>> FromIterator<(N, Argument)> for Arguments {
    fn from_iter<I: IntoIterator<Item = (N, Argument)>>(pairs: I) -> Self {
        Arguments(pairs.into_iter().map(|(name, value)| (name.into(), value)).collect())
    }
}

/// The form of a parameter's values, for help, schemas and form fields.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// One of a few words.
    Choice(&'static [ChoiceWord]),
    /// A whole number in a range, ends included.
    Integer { least: i64, most: i64 },
    /// A number between two limits, ends excluded.
    Number { above: f64, below: f64 },
    /// Yes or no.
    Flag,
    /// A list of cells: text with separators, an array, or a range.
    List,
    /// Free text.
    Text,
}

/// One word of a choice and what it means.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ChoiceWord {
    /// The word as it is sent.
    pub word: &'static str,
    /// What choosing it means.
    pub doc: &'static str,
}

/// A parameter as declared.
#[derive(Clone, Copy, Debug)]
pub struct Parameter {
    /// Its name in addresses, JSON, plans and formulas.
    pub name: &'static str,
    /// What it means, in one or two sentences.
    pub doc: &'static str,
    /// The form of its values.
    pub shape: fn() -> Shape,
    /// The default as it would be sent; `None` where there is none.
    pub default: fn() -> Option<String>,
}

/// A kind of parameter value. Each kind owns its bounds, so that a method never checks a range.
pub trait Kind: Sized {
    /// The form of the values.
    fn shape() -> Shape;
    /// Reads a value; `None` if it is not of this kind.
    fn read(argument: &Argument) -> Option<Self>;
    /// The value as it would be sent, `None` for absent.
    fn write(&self) -> Option<String>;
    /// What is expected, for the sentence about a wrong value.
    fn expected() -> String {
        match Self::shape() {
            Shape::Choice(words) => {
                let words: Vec<&str> = words.iter().map(|choice| choice.word).collect();
                format!("one of {}", words.join(", "))
            }
            Shape::Integer { least, most } => format!("a whole number from {least} to {most}"),
            Shape::Number { above, below } => format!("a number above {above} and below {below}"),
            Shape::Flag => "true or false".into(),
            Shape::List => "a list of values".into(),
            Shape::Text => "text".into(),
        }
    }
}

/// A set of declared parameters.
pub trait Declared: Sized + Default {
    /// The parameters in the order of declaration.
    const LIST: &'static [Parameter];
    /// Reads the parameters from what was sent; names that are not declared here are not looked at.
    fn read(arguments: &Arguments) -> Result<Self, ParameterError>;
}

/// What is wrong with a parameter.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ParameterError {
    /// The value is not of the declared kind.
    #[error("{name}: expected {expected}, got `{got}`")]
    Value { name: &'static str, expected: String, got: String },
    /// No parameter has this name.
    #[error("there is no parameter `{name}` here{}", nearest.map(|nearest| format!("; did you mean `{nearest}`?")).unwrap_or_default())]
    Unknown { name: String, nearest: Option<&'static str>, known: Vec<&'static str> },
    /// A parameter without a default was not sent.
    #[error("{name} is needed: {doc}")]
    Absent { name: &'static str, doc: &'static str },
}

impl From<ParameterError> for Problem {
    fn from(error: ParameterError) -> Self {
        let message = error.to_string();
        match error {
            ParameterError::Value { name, got, .. } => {
                Problem::new(ProblemKind::Malformed, "parameter-value", message).at(name).value(got)
            }
            ParameterError::Unknown { name, known, .. } => Problem::new(ProblemKind::Malformed, "parameter-unknown", message)
                .help(format!("The parameters are: {}.", known.join(", ")))
                .at(name.clone())
                .value(name),
            ParameterError::Absent { name, .. } => Problem::new(ProblemKind::Malformed, "parameter-absent", message).at(name),
        }
    }
}

/// Checks that every name that was sent is declared in one of the lists.
pub fn check_names(arguments: &Arguments, lists: &[&'static [Parameter]]) -> Result<(), ParameterError> {
    let known: Vec<&'static str> = lists.iter().flat_map(|list| list.iter().map(|parameter| parameter.name)).collect();
    for name in arguments.names() {
        if !known.contains(&name) {
            return Err(ParameterError::Unknown { name: name.to_owned(), nearest: nearest_word(name, &known), known });
        }
    }
    Ok(())
}

/// The known word that a mistyped one most resembles, if it is near enough to be worth suggesting.
pub fn nearest_word<'a>(word: &str, known: &[&'a str]) -> Option<&'a str> {
    let limit = (word.chars().count() / 3).max(1);
    known.iter().map(|&candidate| (edit_distance(word, candidate), candidate)).filter(|&(d, _)| d <= limit).min().map(|(_, c)| c)
}

/// Levenshtein's distance with neighbouring letters exchanged counted as one edit.
fn edit_distance(a: &str, b: &str) -> usize {
    let (a, b): (Vec<char>, Vec<char>) = (a.to_lowercase().chars().collect(), b.to_lowercase().chars().collect());
    let mut rows = vec![(0..=b.len()).collect::<Vec<usize>>()];
    for i in 1..=a.len() {
        let mut row = vec![i];
        for j in 1..=b.len() {
            let substitution = rows[i - 1][j - 1] + usize::from(a[i - 1] != b[j - 1]);
            let mut best = substitution.min(rows[i - 1][j] + 1).min(row[j - 1] + 1);
            if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                best = best.min(rows[i - 2][j - 2] + 1);
            }
            row.push(best);
        }
        rows.push(row);
    }
    rows[a.len()][b.len()]
}

/// A whole number from `LEAST` to `MOST`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Count<const LEAST: u32, const MOST: u32>(pub u32);

impl<const LEAST: u32, const MOST: u32> Kind for Count<LEAST, MOST> {
    fn shape() -> Shape {
        Shape::Integer { least: LEAST.into(), most: MOST.into() }
    }
    fn read(argument: &Argument) -> Option<Self> {
        let number = plain_number(argument)?;
        let whole = number.fract() == 0.0 && (f64::from(LEAST)..=f64::from(MOST)).contains(&number);
        whole.then_some(Count(number as u32))
    }
    fn write(&self) -> Option<String> {
        Some(self.0.to_string())
    }
}

/// A number above 0 and below 1; `5 %` is 0.05.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct Proportion(pub f64);

impl Kind for Proportion {
    fn shape() -> Shape {
        Shape::Number { above: 0.0, below: 1.0 }
    }
    fn read(argument: &Argument) -> Option<Self> {
        plain_number(argument).filter(|number| *number > 0.0 && *number < 1.0).map(Proportion)
    }
    fn write(&self) -> Option<String> {
        Some(self.0.to_string())
    }
}

/// Any finite number, or none.
impl Kind for Option<f64> {
    fn shape() -> Shape {
        Shape::Number { above: f64::NEG_INFINITY, below: f64::INFINITY }
    }
    fn read(argument: &Argument) -> Option<Self> {
        if is_blank(argument) { Some(None) } else { plain_number(argument).map(Some) }
    }
    fn write(&self) -> Option<String> {
        self.map(|number| number.to_string())
    }
    fn expected() -> String {
        "a number".into()
    }
}

impl Kind for bool {
    fn shape() -> Shape {
        Shape::Flag
    }
    fn read(argument: &Argument) -> Option<Self> {
        match argument {
            Argument::Truth(truth) => Some(*truth),
            Argument::Number(number) if *number == 0.0 || *number == 1.0 => Some(*number == 1.0),
            Argument::Text(text) => match text.trim().to_lowercase().as_str() {
                "true" | "yes" | "1" => Some(true),
                "false" | "no" | "0" => Some(false),
                _ => None,
            },
            _ => None,
        }
    }
    fn write(&self) -> Option<String> {
        Some(self.to_string())
    }
}

impl Kind for Option<String> {
    fn shape() -> Shape {
        Shape::Text
    }
    fn read(argument: &Argument) -> Option<Self> {
        match argument {
            Argument::Cells(rows) => match rows.as_slice() {
                [row] if row.len() == 1 => Some(Some(row[0].quote())),
                _ => None,
            },
            other => Some(Some(other.quote().trim().to_owned()).filter(|text| !text.is_empty())),
        }
    }
    fn write(&self) -> Option<String> {
        self.clone()
    }
}

/// A list of cells in order, or none. A range of several columns is taken row by row.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct List {
    /// The cells; `None` if the parameter was not sent.
    pub cells: Option<Vec<Cell>>,
    /// The form of the text they came in, if they came as text.
    pub form: Option<list::ListForm>,
    /// How many columns the range had; 1 for a plain list.
    pub columns: usize,
}

impl Kind for List {
    fn shape() -> Shape {
        Shape::List
    }
    fn read(argument: &Argument) -> Option<Self> {
        Some(match argument {
            Argument::Text(text) => {
                let (cells, form) = list::split(text);
                List { cells: Some(cells), form: Some(form), columns: 1 }
            }
            Argument::Number(number) => List { cells: Some(vec![Cell::Number(*number)]), form: None, columns: 1 },
            Argument::Truth(truth) => List { cells: Some(vec![Cell::Truth(*truth)]), form: None, columns: 1 },
            Argument::Cells(rows) => {
                let columns = rows.first().map_or(0, Vec::len);
                let row_vector = rows.len() == 1;
                List { cells: Some(rows.concat()), form: None, columns: if row_vector { 1 } else { columns } }
            }
        })
    }
    fn write(&self) -> Option<String> {
        None
    }
}

/// An ordered list of words, or none.
impl Kind for Option<Grades> {
    fn shape() -> Shape {
        Shape::Text
    }
    fn read(argument: &Argument) -> Option<Self> {
        if is_blank(argument) {
            return Some(None);
        }
        match argument {
            Argument::Text(text) => Grades::parse(text).ok().map(Some),
            Argument::Cells(rows) => Grades::new(rows.iter().flatten().map(Cell::quote)).ok().map(Some),
            _ => None,
        }
    }
    fn write(&self) -> Option<String> {
        self.as_ref().map(Grades::to_string)
    }
    fn expected() -> String {
        "at least two different words, lowest first, such as `poor < fair < good`".into()
    }
}

fn plain_number(argument: &Argument) -> Option<f64> {
    match argument {
        Argument::Number(number) => Some(*number).filter(|number| number.is_finite()),
        Argument::Text(text) => list::number(text),
        Argument::Cells(rows) => match rows.as_slice() {
            [row] => match row.as_slice() {
                [Cell::Number(number)] => Some(*number),
                _ => None,
            },
            _ => None,
        },
        Argument::Truth(_) => None,
    }
}

fn is_blank(argument: &Argument) -> bool {
    matches!(argument, Argument::Text(text) if text.trim().is_empty())
}

/// Declares a choice: an enum whose words and meanings are also data.
#[macro_export]
macro_rules! choices {
    ($(#[doc = $enum_doc:literal])* pub enum $name:ident { $($(#[doc = $doc:literal])+ $variant:ident = $word:literal,)+ }) => {
        $(#[doc = $enum_doc])*
        #[derive(Clone, Copy, Debug, PartialEq, Eq)]
        pub enum $name { $($(#[doc = $doc])+ $variant,)+ }
        impl $name {
            /// The word as it is sent.
            pub fn word(self) -> &'static str {
                match self { $($name::$variant => $word,)+ }
            }
        }
        impl $crate::method::declaration::Kind for $name {
            fn shape() -> $crate::method::declaration::Shape {
                $crate::method::declaration::Shape::Choice(
                    const { &[$($crate::method::declaration::ChoiceWord { word: $word, doc: concat!($($doc),+).trim_ascii() },)+] }
                )
            }
            fn read(argument: &$crate::method::declaration::Argument) -> Option<Self> {
                match argument.quote().trim().to_lowercase().as_str() { $($word => Some($name::$variant),)+ _ => None }
            }
            fn write(&self) -> Option<String> {
                Some(self.word().to_owned())
            }
        }
    };
}

/// Declares a set of parameters: a struct with defaults whose names, meanings and kinds are also data.
#[macro_export]
macro_rules! parameters {
    ($(#[doc = $struct_doc:literal])* pub struct $name:ident { $($(#[doc = $doc:literal])+ $field:ident: $kind:ty = $default:expr,)* }) => {
        $(#[doc = $struct_doc])*
        #[derive(Clone, Debug, PartialEq)]
        pub struct $name { $($(#[doc = $doc])+ pub $field: $kind,)* }
        impl Default for $name {
            fn default() -> Self {
                $name { $($field: $default,)* }
            }
        }
        impl $crate::method::declaration::Declared for $name {
            const LIST: &'static [$crate::method::declaration::Parameter] = &[$(
                $crate::method::declaration::Parameter {
                    name: stringify!($field),
                    doc: concat!($($doc),+).trim_ascii(),
                    shape: <$kind as $crate::method::declaration::Kind>::shape,
                    default: || {
                        let default: $kind = $default;
                        <$kind as $crate::method::declaration::Kind>::write(&default)
                    },
                },
            )*];
            fn read(
                arguments: &$crate::method::declaration::Arguments,
            ) -> Result<Self, $crate::method::declaration::ParameterError> {
                #[allow(unused_mut)]
                let mut read = Self::default();
                $(if let Some(argument) = arguments.get(stringify!($field)) {
                    read.$field = <$kind as $crate::method::declaration::Kind>::read(argument).ok_or_else(|| {
                        $crate::method::declaration::ParameterError::Value {
                            name: stringify!($field),
                            expected: <$kind as $crate::method::declaration::Kind>::expected(),
                            got: argument.quote(),
                        }
                    })?;
                })*
                let _ = arguments;
                Ok(read)
            }
        }
    };
}
