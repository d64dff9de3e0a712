//! `lossbook import`

use std::path::{Path, PathBuf};

use clap::Args;
use clap::builder::PossibleValuesParser;
use lossbook::files;
use lossbook::import;

use super::options::Common;
use super::{Exit, Failure, desk, terminal};

/// A shortlist kept in a spreadsheet becomes a parts file.
///
/// One row is one part, a header names a key with its unit: `q_gd [nC]`, `q_gd.v_ds [V]`, `r_ds_on@4.5V.max [mΩ]`.
/// `lossbook template csv` prints a table to start from. Every bad cell is reported at once, with row and column.
#[derive(Args, Debug)]
#[command(after_help = "\
Examples:
  lossbook template csv > mosfets.csv
  lossbook import mosfets.csv --output parts/mine.yaml
  lossbook import list.csv --kind inductors --skip-bad -o parts/coils.yaml")]
pub(crate) struct Options {
    /// The table: CSV with commas, semicolons or tabs.
    #[arg(value_name = "TABLE")]
    table: PathBuf,

    /// Kind of the parts; by default what the name of the file tells.
    #[arg(long, value_name = "KIND", value_parser = PossibleValuesParser::new(import::kinds()))]
    kind: Option<String>,

    /// Write the good rows although others are bad.
    #[arg(long)]
    skip_bad: bool,

    /// Write the parts to this file instead of standard output; only a file that was imported is replaced.
    #[arg(short, long, value_name = "FILE")]
    output: Option<PathBuf>,
}

impl Options {
    pub(crate) fn run(&self, _: &Common) -> Result<Exit, Failure> {
        let shown = terminal::shown(&self.table);
        let stem = self.table.file_stem().map(|stem| stem.to_string_lossy().into_owned()).unwrap_or_default();
        let kind = self.kind.as_deref().or_else(|| import::kind_of_name(&stem)).ok_or_else(|| {
            let hint = format!("add --kind with one of {}", import::kinds().join(", "));
            Failure::asked(format!("the name of {shown} does not tell what kind of part it lists"), hint)
        })?;
        let table = files::read_text(&self.table)
            .map_err(|fault| Failure::asked(format!("{shown} cannot be read: {fault}"), fault.hint()))?;
        let name = self.table.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
        let hint = "export the sheet as CSV in UTF-8";
        let imported = import::import(&table.text, kind, (&name, &table.sha256))
            .map_err(|error| Failure::asked(format!("{shown} is no table: {error}"), hint))?;
        for fault in &imported.faults {
            terminal::say(&format!("{shown}: {fault}"));
        }
        let (good, bad) = (imported.good, imported.bad);
        if !imported.faults.is_empty() && (!self.skip_bad || good == 0) {
            let faults = imported.faults.len();
            let hint = match (good, self.skip_bad) {
                (0, _) => "correct them and import again".to_owned(),
                _ => format!("correct them, or write the {good} good rows with --skip-bad"),
            };
            let faults = if faults == 1 { "1 fault".into() } else { format!("{faults} faults") };
            return Err(Failure::asked(
                format!("nothing was written: {faults}, {bad} of {} rows are bad", good + bad),
                hint,
            ));
        }
        if good == 0 {
            return Err(Failure::asked(
                format!("{shown} has no rows"),
                "fill in a part a row below the header",
            ));
        }
        if let Some(file) = &self.output {
            self.may_replace(file)?;
        }
        desk::to(self.output.as_deref(), |out| out.write_all(imported.yaml.as_bytes()))?;
        if bad > 0 {
            terminal::say(&format!("{good} parts written, {bad} left out"));
        }
        Ok(Exit::Done)
    }

    /// Hours of typing may be in a file of that name.
    fn may_replace(&self, file: &Path) -> Result<(), Failure> {
        let typed = files::read_text(file).is_ok_and(|old| !old.text.starts_with("# Imported from "));
        if typed && file.is_file() {
            let problem = format!("{} exists and was not imported: it would be lost", terminal::shown(file));
            return Err(Failure::asked(problem, "name a new file"));
        }
        Ok(())
    }
}
