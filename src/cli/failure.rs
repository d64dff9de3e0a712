//! What can go wrong, how it is said, and the exit codes.

use std::io::{self, Write};
use std::path::PathBuf;
use std::process::ExitCode;

use lossbook::files::FileFault;
use lossbook::input::InputErrors;

use super::terminal;

/// How a run ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Exit {
    /// Done.
    Done = 0,
    /// Done, and a requirement fails.
    Missed = 1,
    /// Could not do it.
    Failed = 2,
    /// Stopped by the user.
    Interrupted = 130,
}

impl From<Exit> for ExitCode {
    fn from(exit: Exit) -> ExitCode {
        ExitCode::from(exit as u8)
    }
}

/// Why nothing came of it.
#[derive(Debug)]
pub(crate) enum Failure {
    /// Words of the command line, or a request for help.
    Usage(Box<clap::Error>),
    /// Files that are wrong.
    Input(InputErrors),
    /// Something asked for that does not exist.
    Asked {
        /// What is wrong.
        problem: String,
        /// The way out.
        hint: String,
    },
    /// The answer could not be written.
    Output {
        /// Where to; standard output when absent.
        file: Option<PathBuf>,
        /// Why.
        fault: FileFault,
    },
    /// Nobody reads on.
    ClosedPipe,
}

impl Failure {
    /// Something asked for that does not exist.
    pub(crate) fn asked(problem: impl Into<String>, hint: impl Into<String>) -> Failure {
        Failure::Asked { problem: problem.into(), hint: hint.into() }
    }

    /// A write to standard output that failed.
    pub(crate) fn of_stdout(error: io::Error) -> Failure {
        match error.kind() {
            io::ErrorKind::BrokenPipe => Failure::ClosedPipe,
            _ => Failure::Output { file: None, fault: FileFault::Other(error) },
        }
    }

    /// Exit code.
    pub(crate) fn exit(&self) -> Exit {
        match self {
            Failure::ClosedPipe => Exit::Done,
            Failure::Usage(error) if error.exit_code() == 0 => Exit::Done,
            _ => Exit::Failed,
        }
    }

    /// Says it on standard error; help, which was asked for, goes to standard output.
    pub(crate) fn print(&self) {
        match self {
            Failure::ClosedPipe => {}
            Failure::Usage(error) => {
                // a closed pipe is no one to tell
                let _ = error.print();
            }
            Failure::Input(errors) => {
                terminal::say(&errors.render(terminal::stderr_colour()));
                if errors.0.len() > 1 {
                    terminal::say(&format!("\n{} errors; nothing was done", errors.0.len()));
                }
            }
            Failure::Asked { problem, hint } => say(problem, hint),
            Failure::Output { file, fault } => {
                let place = match file {
                    Some(file) => format!("`{}`", terminal::shown(file)),
                    None => "standard output".into(),
                };
                match fault {
                    FileFault::NotFound => say(
                        &format!("{place} cannot be written: its folder does not exist; nothing was changed"),
                        "make the folder first, or name another",
                    ),
                    fault => {
                        say(&format!("{place} cannot be written: {fault}; nothing was changed"), fault.hint())
                    }
                }
            }
        }
    }
}

fn say(problem: &str, hint: &str) {
    let (red, plain) = if terminal::stderr_colour() { ("\u{1b}[1;31m", "\u{1b}[0m") } else { ("", "") };
    let hint = if hint.is_empty() { String::new() } else { format!("\n  hint: {hint}") };
    // standard error may be closed as well
    let _ = writeln!(io::stderr(), "{red}error{plain}: {problem}{hint}");
}
