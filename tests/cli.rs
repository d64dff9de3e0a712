//! The command line from outside: exit codes, streams, files. Exit codes and the closed pipe follow common practice of
//! Unix tools; NO_COLOR follows no-color.org.

#![expect(clippy::disallowed_methods, reason = "tests look at what was written")]

use std::io::{Read, Write};
use std::path::{Path, PathBuf};
use std::process::{Command as Process, Stdio};

use snapbox::cmd::{Command, cargo_bin};

const BUDGET: &str = "budgets/grain-dryer-camera.yaml";

fn lossbook(words: &[&str]) -> Command {
    Command::new(cargo_bin!("lossbook"))
        .args(words)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .env_remove("NO_COLOR")
}

fn files_in(folder: &Path) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(folder).expect("a folder");
    entries.map(|entry| entry.expect("an entry").path()).collect()
}

#[test]
fn without_words_the_help_goes_to_standard_error() {
    lossbook(&[]).assert().code(2).stdout_eq("").stderr_eq("[..]\n\nUsage: lossbook [..]\n...");
}

#[test]
fn help_and_version_go_to_standard_output() {
    for words in [&["--help"][..], &["-h"], &["help"], &["compare", "--help"], &["help", "check"]] {
        lossbook(words).assert().code(0).stderr_eq("").stdout_eq("...\nUsage: lossbook[..]\n...");
    }
    lossbook(&["--version"]).assert().code(0).stderr_eq("").stdout_eq("lossbook [..]\n");
}

#[test]
fn words_of_others_get_a_hint_with_ours() {
    let hint = |words: &[&str]| {
        let output = lossbook(words).output().expect("run");
        assert_eq!(output.status.code(), Some(2), "{words:?}");
        assert!(output.stdout.is_empty(), "{words:?}");
        String::from_utf8(output.stderr).expect("UTF-8")
    };
    assert!(hint(&["table", BUDGET]).contains("`tabulate`"));
    assert!(hint(&["list"]).contains("`tabulate`"));
    assert!(hint(&["explain"]).contains("`justify`"));
    assert!(hint(&["compar", BUDGET]).contains("`lossbook compare`"));
    assert!(hint(&["compare", BUDGET, "--vin", "24"]).contains("`input_voltage`"));
    assert!(hint(&["compare", BUDGET, "--fsw=1"]).contains("`switching_frequency`"));
    assert!(hint(&["compare", BUDGET, "--json"]).contains("--format json"));
    assert!(hint(&["template", "ldo"]).contains("`linear_regulators`"));
    assert!(hint(&["compare", BUDGET, "--stage", "synchronus"]).contains("did you mean `synchronous`?"));
    assert!(hint(&["tabulate", BUDGET, "--loads", "5V"]).contains("V is a voltage, a current is expected"));
}

#[test]
fn results_go_to_standard_output_without_colour() {
    for format in ["text", "markdown", "json", "csv"] {
        let output = lossbook(&["compare", BUDGET, "--format", format]).output().expect("run");
        assert!(matches!(output.status.code(), Some(0 | 1)), "{format}: {output:?}");
        assert!(!output.stdout.is_empty(), "{format}");
        assert!(!output.stdout.contains(&0x1b) && !output.stderr.contains(&0x1b), "{format}");
    }
}

#[test]
fn colour_comes_when_asked_for_and_goes_with_no_color() {
    let coloured = |command: Command| command.output().expect("run").stdout.contains(&0x1b);
    assert!(coloured(lossbook(&["compare", BUDGET, "--colour", "always"])));
    assert!(!coloured(lossbook(&["compare", BUDGET, "--colour", "never"])));
    assert!(!coloured(lossbook(&["compare", BUDGET]).env("NO_COLOR", "1")));
}

#[test]
fn wrong_input_writes_nothing() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let goal = folder.path().join("out.txt");
    let goal_words = goal.to_str().expect("UTF-8");
    lossbook(&["compare", "no-such.yaml", "-o", goal_words])
        .assert()
        .code(2)
        .stdout_eq("")
        .stderr_eq("...\n[..]no-such.yaml[..]\n...");
    assert!(files_in(folder.path()).is_empty());
}

#[test]
fn an_output_file_is_written_whole() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let goal = folder.path().join("out.md");
    std::fs::write(&goal, "old").expect("written");
    let words = ["compare", BUDGET, "--format", "markdown"];
    let printed = lossbook(&words).output().expect("run");
    let to_file =
        lossbook(&[&words[..], &["-o", goal.to_str().expect("UTF-8")]].concat()).output().expect("run");
    assert!(to_file.stdout.is_empty());
    assert_eq!(to_file.status.code(), printed.status.code());
    assert_eq!(std::fs::read(&goal).expect("read"), printed.stdout);
    assert_eq!(files_in(folder.path()).len(), 1);
}

