//! A budget file to a [`Budget`]: every key read, part names resolved, every fault collected.

use std::collections::HashSet;
use std::path::{Path, PathBuf};
use std::sync::Arc;

use super::budget_checks as checks;
use super::budget_grid::{self, RatedLoad, value};
use super::budget_keys as keys;
use super::error::Blame;
use super::error::InputError;
use super::fields::Fields;
use super::kind::PartKind;
use super::library::{self, Loaded};
use super::node::Node;
use super::notes::Notes;
use super::outline::{Outline, guard};
use super::part_file::{Attention, is_budget};
use super::path::Trail;
use super::place::{Source, resolve};
use super::shelf::Shelf;
use super::{budget_stages, budget_terms as terms, shortlist, yaml};
use crate::budget::{Budget, InputFile};
use crate::files;
use crate::grid::{AxisName, OperatingPoint};
use crate::hints::Vocabulary;
use crate::sheet::BoardSheet;
use crate::stage::StageSheet;

/// Keys at the top of a budget, in the order of the documentation.
pub(crate) const KEYS: [&str; 17] = [
    "budget",
    "about",
    "source",
    "parts",
    "currency",
    "output_voltage",
    "rated_load",
    "grid",
    "headline",
    "requirements",
    "stages",
    "board",
    "profile",
    "battery",
    "bench",
    "shortlist",
    "derating",
];

/// Reads a budget and the library it names; the budget is there when none of the faults is an error.
pub(crate) fn load(path: &Path) -> (Option<Budget>, Vec<InputError>) {
    let file = match files::read_text(path) {
        Ok(file) => file,
        Err(fault) => {
            return (None, vec![InputError::of_file(path, format!("cannot be read: {fault}"), fault.hint())]);
        }
    };
    match guard(path, &file.text) {
        Ok(outline) => load_text(path, &file, &outline),
        Err(faults) => (None, faults),
    }
}

/// Reads the text of a budget that has passed the guard.
pub(crate) fn load_text(
    path: &Path,
    file: &files::TextFile,
    outline: &Outline,
) -> (Option<Budget>, Vec<InputError>) {
    let source = Source { file: path, text: &file.text, first_line: 1, above: 0, library: false };
    if !is_budget(outline) {
        return (None, vec![no_budget(path, outline)]);
    }
    let node = match yaml::read(&file.text) {
        Ok(node) => node,
        Err(fault) => return (None, vec![source.yaml_fault(&fault)]),
    };
    let mut notes = Notes::default();
    let input = InputFile { path: path.to_path_buf(), sha256: file.sha256.clone() };
    let (budget, library_faults) = BudgetReader::read(&node, input, &mut notes);
    let mut faults = resolve(notes.list, &source);
    faults.sort_by_key(|fault| (fault.line, fault.column));
    faults.extend(library_faults);
    (budget, faults)
}

fn no_budget(path: &Path, outline: &Outline) -> InputError {
    let parts = outline.top.iter().any(|(key, _)| PartKind::from_key(key).is_some());
    let (reason, hint) = match (outline.top.is_empty(), parts) {
        (true, _) => ("the file holds nothing", "a budget begins with `budget:` and its title"),
        (_, true) => (
            "the file is a library of parts, not a budget",
            "name a budget; it names its parts with `parts:`",
        ),
        _ => (
            "the file is no budget: none of its keys is known",
            "a budget begins with `budget:` and its title",
        ),
    };
    InputError::of_file(path, reason, hint)
}

struct BudgetReader<'a, 'n> {
    fields: Fields<'n, 'a>,
    notes: &'a mut Notes,
}

impl<'a, 'n> BudgetReader<'a, 'n> {
    fn read(node: &'n Node, input: InputFile, notes: &'a mut Notes) -> (Option<Budget>, Vec<InputError>) {
        const TOP: &Trail<'static> = &Trail::TOP;
        let Some(fields) = Fields::open(node, TOP, "`budget:` and its title", notes) else {
            return (None, Vec::new());
        };
        let mut reader = BudgetReader { fields, notes };
        let mut loaded = reader.library(&input.path, node);
        let library_faults = std::mem::take(&mut loaded.faults);
        let complete = loaded.is_complete(&library_faults);
        let budget = reader.sections(loaded, complete, input);
        (budget, library_faults)
    }

