//! Starter files: every key of a kind of part with an example, optional ones marked or commented out.

use super::datum;
use super::kind::PartKind;
use super::sample::{list_sample, sample};
use crate::sheet::datum::Datum;
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};

/// What there are starter files of.
pub const TEMPLATES: [&str; 7] =
    ["budget", "mosfets", "diodes", "inductors", "capacitors", "controllers", "linear_regulators"];

/// A commented starter file; `None` for anything but [`TEMPLATES`].
pub fn template(kind: &str) -> Option<String> {
    if kind == "budget" {
        return Some(include_str!("budget_template.yaml").to_string());
    }
    let kind = PartKind::from_key(kind)?;
    let name = format!("my-{}", kind.words().split_once(' ')?.1.to_lowercase().replace(' ', "-"));
    let mut writer = Writer(Vec::new());
    kind.empty_form().keys(&mut writer);
    let mut text = format!(
        "# A starter for {}. Put the values of your part in the place of these, which are invented.\n\
         # Keys marked optional may be taken out; those behind a # are optional and not in use.\n\n{}:\n  {name}:\n",
        kind.plural(),
        kind.key(),
    );
    for Line { live, content, comment } in writer.0 {
        let mark = if live { "" } else { "# " };
        text.push_str(&format!("{:<50}  # {comment}\n", format!("    {mark}{content}")));
    }
    Some(text)
}

/// A key with its example and what it is.
struct Line {
    live: bool,
    content: String,
    comment: String,
}

struct Writer(Vec<Line>);

impl Writer {
    fn add(&mut self, key: &Key, need: Need, example: &str) {
        let mut comment = String::new();
        if need == Need::Optional {
            comment.push_str("optional: ");
        }
        comment.push_str(key.about);
        if !key.absent.is_empty() {
            comment.push_str("; ");
            comment.push_str(key.absent);
        }
        let live = need == Need::Required || key.starter;
        self.0.push(Line { live, content: format!("{}: {example}", key.name), comment });
    }
}

impl KeyVisitor for Writer {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        self.add(key, Need::Required, &datum::example(key));
    }

    fn optional(&mut self, key: &'static Key, _: &mut Option<Datum>) {
        self.add(key, Need::Optional, &datum::example(key));
    }

    fn inline(&mut self, key: &'static Key, _: &mut Datum) {
        self.add(key, Need::Required, key.example);
    }

    fn data(&mut self, key: &'static Key, need: Need, _: &mut Vec<Datum>) {
        self.add(key, need, &datum::example(key));
    }

    fn flag(&mut self, key: &'static Key, _: &mut Option<bool>) {
        self.add(key, Need::Optional, key.example);
    }

    fn text(&mut self, key: &'static Key, _: &mut Option<String>) {
        let content = format!("{}: {}", key.name, key.about);
        self.0.push(Line { live: true, content, comment: "optional text".to_string() });
    }

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.add(key, Need::Required, &sample(slot));
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        self.add(key, Need::Optional, &sample(slot.open()));
    }

    fn forms(&mut self, key: &'static Key, need: Need, slot: &mut dyn FormList) {
        let example = list_sample(key, slot);
        self.add(key, need, &example);
    }

    fn choice(&mut self, key: &'static Key, need: Need, _: &mut dyn Choice) {
        self.add(key, need, key.example);
    }
}

#[cfg(test)]
mod tests {
    use super::super::{check_path, load_budget};
    use super::*;
    use crate::files::write_whole;

    #[test]
    fn every_starter_reads_back_without_error() {
        let folder = tempfile::tempdir().expect("a temporary folder");
        let parts = folder.path().join("parts");
        std::fs::create_dir(&parts).expect("made");
        for kind in TEMPLATES {
            let text = template(kind).expect(kind);
            let place = if kind == "budget" { folder.path() } else { &parts };
            let path = place.join(format!("{kind}.yaml"));
            write_whole(&path, text.as_bytes()).expect("written");
            if kind != "budget" {
                check_path(&path).unwrap_or_else(|errors| panic!("{}\n{text}", errors.render(false)));
            }
        }
        let (budget, warnings) = load_budget(&folder.path().join("budget.yaml"))
            .unwrap_or_else(|errors| panic!("{}", errors.render(false)));
        assert_eq!(budget.stages.len(), 3);
        // a starter keeps to one temperature of v_f, and is told so
        let doubts = warnings.iter().filter(|warning| !warning.path.ends_with("v_f"));
        assert_eq!(doubts.count(), 0, "{warnings:#?}");
    }

    #[test]
    fn lines_behind_a_mark_are_keys_too() {
        for kind in TEMPLATES.into_iter().skip(1) {
            let kind = PartKind::from_key(kind).expect("a kind");
            let text = template(kind.key()).expect("a template");
            for name in super::super::sample::key_names(&mut *kind.empty_form()) {
                let found = text
                    .lines()
                    .any(|line| line.trim_start().trim_start_matches("# ").starts_with(&format!("{name}: ")));
                assert!(found, "{name} in\n{text}");
            }
        }
        assert_eq!(template("resistors"), None);
    }

    #[test]
    fn the_budget_starter_shows_every_key() {
        let text = template("budget").expect("a template");
        for key in super::super::budget::KEYS {
            let found =
                text.lines().any(|line| line.trim_start_matches("# ").starts_with(&format!("{key}:")));
            assert!(found, "{key}");
        }
    }
}
