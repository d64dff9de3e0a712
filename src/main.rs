//! The lossbook command: words in, one question asked, one answer written, one exit code.

mod cli;

use std::process::ExitCode;

use cli::{Command, Exit, Failure, terminal};

fn main() -> ExitCode {
    cli::bug::ask_for_a_report();
    cli::interrupt::listen();
    run().unwrap_or_else(|failure| report(&failure)).into()
}

fn run() -> Result<Exit, Failure> {
    let command = Command::parse(std::env::args_os())?;
    command.common.apply()?;
    command.verb.run(&command.common)
}

/// Says what went wrong; nobody reads on when the pipe is closed.
fn report(failure: &Failure) -> Exit {
    failure.print();
    terminal::flush();
    failure.exit()
}