    fn library(&mut self, file: &Path, node: &Node) -> Loaded {
        let Some(parts) = self.fields.require("parts", "../parts", self.notes) else {
            return Loaded::default();
        };
        let folder = file.parent().unwrap_or(Path::new(""));
        let mut paths: Vec<PathBuf> = Vec::new();
        let trail = self.fields.trail.key("parts");
        let items = match parts {
            Node::List(items) if !items.is_empty() => items.iter().enumerate().collect(),
            single => vec![(usize::MAX, single)],
        };
        for (index, item) in items {
            let trail = if index == usize::MAX { trail } else { trail.item(index) };
            match item {
                Node::Text(text) => {
                    let path = files::join(folder, Path::new(&**text));
                    if files::is_folder(&path) {
                        paths.push(path);
                    } else {
                        let reason = format!("there is no folder {}", path.display());
                        let hint = "`parts` names a folder of parts, relative to the folder of the budget";
                        self.notes.value_error(&trail, item, Blame::new(reason, hint));
                    }
                }
                other => {
                    let reason = format!("{} stands here; the name of a folder is expected", other.words());
                    self.notes.value_error(&trail, other, Blame::new(reason, "write `parts: ../parts`"));
                }
            }
        }
        let mut mentioned = HashSet::new();
        if let Some(stages) = node.get("stages") {
            mention(stages, &mut mentioned);
        }
        library::load(&paths, &Attention::Named(mentioned))
    }

    fn sections(&mut self, loaded: Loaded, complete: bool, input: InputFile) -> Option<Budget> {
        let name = self.title();
        let about = self.text("about");
        let source = self.text("source");
        let currency = self.text("currency");
        let output_voltage = self.quantity(&keys::OUTPUT_VOLTAGE);
        let rated = self.rated_load();
        let grid = self.required("grid", "a mapping of axes", |node, trail, notes| {
            budget_grid::grid(node, rated, trail, notes)
        });
        let folders: Vec<String> = folders_of(&loaded.inputs);
        let shelf =
            Shelf { library: &loaded.library, broken: &loaded.broken, complete, folders: folders.join(", ") };
        let stages = self.required("stages", "the candidates", |node, trail, notes| {
            Some(budget_stages::read(node, &shelf, trail, notes))
        });
        let stages = stages.unwrap_or_default();
        let headline =
            self.required("headline", "{input_voltage: 24 V, load: 6 A, ambient: 60 °C}", |n, t, notes| {
                headline(n, rated, t, notes)
            });
        let frequency = grid.as_ref().map_or(0.0, |grid| {
            let named =
                self.fields.peek("headline").is_none_or(|node| node.get("switching_frequency").is_some());
            checks::count(&stages, grid, self.notes);
            let chosen = headline.as_ref().map_or(0.0, |headline| headline.switching_frequency);
            if chosen > 0.0 {
                checks::headline_frequency(&stages, grid, chosen, self.notes);
            }
            checks::frequency(&stages, grid, named, self.notes)
        });
        let requirements =
            self.optional("requirements", |n, t, notes| terms::requirements(n, rated, t, notes));
        let board = self.optional("board", terms::board);
        let profile = self.optional("profile", |n, t, notes| terms::profile(n, rated, t, notes));
        let battery = self.optional("battery", terms::battery).flatten();
        let bench = self.optional("bench", terms::bench).flatten();
        let shortlist = self.shortlist(&shelf, &stages);
        let derating = self.optional("derating", terms::derating).unwrap_or_default();
        let (board, coupling) = board.unwrap_or((BoardSheet::default(), Vec::new()));
        checks::coupling(&stages, &coupling, self.notes);
        let fields = std::mem::replace(&mut self.fields, Fields::empty());
        fields.close(|| KEYS.to_vec(), self.notes);
        if self.notes.errors() > 0 {
            return None;
        }
        let mut headline = headline?;
        if headline.switching_frequency == 0.0 {
            headline.switching_frequency = frequency;
        }
        let mut inputs = vec![input];
        inputs.extend(loaded.inputs);
        Some(Budget {
            name: name?,
            about,
            source,
            currency,
            output_voltage: output_voltage?,
            rated_load: match rated {
                RatedLoad::Stated(load) => Some(load),
                _ => None,
            },
            grid: grid?,
            headline,
            requirements: requirements.unwrap_or_default(),
            stages,
            board,
            coupling,
            profile: profile.unwrap_or_default(),
            battery,
            bench,
            values: crate::worst::ValueSet::default(),
            shortlist,
            derating,
            inputs,
            library: Arc::new(loaded.library),
        })
    }

