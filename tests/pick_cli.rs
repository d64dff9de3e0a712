//! `lossbook pick` and `lossbook import` as commands: exit codes, slices as files, an interrupt.

mod shortlists;

use std::path::Path;
use std::process::{Command, Output, Stdio};

use shortlists::Shape;

fn lossbook(folder: &Path, words: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_lossbook")).current_dir(folder).args(words).output().expect("it runs")
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).expect("UTF-8")
}

#[test]
fn slices_written_as_files_merge_to_one_run() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    shortlists::write(folder.path(), Shape::small(1));
    let here = |words: &[&str]| lossbook(folder.path(), words);
    for number in 1..=3 {
        let (slice, file) = (format!("{number}/3"), format!("slice-{number}.json"));
        let output = here(&["pick", "rail.yaml", "--slice", &slice, "--format", "json", "-o", &file]);
        assert!(output.status.code().is_some_and(|code| code < 2), "{}", text(&output.stderr));
    }
    let files = ["slice-3.json", "slice-1.json", "slice-2.json"];
    let merged = here(&[&["pick", "--format", "csv", "--merge"], &files[..]].concat());
    let whole = here(&["pick", "rail.yaml", "--format", "csv"]);
    assert_eq!(text(&merged.stdout), text(&whole.stdout));
    assert_eq!(merged.status, whole.status);
    let ranking = |output: Output| {
        let all = text(&output.stdout);
        all.split("Ranking")
            .nth(1)
            .expect("a ranking")
            .split("Left out")
            .next()
            .unwrap_or_default()
            .to_owned()
    };
    let with_budget = here(&[&["pick", "rail.yaml", "--merge"], &files[..]].concat());
    assert_eq!(ranking(with_budget), ranking(here(&["pick", "rail.yaml"])));

    let refused = here(&["pick", "--merge", "slice-1.json", "slice-2.json"]);
    assert_eq!(refused.status.code(), Some(2));
    assert!(text(&refused.stderr).contains("3/3"), "{}", text(&refused.stderr));
    let refused = here(&["pick", "--merge", "rail.yaml"]);
    assert!(text(&refused.stderr).contains("is no slice"), "{}", text(&refused.stderr));
}

#[test]
fn threads_and_formats_do_not_change_the_ranking() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    shortlists::write(folder.path(), Shape { mosfets: 9, ..Shape::small(3) });
    let json = |threads| {
        text(&lossbook(folder.path(), &["pick", "rail.yaml", "--threads", threads, "-f", "json"]).stdout)
    };
    assert_eq!(json("1"), json("3"));
    let markdown = lossbook(folder.path(), &["pick", "rail.yaml", "-f", "markdown"]);
    assert!(text(&markdown.stdout).contains("## Ranking"));
}

/// Ticks of processor time that a process has used, as the kernel counts them.
#[cfg(target_os = "linux")]
fn ticks(process: u32) -> u64 {
    let stat = lossbook::files::read_text(Path::new(&format!("/proc/{process}/stat")));
    let after_name = stat.ok().and_then(|file| Some(file.text.rsplit_once(')')?.1.to_owned()));
    let field = after_name.and_then(|fields| fields.split_whitespace().nth(11)?.parse().ok());
    field.unwrap_or(0)
}

#[cfg(target_os = "linux")]
#[test]
fn an_interrupt_gives_the_best_so_far() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    shortlists::write(
        folder.path(),
        Shape { mosfets: 150, inductors: 3, trouble: 0.0, loads: 10, ..Shape::small(2) },
    );
    let child = Command::new(env!("CARGO_BIN_EXE_lossbook"))
        .current_dir(folder.path())
        .args(["pick", "rail.yaml", "--exhaustive", "-f", "json"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("it runs");
    // the search has begun once half a second of processor time is used; the whole takes many times that
    while ticks(child.id()) < 50 {
        std::thread::yield_now();
    }
    let kill = Command::new("kill").args(["-INT", &child.id().to_string()]).status().expect("kill runs");
    assert!(kill.success());
    let output = child.wait_with_output().expect("its words");
    assert_eq!(output.status.code(), Some(130), "{}", text(&output.stderr));
    let json: serde_json::Value = serde_json::from_str(&text(&output.stdout)).expect("JSON");
    assert_eq!(json["complete"], false);
}

#[test]
fn import_writes_all_or_nothing() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let here = |words: &[&str]| lossbook(folder.path(), words);
    let table = text(&here(&["template", "csv"]).stdout);
    let write = |name: &str, text: &str| {
        lossbook::files::write_whole(&folder.path().join(name), text.as_bytes()).expect("written")
    };
    write("mosfets.csv", &table);
    let output = here(&["import", "mosfets.csv", "-o", "mine.yaml"]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert!(here(&["check", "mine.yaml"]).status.success());
    let row = table.lines().nth(1).expect("a row");
    write("mosfets.csv", &format!("{table}{}\n", row.replace("my-mosfet", "bad").replace(",42,", ",42 V,")));
    let before = lossbook::files::read_text(&folder.path().join("mine.yaml")).expect("there");
    let output = here(&["import", "mosfets.csv", "-o", "mine.yaml"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        text(&output.stderr).contains("mosfets.csv: row 3, column AG `r_th_ja [K/W]`, bad"),
        "{}",
        text(&output.stderr)
    );
    assert_eq!(lossbook::files::read_text(&folder.path().join("mine.yaml")).expect("there"), before);
    assert_eq!(here(&["import", "mosfets.csv", "-o", "mine.yaml", "--skip-bad"]).status.code(), Some(0));
    write("typed.yaml", "mosfets: {}\n");
    let output = here(&["import", "mosfets.csv", "-o", "typed.yaml", "--skip-bad"]);
    assert!(text(&output.stderr).contains("would be lost"), "{}", text(&output.stderr));
    assert!(text(&here(&["import", "list.csv"]).stderr).contains("--kind"));
}
