//! A bar on standard error while a sweep takes long, when somebody watches.

use std::io::{self, IsTerminal};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::thread::{self, JoinHandle};
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use lossbook::sweep::Watch;

/// Shorter sweeps show nothing.
const PATIENCE: Duration = Duration::from_millis(400);
const BEAT: Duration = Duration::from_millis(100);

/// A bar that follows a watch until it is dropped.
#[derive(Debug, Default)]
pub(crate) struct Progress {
    over: Arc<AtomicBool>,
    thread: Option<JoinHandle<()>>,
}

impl Progress {
    /// Follows a watch, if standard error is a terminal.
    pub(crate) fn of(watch: &Arc<Watch>) -> Progress {
        if !io::stderr().is_terminal() {
            return Progress::default();
        }
        let over = Arc::new(AtomicBool::new(false));
        let (seen, watch) = (over.clone(), watch.clone());
        let follow = move || {
            thread::park_timeout(PATIENCE);
            if seen.load(Ordering::Relaxed) {
                return;
            }
            let bar = ProgressBar::with_draw_target(Some(0), ProgressDrawTarget::stderr());
            if let Ok(style) =
                ProgressStyle::with_template("{bar:30} {percent} % of {len}, {per_sec}, {eta} left")
            {
                bar.set_style(style);
            }
            while !seen.load(Ordering::Relaxed) {
                bar.set_length(watch.total.load(Ordering::Relaxed));
                bar.set_position(watch.done.load(Ordering::Relaxed));
                thread::park_timeout(BEAT);
            }
            bar.finish_and_clear();
        };
        // no bar is no reason to stop
        let thread = thread::Builder::new().name("progress".into()).spawn(follow).ok();
        Progress { over, thread }
    }
}

impl Drop for Progress {
    fn drop(&mut self) {
        self.over.store(true, Ordering::Relaxed);
        if let Some(thread) = self.thread.take() {
            thread.thread().unpark();
            // a bar that broke is not worth a word
            let _ = thread.join();
        }
    }
}