    fn required<T>(
        &mut self,
        key: &str,
        example: &str,
        read: impl FnOnce(&Node, &Trail<'_>, &mut Notes) -> Option<T>,
    ) -> Option<T> {
        let node = self.fields.require(key, example, self.notes)?;
        read(node, &self.fields.trail.key(key), self.notes)
    }

    fn optional<T>(&mut self, key: &str, read: impl FnOnce(&Node, &Trail<'_>, &mut Notes) -> T) -> Option<T> {
        let node = self.fields.take(key)?;
        Some(read(node, &self.fields.trail.key(key), self.notes))
    }

    fn title(&mut self) -> Option<String> {
        let node = self.fields.require("budget", "a title of the rail", self.notes)?;
        let title = node.scalar().filter(|title| !title.trim().is_empty());
        if title.is_none() {
            let blame = Blame::new("a title is expected", "write `budget: Camera node, 3.3 V rail`");
            self.notes.value_error(&self.fields.trail.key("budget"), node, blame);
        }
        title
    }

    fn text(&mut self, key: &str) -> Option<String> {
        let node = self.fields.take(key)?;
        if matches!(node, Node::List(_) | Node::Map(_)) {
            let reason = format!("{} stands here; text is expected", node.words());
            let blame = Blame::new(reason, "put a text with `: ` or brackets in quotes");
            self.notes.value_error(&self.fields.trail.key(key), node, blame);
        }
        node.scalar().filter(|text| !text.is_empty())
    }

    fn quantity(&mut self, key: &'static crate::sheet::form::Key) -> Option<f64> {
        self.required(key.name, key.example, |node, trail, notes| value(node, key, trail, notes))
    }

    fn rated_load(&mut self) -> RatedLoad {
        let key = &keys::RATED_LOAD;
        match self.optional(key.name, |node, trail, notes| value(node, key, trail, notes)) {
            None => RatedLoad::Absent,
            Some(None) => RatedLoad::Broken,
            Some(Some(load)) => RatedLoad::Stated(load),
        }
    }

    fn shortlist(&mut self, shelf: &Shelf<'_>, stages: &[StageSheet]) -> Option<crate::budget::Shortlist> {
        let names: Vec<&str> = match self.fields.peek("stages") {
            Some(Node::Map(entries)) => entries.iter().map(|(name, _)| &**name).collect(),
            _ => Vec::new(),
        };
        let context = shortlist::Context { shelf, names: &names, stages };
        self.optional("shortlist", |node, trail, notes| shortlist::read(node, context, trail, notes))
            .flatten()
    }
}

/// Texts below a node: among them are the names of all parts that it mentions.
fn mention(node: &Node, names: &mut HashSet<Box<str>>) {
    match node {
        Node::List(items) => items.iter().for_each(|item| mention(item, names)),
        Node::Map(entries) => entries.iter().for_each(|(_, node)| mention(node, names)),
        single => {
            names.extend(single.scalar().map(Into::into));
        }
    }
}

/// Where single numbers are quoted; its frequency is 0 when it names none.
fn headline(node: &Node, rated: RatedLoad, trail: &Trail<'_>, notes: &mut Notes) -> Option<OperatingPoint> {
    let like = "`{input_voltage: 24 V, load: 6 A, ambient: 60 °C}`";
    let mut fields = Fields::open(node, trail, like, notes)?;
    for axis in [AxisName::InputVoltage, AxisName::Load, AxisName::Ambient] {
        if !fields.has(axis.name()) {
            fields.require(axis.name(), keys::of_axis(axis).example, notes);
        }
    }
    let point = budget_grid::point(&mut fields, rated, notes);
    fields.close_with(Some(Vocabulary::Axis), || crate::grid::ALL_AXES.map(AxisName::name).to_vec(), notes);
    Some(OperatingPoint {
        input_voltage: point.input_voltage?,
        load: point.load?,
        ambient: point.ambient?,
        switching_frequency: point.switching_frequency.unwrap_or(0.0),
    })
}

fn folders_of(inputs: &[InputFile]) -> Vec<String> {
    let mut folders: Vec<String> = Vec::new();
    for input in inputs {
        let folder = input.path.parent().unwrap_or(Path::new(".")).display().to_string();
        if !folders.contains(&folder) {
            folders.push(folder);
        }
    }
    folders
}

impl Loaded {
    /// False when a part may be missing because its file could not be read.
    fn is_complete(&self, faults: &[InputError]) -> bool {
        let unread =
            |fault: &InputError| fault.severity == super::error::Severity::Error && fault.part.is_empty();
        !self.inputs.is_empty() && !faults.iter().any(unread)
    }
}
