//! `risefall methods`: the published tests.

use clap::Args;

use super::Exit;
use crate::catalogue::help;
use crate::problem::Problem;
use crate::query::request::method;

/// Lists the published tests, or explains one.
#[derive(Args)]
pub struct Methods {
    /// A test's key, such as cox-stuart; without it, all tests are listed.
    name: Option<String>,
}

impl Methods {
    pub fn run(self) -> Result<Exit, Problem> {
        match self.name {
            Some(name) => print!("{}", help::of(method(&name)?)),
            None => print!("{}", help::list()),
        }
        Ok(Exit::Done)
    }
}
