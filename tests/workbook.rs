//! Spreadsheets, opened again with an independent reader.
#![cfg(feature = "xlsx")]

use std::io::Cursor;
use std::path::PathBuf;

use calamine::{Data, Reader, Xlsx};
use lossbook::answer::Answer;
use lossbook::budget::Budget;
use lossbook::sweep::Watch;
use lossbook::tabulate::{Request, answer};
use lossbook::{files, input};

fn load(path: &str) -> Budget {
    let path = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join(path);
    input::load_budget(&path).unwrap_or_else(|errors| panic!("{errors}")).0
}

fn bytes(budget: &Budget) -> Vec<u8> {
    let (request, watch) = (Request::default(), Watch::default());
    answer(budget, &request, &watch).spreadsheet().expect("tabulate has one").expect("made")
}

fn open(bytes: Vec<u8>) -> Xlsx<Cursor<Vec<u8>>> {
    Xlsx::new(Cursor::new(bytes)).expect("readable")
}

#[test]
fn sheets_hold_the_numbers_of_the_csv() {
    let root = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("budgets");
    for path in files::list_yaml(&root).expect("the shipped budgets") {
        let budget = input::load_budget(&path).expect("loads").0;
        let (request, watch) = (Request::default(), Watch::default());
        let mut csv = Vec::new();
        answer(&budget, &request, &watch).csv(&mut csv).expect("written");
        let mut rows = csv::Reader::from_reader(csv.as_slice());
        let headers = rows.headers().expect("a header").clone();
        let records: Vec<csv::StringRecord> =
            rows.records().map(|record| record.expect("a record")).collect();
        let mut book = open(bytes(&budget));
        let names = book.sheet_names();
        assert_eq!(names.len(), budget.stages.len() + 1);
        let mut numbers = 0;
        for stage in &budget.stages {
            let sheet = book.worksheet_range(&stage.name).expect("a sheet a stage");
            let titles: Vec<String> =
                sheet.rows().next().expect("a header").iter().map(ToString::to_string).collect();
            let of_stage: Vec<_> = records.iter().filter(|record| record[0] == stage.name).collect();
            assert!(sheet.rows().count() > of_stage.len());
            for (record, cells) in of_stage.iter().zip(sheet.rows().skip(1)) {
                for (title, text) in headers.iter().zip(record.iter()) {
                    let Some(place) = titles.iter().position(|known| known == title) else {
                        assert!(text.is_empty(), "{title} is not in the sheet");
                        continue;
                    };
                    match (&cells[place], text.parse::<f64>()) {
                        (Data::Float(value), Ok(expected)) => {
                            // the file format keeps 15 to 17 digits
                            assert!(
                                (value - expected).abs() <= 1e-14 * expected.abs(),
                                "{title} {value} {expected}"
                            );
                            numbers += 1;
                        }
                        (Data::Empty, _) => assert!(text.is_empty(), "{title}: {text}"),
                        (Data::String(words), Err(_)) => assert_eq!(words, text),
                        (cell, _) => panic!("{title}: {cell:?} for {text}"),
                    }
                }
            }
        }
        assert!(numbers > 500, "{numbers}");
    }
}

#[test]
fn text_is_no_formula_and_reruns_give_the_same_bytes() {
    let mut budget = load("budgets/grain-dryer-camera.yaml");
    budget.stages.truncate(2);
    budget.stages[0].name = "=HYPERLINK(\"x\")".into();
    budget.stages[1].name = "a/very:long*name?of[a]stage\\with all that is forbidden".into();
    let first = bytes(&budget);
    assert_eq!(first, bytes(&budget));
    let mut book = open(first);
    for name in book.sheet_names() {
        assert!(name.chars().count() <= 31);
        let formulas = book.worksheet_formula(&name).expect("a sheet");
        assert!(formulas.used_cells().all(|(_, _, formula)| formula.is_empty()), "{name} has a formula");
    }
    let sheet = book.worksheet_range(&book.sheet_names()[1]).expect("a sheet");
    assert_eq!(sheet.get((1, 0)), Some(&Data::String("=HYPERLINK(\"x\")".into())));
}
