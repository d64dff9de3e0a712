//! Words of the command line: parsed by clap, and hints for words that are called something else here.

use std::ffi::OsString;

use clap::error::{ContextKind, ContextValue, ErrorKind};
use clap::{CommandFactory, Parser};
use lossbook::hints::{self, Vocabulary};
use lossbook::printable::printable;

use super::{Command, Failure};

impl Command {
    /// Reads the command line.
    pub(crate) fn parse(words: impl IntoIterator<Item = OsString>) -> Result<Command, Failure> {
        Command::try_parse_from(words).map_err(explain)
    }
}

/// A clap error with our hint, where we have one.
fn explain(mut error: clap::Error) -> Failure {
    let said = |kind| match error.get(kind) {
        Some(ContextValue::String(word)) => Some(word.clone()),
        _ => None,
    };
    let hint = match error.kind() {
        ErrorKind::InvalidSubcommand => {
            let word = said(ContextKind::InvalidSubcommand).unwrap_or_default();
            return Failure::asked(format!("there is no verb `{}`", printable(&word)), verb_hint(&word));
        }
        ErrorKind::UnknownArgument => said(ContextKind::InvalidArg).and_then(|word| option_hint(&word)),
        ErrorKind::InvalidValue => said(ContextKind::InvalidValue).and_then(|word| value_hint(&word)),
        _ => None,
    };
    if let Some(hint) = hint {
        error.remove(ContextKind::SuggestedArg);
        error.remove(ContextKind::SuggestedValue);
        error.insert(ContextKind::Suggested, ContextValue::StyledStrs(vec![hint.into()]));
    }
    Failure::Usage(Box::new(error))
}

/// What a verb is called here, or which one is nearest.
fn verb_hint(word: &str) -> String {
    let command = Command::command();
    let known: Vec<&str> = command.get_subcommands().map(clap::Command::get_name).collect();
    match hints::ours(Vocabulary::Verb, word) {
        [] => {}
        [ours, ..] if known.contains(ours) => {
            return format!("it is called `{ours}` here; see `lossbook {ours} --help`");
        }
        [ours, ..] => {
            return format!(
                "it is called `{ours}` here, which this version does not have; see `lossbook --help`"
            );
        }
    }
    match hints::nearest(word, known) {
        Some(near) => format!("did you mean `lossbook {near}`?"),
        None => "see `lossbook --help` for the verbs".into(),
    }
}

/// What an option is called here.
fn option_hint(word: &str) -> Option<String> {
    let bare = word.trim_start_matches('-').split('=').next().unwrap_or_default();
    match (hints::ours(Vocabulary::Axis, bare), hints::ours(Vocabulary::Option, bare)) {
        ([axis, ..], _) => Some(format!("the budget file says it: `{axis}`, in `grid:` and `headline:`")),
        (_, [option, ..]) => Some(format!("write `--{option}`")),
        _ => None,
    }
}

/// What a value is called here.
fn value_hint(word: &str) -> Option<String> {
    match hints::ours(Vocabulary::Value, word) {
        [ours, ..] => Some(format!("it is called `{ours}` here")),
        [] => None,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn clap_finds_no_fault_with_the_definition() {
        Command::command().debug_assert();
    }

    #[test]
    fn words_of_others_get_ours() {
        assert!(verb_hint("table").contains("`tabulate`"));
        assert!(verb_hint("tabulat").contains("lossbook tabulate"));
        assert!(verb_hint("why").contains("`justify`"));
        assert!(option_hint("--vin=24").is_some_and(|hint| hint.contains("`input_voltage`")));
        assert!(option_hint("--json").is_some_and(|hint| hint.contains("--format json")));
    }
}
