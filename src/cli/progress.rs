//! A line on standard error that says what a long run is doing, on a terminal only.
//!
//! It appears after half a second and leaves no trace. The layers below tell stages (`labelling::Stage`) and know no
//! terminal.

use super::arguments::Common;
use crate::labelling::Stage;
use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use std::io::{self, IsTerminal};
use std::sync::mpsc::{self, RecvTimeoutError, Sender};
use std::thread::JoinHandle;
use std::time::Duration;

/// Shorter runs show nothing.
const PATIENCE: Duration = Duration::from_millis(500);
/// Time between two pictures of the spinner.
const TICK: Duration = Duration::from_millis(120);

/// A stage on show until dropped.
pub struct Progress {
    shown: Option<Shown>,
}

struct Shown {
    bar: ProgressBar,
    /// Dropped to end the wait of the thread.
    end: Option<Sender<()>>,
    waiting: Option<JoinHandle<()>>,
}

impl Progress {
    /// Shows nothing.
    pub fn none() -> Self {
        Self { shown: None }
    }

    /// Begins with a stage, or does nothing with `--quiet` and where standard error is no terminal.
    pub fn start(common: &Common, stage: &str) -> Self {
        if common.quiet || !io::stderr().is_terminal() {
            return Self::none();
        }
        let bar = ProgressBar::with_draw_target(None, ProgressDrawTarget::hidden());
        if let Ok(style) = ProgressStyle::with_template("{spinner} {msg} {elapsed:.dim}") {
            bar.set_style(style.tick_chars("-\\|/ "));
        }
        bar.set_message(stage.to_owned());
        let (end, ended) = mpsc::channel::<()>();
        let delayed = bar.clone();
        let waiting = std::thread::spawn(move || {
            if ended.recv_timeout(PATIENCE) == Err(RecvTimeoutError::Timeout) {
                delayed.set_draw_target(ProgressDrawTarget::stderr());
                delayed.enable_steady_tick(TICK);
            }
        });
        Self { shown: Some(Shown { bar, end: Some(end), waiting: Some(waiting) }) }
    }

    /// What takes the stages of labelling.
    pub fn watch(&self) -> impl Fn(Stage) + '_ {
        |stage| {
            self.stage(match stage {
                Stage::Group => "group of the nuclei",
                Stage::Overlap => "overlap and convention",
                Stage::Operations => "operations on the functions",
                Stage::Orbitals => "weights and sets of the orbitals",
            });
        }
    }

    /// The next stage.
    pub fn stage(&self, stage: &str) {
        if let Some(shown) = &self.shown {
            shown.bar.set_message(stage.to_owned());
        }
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        let Some(shown) = &mut self.shown else { return };
        shown.end = None;
        if let Some(waiting) = shown.waiting.take() {
            // A spinner that failed must not spoil the result.
            let _ = waiting.join();
        }
        shown.bar.finish_and_clear();
    }
}