#[test]
fn an_output_that_cannot_be_written_changes_nothing() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let path = |name: &str| folder.path().join(name).to_str().expect("UTF-8").to_string();
    let protected = path("protected.txt");
    std::fs::write(&protected, "old").expect("written");
    let mut rights = std::fs::metadata(&protected).expect("there").permissions();
    rights.set_readonly(true);
    std::fs::set_permissions(&protected, rights).expect("protected");
    for goal in [path(""), path("none/out.txt"), protected.clone(), path("out/")] {
        lossbook(&["compare", BUDGET, "-o", &goal])
            .assert()
            .code(2)
            .stdout_eq("")
            .stderr_eq("...\nerror: [..] cannot be written: [..]; nothing was changed\n...");
    }
    assert_eq!(std::fs::read(&protected).expect("read"), b"old");
    assert_eq!(files_in(folder.path()).len(), 1);
}

#[test]
fn a_closed_pipe_is_silent() {
    for words in [&["--help"][..], &["template", "budget"], &["tabulate", BUDGET, "--format", "csv"]] {
        let mut child = Process::new(cargo_bin!("lossbook"))
            .args(words)
            .current_dir(env!("CARGO_MANIFEST_DIR"))
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("started");
        // nobody reads: the first write meets a closed pipe
        drop(child.stdout.take());
        let mut said = String::new();
        child.stderr.take().expect("piped").read_to_string(&mut said).expect("UTF-8");
        let code = child.wait().expect("ended").code();
        assert_eq!(code, Some(0), "{words:?}");
        assert!(!said.contains("error") && !said.contains("pipe"), "{words:?}: {said}");
    }
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_an_error() {
    let full = std::fs::File::options().write(true).open("/dev/full").expect("Linux has it");
    let output = Process::new(cargo_bin!("lossbook"))
        .args(["template", "budget"])
        .stdout(full)
        .stderr(Stdio::piped())
        .output()
        .expect("run");
    assert_eq!(output.status.code(), Some(2));
    assert!(String::from_utf8_lossy(&output.stderr).contains("standard output cannot be written"));
}

#[cfg(unix)]
#[test]
fn an_interrupt_ends_with_130_and_a_clean_word() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let pipe = folder.path().join("budget.yaml");
    assert!(Process::new("mkfifo").arg(&pipe).status().expect("mkfifo").success());
    let mut child = Process::new(cargo_bin!("lossbook"))
        .arg("compare")
        .arg(&pipe)
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("started");
    // opening waits for the reader: from then on it waits for words that do not come
    let mut writer = std::fs::File::options().write(true).open(&pipe).expect("opened");
    writer.write_all(b"budget: ").expect("written");
    let sent = Process::new("kill").arg("-INT").arg(child.id().to_string()).status().expect("kill");
    assert!(sent.success());
    let mut said = String::new();
    child.stderr.take().expect("piped").read_to_string(&mut said).expect("UTF-8");
    assert_eq!(child.wait().expect("ended").code(), Some(130));
    assert_eq!(said.trim(), "interrupted");
}

#[test]
fn every_template_passes_the_check_and_is_never_written_over_a_file() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    for kind in ["mosfets", "diodes", "inductors", "capacitors", "controllers", "linear_regulators"] {
        let goal = folder.path().join(format!("{kind}.yaml"));
        let goal = goal.to_str().expect("UTF-8");
        lossbook(&["template", kind, "-o", goal]).assert().code(0).stdout_eq("").stderr_eq("");
        lossbook(&["check", goal])
            .assert()
            .code(0)
            .stderr_eq("")
            .stdout_eq("...\n1 file, 0 budgets, 1 part: no errors, [..]\n");
        lossbook(&["template", kind, "-o", goal])
            .assert()
            .code(2)
            .stdout_eq("")
            .stderr_eq("error: [..] exists, [..]\n...");
    }
    lossbook(&["template", "budget"])
        .assert()
        .code(0)
        .stderr_eq("")
        .stdout_eq("...\n[..]output_voltage: [..]\n...");
}

#[test]
fn a_check_puts_doubts_on_standard_output_and_errors_on_standard_error() {
    lossbook(&["check", "parts", "budgets"])
        .assert()
        .code(0)
        .stderr_eq("")
        .stdout_eq("...\n[..] files, 4 budgets, [..] parts: no errors, [..]\n");
    lossbook(&["check", "budgets", "no-such-folder"])
        .assert()
        .code(2)
        .stdout_eq("")
        .stderr_eq("...\n[..]no-such-folder[..]\n...");
    lossbook(&["check"]).assert().code(2).stdout_eq("");
}
