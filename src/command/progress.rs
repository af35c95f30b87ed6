//! A progress bar on the terminal while long work goes on.

use std::time::Duration;

use indicatif::{ProgressBar, ProgressStyle};

use crate::workbook::annotate::{Stage, Step};

/// Shows the steps of annotating; nothing is drawn where no one looks, as in a pipe.
pub struct Bar {
    bar: ProgressBar,
    stage: Option<Stage>,
}

impl Bar {
    /// A bar, or nothing if `quiet`.
    pub fn new(quiet: bool) -> Self {
        let bar = if quiet { ProgressBar::hidden() } else { ProgressBar::new(0) };
        if let Ok(style) = ProgressStyle::with_template("{msg:<24} [{bar:30}] {percent:>3} %  {elapsed}") {
            bar.set_style(style.progress_chars("=> "));
        }
        bar.enable_steady_tick(Duration::from_millis(200));
        Bar { bar, stage: None }
    }

    /// Shows a step.
    pub fn show(&mut self, step: Step) {
        if self.stage != Some(step.stage) {
            self.stage = Some(step.stage);
            self.bar.set_message(match step.stage {
                Stage::Reading => "reading the workbook",
                Stage::Judging => "judging the indicators",
                Stage::Writing => "writing the copy",
            });
        }
        self.bar.set_length(step.total);
        self.bar.set_position(step.done);
    }

    /// Takes the bar away.
    pub fn finish(&self) {
        self.bar.finish_and_clear();
    }
}
