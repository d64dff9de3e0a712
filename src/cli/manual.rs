//! `lossbook completions` and `lossbook manual`: what a shell and a reader of manuals want to know.

use std::path::PathBuf;

use clap::{Args, CommandFactory};
use clap_complete::Shell;

use super::options::Common;
use super::{Command, Exit, Failure, desk};

/// A script that lets a shell complete verbs, options and values.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook completions bash > ~/.local/share/bash-completion/completions/lossbook
  lossbook completions zsh > ~/.zfunc/_lossbook")]
pub(crate) struct Completions {
    /// The shell.
    #[arg(value_name = "SHELL")]
    shell: Shell,
}

impl Completions {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        let mut script = Vec::new();
        clap_complete::generate(self.shell, &mut Command::command(), "lossbook", &mut script);
        desk::to(None, |out| out.write_all(&script))?;
        Ok(Exit::Done)
    }
}

/// The manual page, of the program or of one verb, in the format of `man`.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook manual > lossbook.1
  lossbook manual compare -o lossbook-compare.1")]
pub(crate) struct Manual {
    /// A verb; the program itself when absent.
    #[arg(value_name = "VERB")]
    verb: Option<String>,

    /// Write it to this file instead of standard output.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

impl Manual {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        let mut command = Command::command();
        command.build();
        if let Some(verb) = &self.verb {
            let known: Vec<String> =
                command.get_subcommands().map(|verb| verb.get_name().to_owned()).collect();
            let Some(found) = command.find_subcommand(verb) else {
                return Err(Failure::asked(
                    "there is no such verb",
                    format!("the verbs are {}", known.join(", ")),
                ));
            };
            // built with its own display name: lossbook-compare
            command = found.clone();
        }
        desk::to(self.output.as_deref(), |out| clap_mangen::Man::new(command).render(out))?;
        Ok(Exit::Done)
    }
}
