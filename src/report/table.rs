//! Tables of typed cells.

use super::Cell;

/// A table with one caption line.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Table {
    /// One line that says all that is needed to paste the table elsewhere.
    pub caption: String,
    /// Columns from left to right.
    pub columns: Vec<Column>,
    /// Rows from top to bottom.
    pub rows: Vec<Row>,
    /// Leading columns that name a row; repeated when a table is too wide and has to be split.
    pub keys: usize,
}

/// A column.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    /// What the cells are.
    pub title: String,
    /// What this column shares with its neighbours, such as an input voltage; stands above the title.
    pub over: Option<String>,
    /// Where the unit stands.
    pub units: Units,
    /// How cells are aligned.
    pub alignment: Alignment,
}

/// Where the unit of a number stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Units {
    /// Beside each number, each with the prefix that suits it: "44.6 mW".
    InCells,
    /// In the title, with one prefix for all columns of this dimension: `loss [W]`, digits comparable.
    InTitle,
}

/// How cells of a column are aligned.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Alignment {
    /// Words.
    Left,
    /// Numbers.
    Right,
}

/// What a row is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RowKind {
    /// One of many.
    Body,
    /// Sum of some rows above it.
    Subtotal,
    /// Sum of the table.
    Total,
}

/// A row; cells that are left out at its end are blank.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    /// What it is.
    pub kind: RowKind,
    /// Cells from left to right.
    pub cells: Vec<Cell>,
}

impl Column {
    /// Words, aligned left.
    pub fn text(title: impl Into<String>) -> Column {
        Column { title: title.into(), over: None, units: Units::InCells, alignment: Alignment::Left }
    }

    /// Numbers of one kind, aligned right, the unit in the title and one prefix for all.
    pub fn number(title: impl Into<String>) -> Column {
        Column { units: Units::InTitle, alignment: Alignment::Right, ..Column::text(title) }
    }

    /// Numbers, aligned right, each with its own unit and prefix.
    pub fn quantity(title: impl Into<String>) -> Column {
        Column { alignment: Alignment::Right, ..Column::text(title) }
    }

    /// The same under a heading shared with its neighbours.
    #[must_use]
    pub fn under(mut self, over: impl Into<String>) -> Column {
        self.over = Some(over.into());
        self
    }
}

impl Table {
    /// A table without rows; its first column names the rows.
    pub fn new(caption: impl Into<String>, columns: Vec<Column>) -> Table {
        Table { caption: caption.into(), columns, rows: Vec::new(), keys: 1 }
    }

    /// The same with more or fewer leading columns that name a row.
    #[must_use]
    pub fn with_keys(mut self, keys: usize) -> Table {
        self.keys = keys;
        self
    }

    /// Adds a row of the body.
    pub fn row(&mut self, cells: Vec<Cell>) {
        self.rows.push(Row { kind: RowKind::Body, cells });
    }

    /// Adds the sum of some rows.
    pub fn subtotal(&mut self, cells: Vec<Cell>) {
        self.rows.push(Row { kind: RowKind::Subtotal, cells });
    }

    /// Adds the sum of the table.
    pub fn total(&mut self, cells: Vec<Cell>) {
        self.rows.push(Row { kind: RowKind::Total, cells });
    }
}
