use super::*;
use crate::report::Column;

fn text(document: &Document, width: usize, colour: bool) -> String {
    let mut out = Vec::new();
    Text { width, colour }.render(document, &mut out).expect("written to memory");
    String::from_utf8(out).expect("UTF-8")
}

fn ledger() -> Document {
    let mut document = Document::new("Camera node");
    document.verdict("Synchronous leads.");
    document.fact("load", Cell::text("6 A"));
    document.fact("hottest part", Cell::temperature(131.0).flagged(Severity::Critical, "rating 125 °C"));
    document.notice(Severity::Warning, "no core data");
    let columns = vec![
        Column::text("part"),
        Column::text("mechanism"),
        Column::number("loss"),
        Column::number("share"),
    ];
    let mut table = Table::new("synchronous, 24 V, 6 A", columns);
    let cell = |watts: f64| [Cell::watts(watts), Cell::share(watts / 0.36)];
    let row = |part: &str, mechanism: &str| [Cell::text(part), Cell::text(mechanism)];
    table.row([row("high side", "conduction"), cell(0.0475)].concat());
    table.row([row("inductor", "winding"), cell(0.3125)].concat());
    table.row([row("inductor", "core"), [Cell::missing("needs core"), Cell::Blank]].concat());
    table.total(vec![
        Cell::text("total"),
        Cell::Blank,
        Cell::watts(0.36).flagged(Severity::Note, ""),
        Cell::share(1.0),
    ]);
    document.table(table);
    document
}

#[test]
fn a_page_is_plain_and_aligned() {
    let expected = "\
Camera node
═══════════

Synchronous leads.

load          6 A
hottest part  131.0 °C !! (rating 125 °C)

warning: no core data

synchronous, 24 V, 6 A
part       mechanism   loss [mW]  share [%]
───────────────────────────────────────────
high side  conduction   47.5           13.2
inductor   winding     312.5           86.8
inductor   core            — [1]
───────────────────────────────────────────
total                  360.0 *        100.0
[1] needs core
* note
";
    let shown = text(&ledger(), 100, false);
    assert_eq!(
        shown.replace('\u{a0}', " ").lines().map(str::trim_end).collect::<Vec<_>>().join("\n") + "\n",
        expected
    );
}

#[test]
fn colour_only_when_told_and_the_same_words() {
    let (plain, colour) = (text(&ledger(), 100, false), text(&ledger(), 100, true));
    assert!(!plain.contains('\u{1b}'));
    assert!(colour.contains("\u{1b}[33mwarning:\u{1b}[0m"));
    let mut stripped = colour;
    for sequence in ["\u{1b}[1m", "\u{1b}[33m", "\u{1b}[1;31m", "\u{1b}[0m"] {
        stripped = stripped.replace(sequence, "");
    }
    assert_eq!(stripped, plain);
}

#[test]
fn names_cannot_paint_the_terminal() {
    let mut document = Document::new("a\u{1b}[2Jb");
    document.paragraph("c\u{202e}d\u{2061}");
    document.fact("e\u{7}", Cell::text("f\rg"));
    let mut table = Table::new("h\u{1b}", vec![Column::text("i\u{1b}").under("j\u{1b}")]);
    table.row(vec![Cell::text("k\u{1b}\n")]);
    table.row(vec![Cell::missing("l\u{1b}")]);
    document.table(table);
    let shown = text(&document, 100, false);
    assert!(shown.chars().all(|c| c == '\n' || !crate::printable::is_unprintable(c)), "{shown:?}");
}

#[test]
fn sentences_and_tables_keep_to_the_width() {
    let mut document = Document::new("");
    document.paragraph("word ".repeat(60).trim_end());
    document.list(vec!["item ".repeat(40).trim_end().into()]);
    let mut columns = vec![Column::text("load")];
    for volts in ["19 V", "24 V", "29 V", "33 V"] {
        columns.push(Column::number("efficiency").under(volts));
        columns.push(Column::number("loss of the stage").under(volts));
    }
    columns.push(Column::text("remarks"));
    let mut table = Table::new("caption", columns);
    for _ in 0..3 {
        let pairs = (0..4).flat_map(|_| [Cell::efficiency(0.91), Cell::watts(1.5)]);
        let remarks = Cell::text("one of many remarks that a reader may find of use here");
        table.row(std::iter::once(Cell::text("6 A")).chain(pairs).chain([remarks]).collect());
    }
    document.table(table);
    for width in [60, 80, 100, 120, 200] {
        let shown = text(&document, width, false);
        let widest = shown.lines().map(|line| line.width()).max().unwrap_or(0);
        assert!(widest <= width, "{widest} > {width}\n{shown}");
        assert_eq!(shown.matches("91.00").count(), 12, "{shown}");
    }
}

#[test]
fn a_table_without_rows_or_columns_is_harmless() {
    let mut document = Document::new("t");
    document.table(Table::new("empty", vec![Column::text("a"), Column::number("b")]));
    document.table(Table::new("none", Vec::new()));
    assert!(text(&document, 80, false).contains("empty"));
}
