//! `risefall serve`: the local service.

use std::sync::Arc;

use clap::Args;

use super::Exit;
use crate::problem::Problem;
use crate::service::annotation::{AnnotatedSummary, Annotation};
use crate::service::application::{Application, Settings};
use crate::workbook::annotate::annotate;
use crate::workbook::settings::Settings as Annotating;

/// Starts the local service that cells, macros and the page ask.
#[derive(Args)]
pub struct Serve {
    /// The port to listen on; 0 takes any free one.
    #[arg(long, default_value_t = crate::service::application::PORT)]
    port: u16,
}

impl Serve {
    pub fn run(self) -> Result<Exit, Problem> {
        let application =
            Application::build(Settings { port: self.port, annotation: Some(annotation()), ..Settings::default() })?;
        let address = format!("http://127.0.0.1:{}", application.port());
        println!("Risefall listens on {address} for this machine only; stop it with Ctrl+C.");
        println!("Try:  curl \"{address}/trend/cox-stuart?readings=3;4;2;5;6;5;7;8&give=sentence\"");
        println!(
            "Or put into a cell:  =WEBSERVICE(\"{address}/trend/cox-stuart?give=p&readings=\"&TEXTJOIN(\";\";FALSE;B2:B53))"
        );
        application.run()?;
        Ok(Exit::Done)
    }
}

/// The service hands workbooks to the same use case as `risefall annotate`.
pub fn annotation() -> Annotation {
    Annotation {
        annotate: Arc::new(|input, output, arguments| {
            let settings = Annotating::read(arguments)?;
            let now = jiff::ZonedDateTime::now().datetime();
            let annotated = annotate(input, output, &settings, now, &mut |_| {})?;
            let attention = annotated.conclusions.iter().filter(|row| row.needs_attention).count();
            Ok(AnnotatedSummary { indicators: annotated.conclusions.len(), attention, kind: annotated.kind })
        }),
        parameters: Annotating::parameters().concat(),
    }
}
