//! The header of a column: `r_ds_on@4.5V.max [mΩ]` is a key path, points of a list, a limit and a unit.

use crate::hints;
use crate::input::kind::PartKind;
use crate::input::sample::key_names;
use crate::sheet::datum::{CONDITIONS, Datum};
use crate::sheet::form::{Choice, Form, FormList, Key, KeyVisitor, Need, OptionalForm};
use crate::units::Dimension;

/// A step from the part towards a value.
#[derive(Clone, Debug, PartialEq)]
pub(crate) enum Step {
    /// Into the value of a key.
    Key(String),
    /// To the item of a list with these conditions.
    Point(Vec<(&'static str, String)>),
}

/// What a cell of a column is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) enum Leaf {
    /// Name of the part.
    Name,
    /// A number or a word as it stands.
    Plain,
    /// Free text.
    Text,
    /// A number that gets the unit of the header.
    Quantity,
}

/// A column that means something.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Column {
    /// As written.
    pub(crate) header: String,
    /// The way from the part to the value.
    pub(crate) steps: Vec<Step>,
    /// What its cells are.
    pub(crate) leaf: Leaf,
    /// Unit of plain numbers.
    pub(crate) unit: String,
}

/// Names of the limits of a quantity.
const LIMITS: [&str; 3] = ["min", "typ", "max"];

/// Reads the header of a column.
///
/// # Errors
/// What is wrong, and the way out.
pub(crate) fn read(header: &str, kind: PartKind) -> Result<Column, (String, String)> {
    let text = header.trim();
    let (path, unit) = match text.split_once('[') {
        Some((path, unit)) => (path.trim(), unit.trim_end_matches(']').trim().to_owned()),
        None => (text, String::new()),
    };
    if path == "name" {
        return Ok(Column { header: text.into(), steps: Vec::new(), leaf: Leaf::Name, unit });
    }
    let mut finder = Finder { rest: pieces(path), steps: Vec::new(), leaf: None, wrong: None };
    kind.empty_form().keys(&mut finder);
    match (finder.leaf, finder.wrong) {
        (_, Some(wrong)) => Err(wrong),
        (Some((leaf, key)), None) => {
            // a price has the budget's currency, a bare number has no unit
            let unitless =
                key.dimension == Dimension::Number && finder.steps.last() == Some(&Step::Key("typ".into()));
            let unit = if unitless { String::new() } else { unit };
            Ok(Column { header: text.into(), steps: finder.steps, leaf, unit })
        }
        (None, None) => {
            let names = key_names(&mut *kind.empty_form());
            let first = path.split(['.', '@']).next().unwrap_or_default();
            let hint = match hints::nearest(first, names.iter().copied()) {
                Some(near) if near != first => format!("did you mean `{near}`?"),
                _ => "`lossbook template csv` prints a header; take columns of your own out".into(),
            };
            Err(("is no key of this kind of part".into(), hint))
        }
    }
}

/// A key with the points behind it: `r_ds_on@4.5V`.
struct Piece {
    key: String,
    points: Vec<String>,
}

/// Splits at points between keys; the point of a number is followed by a digit.
fn pieces(path: &str) -> Vec<Piece> {
    let mut pieces = Vec::new();
    let mut piece = String::new();
    let chars: Vec<char> = path.chars().collect();
    for (place, c) in chars.iter().enumerate() {
        let before_digit = chars.get(place + 1).is_some_and(char::is_ascii_digit);
        if *c == '.' && !before_digit {
            pieces.push(std::mem::take(&mut piece));
        } else {
            piece.push(*c);
        }
    }
    pieces.push(piece);
    pieces
        .into_iter()
        .map(|piece| {
            let mut parts = piece.split('@').map(|part| part.trim().to_owned());
            Piece { key: parts.next().unwrap_or_default(), points: parts.collect() }
        })
        .collect()
}

/// Finds what the pieces mean in a form.
struct Finder {
    rest: Vec<Piece>,
    steps: Vec<Step>,
    leaf: Option<(Leaf, &'static Key)>,
    wrong: Option<(String, String)>,
}

impl Finder {
    /// The first piece, when it names this key and nothing was found before.
    fn at(&mut self, key: &Key) -> Option<Piece> {
        let open = self.leaf.is_none() && self.wrong.is_none();
        (open && self.rest.first().is_some_and(|piece| piece.key == key.name)).then(|| self.rest.remove(0))
    }

    fn no_points(&mut self, key: &Key, piece: &Piece) -> bool {
        if !piece.points.is_empty() {
            let condition = key.conditions.first().map_or("key", |condition| condition);
            let hint = format!("put the condition in a column of its own, `{}.{condition}`", key.name);
            self.wrong =
                Some((format!("`@` stands behind `{}`, which is no list of points", key.name), hint));
        }
        piece.points.is_empty()
    }

    /// What remains behind a quantity: a limit, a condition, `sigma` or `source`.
    fn quantity(&mut self, key: &'static Key) {
        let last = if self.rest.is_empty() { "typ".to_owned() } else { self.rest.remove(0).key };
        let is_condition = CONDITIONS.iter().any(|(name, _)| *name == last);
        if self.rest.is_empty() && (LIMITS.contains(&last.as_str()) || is_condition || last == "sigma") {
            self.leaf = Some((Leaf::Quantity, key));
        } else if self.rest.is_empty() && last == "source" {
            self.leaf = Some((Leaf::Text, key));
        } else {
            let hint = "limits are .min, .typ and .max; conditions such as .v_ds have a column of their own";
            self.wrong = Some((format!("`{last}` is nothing that `{}` can have", key.name), hint.into()));
            return;
        }
        self.steps.push(Step::Key(last));
    }

