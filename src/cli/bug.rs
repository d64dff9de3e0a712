//! A panic is a bug of ours: a short request for a report instead of a wall of frames.

use std::panic::PanicHookInfo;

use super::{interrupt, terminal};

/// Replaces the usual panic message.
pub(crate) fn ask_for_a_report() {
    std::panic::set_hook(Box::new(|info| {
        interrupt::drop_draft();
        terminal::say(&request(info));
        // the exit code of "could not do it"; unwinding would give another
        std::process::exit(super::Exit::Failed as i32);
    }));
}

fn request(info: &PanicHookInfo<'_>) -> String {
    let payload = info.payload();
    let what = payload
        .downcast_ref::<&str>()
        .copied()
        .or_else(|| payload.downcast_ref::<String>().map(String::as_str));
    let place =
        info.location().map_or_else(String::new, |place| format!(" ({}:{})", place.file(), place.line()));
    format!(
        "error: lossbook {} has a bug: {}{place}\n  hint: please report these lines with the command and the files that led here",
        env!("CARGO_PKG_VERSION"),
        what.unwrap_or("no message"),
    )
}
