//! `risefall serve`: the local service.

use clap::Args;

use super::Exit;
use crate::problem::Problem;
use crate::service::application::{Application, Settings};

/// Starts the local service that cells, macros and the page ask.
#[derive(Args)]
pub struct Serve {
    /// The port to listen on; 0 takes any free one.
    #[arg(long, default_value_t = 7373)]
    port: u16,
}

impl Serve {
    pub fn run(self) -> Result<Exit, Problem> {
        let application = Application::build(Settings { port: self.port, ..Settings::default() })?;
        let address = format!("http://127.0.0.1:{}", application.port());
        println!("Risefall listens on {address} for this machine only; stop it with Ctrl+C.");
        println!("Try:  curl \"{address}/trend/cox-stuart?readings=3;4;2;5;6;5;7;8&give=sentence\"");
        println!("Or put into a cell:  =WEBSERVICE(\"{address}/trend/cox-stuart?give=p&readings=\"&TEXTJOIN(\";\";TRUE;B2:B53))");
        application.run()?;
        Ok(Exit::Done)
    }
}
