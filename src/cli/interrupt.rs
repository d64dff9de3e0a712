//! Ctrl-C and requests to end: no half-written file stays behind.

use std::path::{Path, PathBuf};
use std::sync::atomic::Ordering;
use std::sync::{Arc, Mutex, MutexGuard, PoisonError};

use lossbook::files;
use lossbook::sweep::Watch;

use super::{Exit, terminal};

/// A search that can be ended with a result.
static SEARCH: Mutex<Option<Arc<Watch>>> = Mutex::new(None);

/// The temporary file that is being written.
static DRAFT: Mutex<Option<PathBuf>> = Mutex::new(None);

fn draft() -> MutexGuard<'static, Option<PathBuf>> {
    DRAFT.lock().unwrap_or_else(PoisonError::into_inner)
}

/// Ends the run cleanly on the signals that ask for it.
pub(crate) fn listen() {
    // without a handler the system ends the run, less politely
    let _ = ctrlc::set_handler(|| {
        if SEARCH.lock().unwrap_or_else(PoisonError::into_inner).as_ref().is_some_and(|watch| end(watch)) {
            return;
        }
        // held to the end, so that no file gets its name after this was said
        let mut file = draft();
        let changed = if file.is_some() { "; no file was changed" } else { "" };
        if let Some(path) = file.take() {
            files::remove(&path);
        }
        terminal::say(&format!("\ninterrupted{changed}"));
        std::process::exit(Exit::Interrupted as i32);
    });
}

/// From now on the first interrupt ends the search, which then gives what it has; the next one ends the run.
pub(crate) fn stops_search(watch: &Arc<Watch>) {
    *SEARCH.lock().unwrap_or_else(PoisonError::into_inner) = Some(watch.clone());
}

/// Ends a search; false when it was ended before.
fn end(watch: &Watch) -> bool {
    let first = !watch.stop.swap(true, Ordering::Relaxed);
    if first {
        terminal::say("\ninterrupted; the best so far follows");
    }
    first
}

/// Remembers the temporary file that has to go on an interrupt.
pub(crate) fn watch_draft(path: Option<&Path>) {
    *draft() = path.map(Path::to_path_buf);
}

/// Gives a file its name while no interrupt can come between.
pub(crate) fn finish_draft<T>(finish: impl FnOnce() -> T) -> T {
    let mut file = draft();
    let result = finish();
    *file = None;
    result
}

/// Removes the temporary file, if there is one.
pub(crate) fn drop_draft() {
    // a panic may have come while it was held: then leave the file
    if let Ok(mut file) = DRAFT.try_lock()
        && let Some(path) = file.take()
    {
        files::remove(&path);
    }
}
