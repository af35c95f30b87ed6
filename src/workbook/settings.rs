//! How a workbook is to be annotated.

use crate::finding::Adjustment;
use crate::finding::request::Aim;
use crate::method::declaration::{Arguments, Declared, Parameter, ParameterError, check_names, nearest_word};
use crate::method::{METHODS, Question};

use super::judge::USUAL_TEST;

crate::parameters! {
    /// What annotating takes beyond seek, risk, wanted and the test's own parameters.
    pub struct Annotating {
        /// The test for every indicator that the plan does not say otherwise about, by its key.
        test: Option<String> = None,
        /// How p-values are adjusted over the indicators of the workbook.
        adjust: Adjustment = Adjustment::Holm,
        /// Annotate although the workbook's structure is protected.
        allow_protected: bool = false,
        /// Annotate although a digital signature becomes void by it.
        allow_signed: bool = false,
    }
}

/// Everything that was asked, checked as one.
#[derive(Clone, Debug, Default)]
pub struct Settings {
    /// What annotating itself takes.
    pub annotating: Annotating,
    /// The defaults for every indicator: seek, risk, wanted, test and the test's own parameters.
    pub defaults: Arguments,
}

impl Settings {
    /// The parameters that annotating shares with the tests.
    pub fn parameters() -> [&'static [Parameter]; 3] {
        [Annotating::LIST, Question::LIST, Aim::LIST]
    }

    /// Reads what was sent, and checks every name and value before any work is done.
    pub fn read(arguments: &Arguments) -> Result<Self, ParameterError> {
        let annotating = Annotating::read(arguments)?;
        let key = annotating.test.as_deref().unwrap_or(USUAL_TEST);
        let keys: Vec<&'static str> = METHODS.iter().map(|method| method.card.key).collect();
        let method = crate::method::find(key).ok_or_else(|| ParameterError::Value {
            name: "test",
            expected: match nearest_word(key, &keys) {
                Some(near) => format!("a test's key (did you mean {near}?)"),
                None => format!("one of {}", keys.join(", ")),
            },
            got: key.to_owned(),
        })?;
        let mut lists = Settings::parameters().to_vec();
        lists.push(method.parameters);
        check_names(arguments, &lists)?;
        Question::read(arguments)?;
        Aim::read(arguments)?;
        method.read(arguments)?;
        let own: Vec<&str> = Annotating::LIST.iter().map(|parameter| parameter.name).filter(|name| *name != "test").collect();
        let defaults =
            arguments.names().filter(|name| !own.contains(name)).filter_map(|name| Some((name, arguments.get(name)?.clone())));
        Ok(Settings { annotating, defaults: defaults.collect::<Arguments>() })
    }
}
