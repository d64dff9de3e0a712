//! Wrong input files, each with the message that its author should see.
//!
//! Every file and folder of `tests/bad` (except `parts`, a sound library for the budgets) is checked and compared
//! with the text file of its name. After a change of wording, `REWRITE=1 cargo test --test bad_input` writes the
//! messages anew; read them before committing.

#![expect(clippy::disallowed_methods, reason = "a test reads and writes its own files")]

use std::fs;
use std::path::{Path, PathBuf};

use lossbook::input::check_path;

/// Everything in the folder that is to be checked, sorted.
fn cases() -> Vec<PathBuf> {
    let entries = fs::read_dir("tests/bad").expect("the folder of wrong files");
    let mut cases: Vec<PathBuf> = entries.map(|entry| entry.expect("an entry").path()).collect();
    cases.retain(|path| path.extension().is_none_or(|ending| ending != "txt") && !path.ends_with("parts"));
    cases.sort();
    cases
}

/// What the user sees.
fn message(path: &Path) -> String {
    match check_path(path) {
        Ok(checked) if checked.warnings.is_empty() => "nothing is wrong with it\n".to_string(),
        Ok(checked) => lossbook::input::render::render(&checked.warnings, false) + "\n",
        Err(errors) => errors.render(false) + "\n",
    }
}

#[test]
fn every_wrong_file_gets_its_message() {
    let rewrite = std::env::var_os("REWRITE").is_some();
    let mut wrong = Vec::new();
    let cases = cases();
    assert!(cases.len() >= 60, "{} cases", cases.len());
    for case in cases {
        let expected = case.with_extension("txt");
        let message = message(&case);
        if rewrite {
            fs::write(&expected, &message).expect("written");
        } else if fs::read_to_string(&expected).unwrap_or_default() != message {
            wrong.push(format!("{}:\n{message}", case.display()));
        }
    }
    assert!(wrong.is_empty(), "{} messages differ:\n{}", wrong.len(), wrong.join("\n"));
}

#[test]
fn every_wrong_file_is_refused_with_a_way_out() {
    for case in cases() {
        let name = case.file_name().expect("named").to_string_lossy().into_owned();
        match check_path(&case) {
            Ok(checked) => {
                assert!(name.starts_with("doubtful-") || name.starts_with("sound-"), "{name} is accepted");
                assert_eq!(name.starts_with("sound-"), checked.warnings.is_empty(), "{name}");
            }
            Err(errors) => {
                assert!(!errors.0.is_empty(), "{name}");
                for error in &errors.0 {
                    assert!(!error.hint.is_empty() && !error.reason.is_empty(), "{name}: {error}");
                }
            }
        }
    }
}
