//! The screens of the README are real: its console blocks are run and compared.

#[test]
fn the_screens_are_real_output() {
    trycmd::TestCases::new().case("README.md");
}