    fn inside(&mut self, key: &Key, form: &mut dyn Form) {
        let Some(piece) = self.at(key) else { return };
        if self.no_points(key, &piece) {
            self.steps.push(Step::Key(piece.key));
            form.keys(self);
        }
    }

    /// Assigns points to the keys of an item, in their order; the value is the key after them.
    fn item(&mut self, points: Vec<String>, form: &mut dyn Form) {
        let mut order = Order(Vec::new());
        form.keys(&mut order);
        let mut points = points.into_iter();
        let mut here = Vec::new();
        let mut left = order.0.as_slice();
        while let [(name, nested), more @ ..] = left {
            if *nested || more.is_empty() {
                break;
            }
            let Some(point) = points.next() else { break };
            here.push((*name, point));
            left = more;
        }
        self.steps.push(Step::Point(here));
        if self.rest.is_empty()
            && let [(name, _), ..] = left
        {
            self.rest.push(Piece { key: (*name).to_owned(), points: points.collect() });
        }
        form.keys(self);
    }
}

impl KeyVisitor for Finder {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        if let Some(piece) = self.at(key)
            && self.no_points(key, &piece)
        {
            self.steps.push(Step::Key(piece.key));
            self.quantity(key);
        }
    }

    fn optional(&mut self, key: &'static Key, slot: &mut Option<Datum>) {
        self.required(key, slot.get_or_insert_default());
    }

    fn inline(&mut self, key: &'static Key, _: &mut Datum) {
        let next = self.rest.first().map(|piece| piece.key.clone());
        let own = next.as_ref().is_none_or(|next| {
            LIMITS.contains(&next.as_str()) || CONDITIONS.iter().any(|(name, _)| name == next)
        });
        if self.leaf.is_none() && self.wrong.is_none() && own {
            self.quantity(key);
        }
    }

    fn data(&mut self, key: &'static Key, _: Need, _: &mut Vec<Datum>) {
        let Some(piece) = self.at(key) else { return };
        self.steps.push(Step::Key(piece.key));
        let points = key.conditions.iter().copied().zip(piece.points.iter().cloned()).collect::<Vec<_>>();
        if piece.points.len() > key.conditions.len() {
            self.wrong = Some((
                format!("`{}` has only {} condition", key.name, key.conditions.len()),
                format!("write `{}@value`", key.name),
            ));
            return;
        }
        self.steps.push(Step::Point(points));
        self.quantity(key);
    }

    fn flag(&mut self, key: &'static Key, _: &mut Option<bool>) {
        if let Some(piece) = self.at(key) {
            self.steps.push(Step::Key(piece.key));
            self.leaf = Some((Leaf::Plain, key));
        }
    }

    fn text(&mut self, key: &'static Key, _: &mut Option<String>) {
        if let Some(piece) = self.at(key) {
            self.steps.push(Step::Key(piece.key));
            self.leaf = Some((Leaf::Text, key));
        }
    }

    fn form(&mut self, key: &'static Key, slot: &mut dyn Form) {
        self.inside(key, slot);
    }

    fn optional_form(&mut self, key: &'static Key, slot: &mut dyn OptionalForm) {
        self.inside(key, slot.open());
    }

    fn forms(&mut self, key: &'static Key, _: Need, slot: &mut dyn FormList) {
        let Some(piece) = self.at(key) else { return };
        self.steps.push(Step::Key(piece.key));
        self.item(piece.points, slot.push());
    }

    fn choice(&mut self, key: &'static Key, _: Need, slot: &mut dyn Choice) {
        let Some(piece) = self.at(key) else { return };
        self.steps.push(Step::Key(piece.key));
        if self.rest.is_empty() {
            self.leaf = Some((Leaf::Plain, key));
            return;
        }
        let word = self.rest.remove(0).key;
        let option = slot.options().iter().position(|(known, takes)| *known == word && *takes);
        match option.and_then(|option| slot.pick(option)) {
            Some(form) => {
                self.steps.push(Step::Key(word));
                form.keys(self);
            }
            None => {
                let words: Vec<&str> = slot.options().iter().map(|(word, _)| *word).collect();
                let hint = format!("a column `{}` holds one of {}", key.name, words.join(", "));
                self.wrong = Some((format!("`{word}` takes no values"), hint));
            }
        }
    }
}

/// Keys of an item in their order, and whether each holds more than a quantity.
struct Order(Vec<(&'static str, bool)>);

impl KeyVisitor for Order {
    fn required(&mut self, key: &'static Key, _: &mut Datum) {
        self.0.push((key.name, false));
    }

    fn optional(&mut self, _: &'static Key, _: &mut Option<Datum>) {}

    fn inline(&mut self, _: &'static Key, _: &mut Datum) {}

    fn data(&mut self, key: &'static Key, _: Need, _: &mut Vec<Datum>) {
        self.0.push((key.name, true));
    }

    fn flag(&mut self, _: &'static Key, _: &mut Option<bool>) {}

    fn text(&mut self, _: &'static Key, _: &mut Option<String>) {}

    fn form(&mut self, key: &'static Key, _: &mut dyn Form) {
        self.0.push((key.name, true));
    }

    fn optional_form(&mut self, _: &'static Key, _: &mut dyn OptionalForm) {}

    fn forms(&mut self, key: &'static Key, _: Need, _: &mut dyn FormList) {
        self.0.push((key.name, true));
    }

    fn choice(&mut self, _: &'static Key, _: Need, _: &mut dyn Choice) {}
}
