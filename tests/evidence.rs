//! `lossbook evidence`: exit code, formats, and the README's section, which is its Markdown one heading deeper.
//!
//! After a change of checks or words, `REWRITE=1 cargo test --test evidence` writes the section anew.

#![expect(clippy::disallowed_methods, reason = "a test reads and writes the README")]

use std::error::Error;
use std::process::Command;

type Outcome = Result<(), Box<dyn Error>>;

const BEGINS: &str =
    "<!-- evidence begins: written by `lossbook evidence --format markdown`, kept in step by a test -->\n";
const ENDS: &str = "<!-- evidence ends -->\n";

fn evidence(options: &[&str]) -> Result<(String, Option<i32>), Box<dyn Error>> {
    let out = Command::new(env!("CARGO_BIN_EXE_lossbook")).arg("evidence").args(options).output()?;
    Ok((String::from_utf8(out.stdout)?, out.status.code()))
}

#[test]
fn the_readme_carries_the_evidence() -> Outcome {
    let (markdown, code) = evidence(&["--format", "markdown"])?;
    assert_eq!(code, Some(0));
    let mut deeper = String::new();
    for line in markdown.lines() {
        if line.starts_with('#') {
            deeper.push('#');
        }
        deeper.push_str(line);
        deeper.push('\n');
    }
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/README.md");
    let readme = std::fs::read_to_string(path)?;
    let (head, rest) = readme.split_once(BEGINS).ok_or("README.md has no line that begins the evidence")?;
    let (section, tail) = rest.split_once(ENDS).ok_or("README.md has no line that ends the evidence")?;
    if std::env::var_os("REWRITE").is_some() {
        std::fs::write(path, format!("{head}{BEGINS}\n{deeper}\n{ENDS}{tail}"))?;
        return Ok(());
    }
    for (place, (ours, theirs)) in deeper.trim().lines().zip(section.trim().lines()).enumerate() {
        assert_eq!(ours, theirs, "line {} of the section; REWRITE=1 writes it anew", place + 1);
    }
    assert_eq!(deeper.trim().lines().count(), section.trim().lines().count());
    Ok(())
}

#[test]
fn files_carry_every_check() -> Outcome {
    let (json, code) = evidence(&["--format", "json"])?;
    assert_eq!(code, Some(0));
    let value: serde_json::Value = serde_json::from_str(&json)?;
    let checks = value["checks"].as_array().ok_or("no checks")?;
    assert_eq!(value["holds"], true);
    assert!(checks.len() > 300, "{}", checks.len());
    for check in checks {
        let sound = check["ours"].is_number() && check["outside"].is_number() && check["holds"] == true;
        assert!(sound && check["source"].is_string() && check["reason"].is_string(), "{check}");
    }
    let (csv, _) = evidence(&["--format", "csv"])?;
    assert_eq!(csv.lines().count(), checks.len() + 1);
    Ok(())
}

#[test]
fn text_shows_summaries_and_full_shows_all() -> Outcome {
    let (text, code) = evidence(&[])?;
    assert_eq!(code, Some(0));
    assert!(text.contains("hold.") && text.contains("Where the model is weak"), "{text}");
    assert!(!text.contains("fails"));
    let (full, _) = evidence(&["--full"])?;
    assert!(full.lines().count() > text.lines().count() + 100);
    Ok(())
}

/// A check that fails makes the answer fail: exit code 1 comes from there.
#[test]
fn a_failed_check_fails_the_answer() {
    use lossbook::evidence::{Check, Evidence};
    use lossbook::units::Dimension;
    let good = Check::within(1.0, 0.01, Dimension::Power, 1.005);
    let bad = Check::within(1.0, 0.01, Dimension::Power, 1.05);
    let missing = Check::within(1.0, 0.01, Dimension::Power, f64::NAN);
    let failures = |checks: Vec<Check>| Evidence { checks }.failures().count();
    assert_eq!(failures(vec![good.clone()]), 0);
    assert_eq!(failures(vec![good, bad, missing]), 2);
}
