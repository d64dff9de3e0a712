//! Tables from spreadsheets. What a person would type into a library file is the outside value.

use std::path::Path;

use lossbook::import::{Imported, TEMPLATE, import, kind_of_name};
use lossbook::input::load_library;
use lossbook::sheet::form::Form;
use lossbook::values::walk_form;

fn read(text: &str, kind: &str) -> Imported {
    import(text, kind, ("list.csv", "0123456789abcdef0123")).expect("a table")
}

fn library(folder: &Path, yaml: &str) -> lossbook::budget::Library {
    let path = folder.join("parts.yaml");
    lossbook::files::write_whole(&path, yaml.as_bytes()).expect("written");
    load_library(&[path]).unwrap_or_else(|errors| panic!("{errors}\n{yaml}")).0
}

/// Every value with its path, limits and conditions.
fn values(form: &mut dyn Form) -> Vec<String> {
    let mut list = Vec::new();
    walk_form(form, &mut |place, datum| {
        let conditions: Vec<_> = datum.conditions.iter().map(|c| (c.key, c.value)).collect();
        list.push(format!("{} {:?} {:?} {:?} {conditions:?}", place.path, datum.min, datum.typ, datum.max));
    });
    list.sort();
    list
}

#[test]
fn the_template_imports_to_what_one_would_type() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let imported = read(TEMPLATE, "mosfets");
    assert_eq!((imported.good, imported.bad), (1, 0), "{:?}", imported.faults);
    let ours = library(folder.path(), &imported.yaml);
    let typed = "mosfets:\n  my-mosfet:\n    v_ds_max: 40 V\n    v_gs_max: 20 V\n    i_d_max: 50 A\n    t_j_max: 150 °C\n    \
        r_ds_on:\n      - {v_gs: 4.5 V, typ: 6.8 mΩ, max: 8.6 mΩ}\n      - {v_gs: 10 V, typ: 5.2 mΩ}\n    \
        r_ds_on_hot: {t_j: 150 °C, ratio: 1.7}\n    v_gs_th: {min: 1.2 V, typ: 1.7 V, max: 2.2 V}\n    \
        v_gs_plateau: {i_d: 20 A, typ: 2.9 V}\n    q_gs: 3.2 nC\n    q_gs2: 1.3 nC\n    q_gd: {v_ds: 20 V, typ: 2.1 nC}\n    \
        q_g: {v_gs: 4.5 V, typ: 9.5 nC, max: 13 nC}\n    r_g: 1.2 Ω\n    q_oss: {v_ds: 20 V, typ: 16 nC}\n    l_source: 0.2 nH\n    \
        v_sd: [{i: 1 A, v: 0.70 V}, {i: 20 A, v: 0.84 V}]\n    q_rr: {i: 20 A, typ: 20 nC, exponent: 0.5}\n    \
        r_th_ja: 42 K/W\n    price: 0.38\n";
    let typed = library(folder.path(), typed);
    let sheet =
        |library: &lossbook::budget::Library| (*library.mosfets.get("my-mosfet").expect("there").1).clone();
    assert_eq!(values(&mut sheet(&ours)), values(&mut sheet(&typed)));
    assert_eq!(sheet(&ours).descriptive.source.as_deref(), Some("data sheet rev. 2"));
}

#[test]
fn other_kinds_semicolons_and_lists_in_lists() {
    let folder = tempfile::tempdir().expect("a temporary folder");
    let table = "name;v_rrm [V];i_f_max [A];t_j_max [°C];v_f@25degC@1A [V];v_f@25degC@5A [mV];v_f@125degC@1A [V];i_r@40V@25degC [µA];q_c [nC];q_c.v_r [V];r_th_ja [K/W]\n\
                 d-1;40;10;125;0.36;430;0.25;60;8;20;25 K/W\n";
    let imported = read(table, "diodes");
    assert_eq!((imported.good, imported.bad), (1, 0), "{:?}", imported.faults);
    let library = library(folder.path(), &imported.yaml);
    let diode = library.diodes.get("d-1").expect("there").1;
    assert_eq!(diode.v_f.len(), 2);
    assert_eq!(diode.v_f[0].points[1].v.value, 0.43);
    assert_eq!(diode.i_r[0].i.value, 60e-6);
    // a part without a source of its own names the table
    assert_eq!(diode.descriptive.source.as_deref(), Some("list.csv, row 2"));
}

#[test]
fn bad_cells_are_reported_all_at_once_with_row_and_column() {
    let table = TEMPLATE.replace("my-mosfet", "good");
    let row = table.lines().nth(1).expect("the row");
    let bad = [
        row.replace("good", "unit").replace(",2.1,20,9.5", ",2.1 V,20,9.5"),
        row.replace("good", "comma").replace(",9.5,13,", ",\"9,5\",13,"),
        row.replace("good", "negative").replace(",42,0.38", ",-42,0.38"),
        row.replace("good", "empty").replace(",3.2,1.3,", ",,1.3,"),
        row.to_owned(),
        row.replace("good", "plateau").replace(",2.2,2.9,", ",2.2,1.1,"),
    ];
    let imported = read(&format!("{table}{}\n", bad.join("\n")), "mosfets");
    assert_eq!((imported.good, imported.bad), (1, 6));
    let says = |row: u64, words: &[&str]| {
        let found = imported.faults.iter().filter(|fault| fault.row == row).map(ToString::to_string);
        let all: Vec<String> = found.collect();
        assert!(
            all.iter().any(|fault| words.iter().all(|word| fault.contains(word))),
            "{words:?} in {all:#?}"
        );
    };
    says(3, &["row 3, column T `q_gd [nC]`, unit", "V is a voltage", "2.1 V"]);
    says(4, &["column V `q_g@4.5V [nC]`, comma", "comma"]);
    says(5, &["r_th_ja [K/W]", "negative"]);
    says(6, &["row 6, empty", "q_gs"]);
    says(7, &["column A `name`", "name of a part above"]);
    says(8, &["column P `v_gs_plateau [V]`", "threshold"]);
    assert!(imported.yaml.contains("  good:") && !imported.yaml.contains("  comma:"));
}

#[test]
fn headers_that_mean_nothing_are_errors() {
    let table = "name,q_gdd [nC],q_gd@20V [nC],r_ds_on@4.5V.high [mΩ],colour\nx,1,2,3,red\n";
    let imported = read(table, "mosfets");
    assert_eq!((imported.good, imported.bad), (0, 1));
    let headers: Vec<String> =
        imported.faults.iter().filter(|f| f.row == 1).map(ToString::to_string).collect();
    assert_eq!(headers.len(), 4, "{headers:#?}");
    assert!(headers[0].contains("column B") && headers[0].contains("q_gd"));
    assert!(headers[1].contains("q_gd.v_ds"));
    assert!(headers[2].contains("`high`"));
    assert!(read("", "mosfets").faults[0].to_string().contains("names of the parts"));
    assert!(import("name\n", "resistors", ("a", "b")).is_err());
}

#[test]
fn file_names_tell_the_kind() {
    assert_eq!(kind_of_name("mosfets"), Some("mosfets"));
    assert_eq!(kind_of_name("My-Inductor-list"), Some("inductors"));
    assert_eq!(kind_of_name("linear-regulators"), Some("linear_regulators"));
    assert_eq!(kind_of_name("parts"), None);
}
