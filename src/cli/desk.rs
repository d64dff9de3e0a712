//! Where answers are written: to standard output, or to a file whole or not at all.

use std::io::{self, BufWriter, IsTerminal, Write};
use std::path::Path;
use std::sync::Arc;

use lossbook::answer::Answer;
use lossbook::files::{self, Draft, FileFault};
use lossbook::render::{Html, Markdown, Render, Text};
use lossbook::sweep::Watch;

use super::options::{Colour, Common, Format, Writing};
use super::progress::Progress;
use super::{Exit, Failure, interrupt, terminal};

/// Writes an answer in the format asked for; the exit code says whether requirements are met.
pub(crate) fn give(
    answer: &dyn Answer,
    writing: &Writing,
    common: &Common,
    watch: &Arc<Watch>,
) -> Result<Exit, Failure> {
    let file = writing.output.as_deref().filter(|path| *path != Path::new("-"));
    if let Some(path) = file {
        files::refuse_input(path)
            .map_err(|fault| Failure::Output { file: Some(path.to_path_buf()), fault })?;
    }
    #[cfg(feature = "xlsx")]
    if writing.format == Format::Xlsx {
        return spreadsheet(answer, file);
    }
    let streams = matches!(writing.format, Format::Csv | Format::Json);
    // a bar between rows on the same terminal would be worse than none
    let progress = (!streams || file.is_some() || !io::stdout().is_terminal()).then(|| Progress::of(watch));
    to(file, |out| match writing.format {
        Format::Csv => answer.csv(out),
        Format::Json => answer.json(out),
        Format::Text | Format::Markdown | Format::Html => {
            let document = answer.document();
            drop(progress);
            page(writing, common).render(&document, out)
        }
        #[cfg(feature = "xlsx")]
        Format::Xlsx => Ok(()),
    })?;
    Ok(exit(answer))
}

/// The exit code of an answer; a missed requirement is said, not only coded.
fn exit(answer: &dyn Answer) -> Exit {
    if answer.met() {
        return Exit::Done;
    }
    terminal::say("a requirement is missed, hence exit code 1; `lossbook compare` lists them one by one");
    Exit::Missed
}

/// Writes a spreadsheet to a file.
#[cfg(feature = "xlsx")]
fn spreadsheet(answer: &dyn Answer, file: Option<&Path>) -> Result<Exit, Failure> {
    if file.is_none() {
        let hint = "name it with --output table.xlsx, or use --format csv";
        return Err(Failure::asked("a spreadsheet goes to a file", hint));
    }
    match answer.spreadsheet() {
        None => {
            let hint =
                "`lossbook tabulate BUDGET --format xlsx --output table.xlsx` does; or use --format csv";
            Err(Failure::asked("this verb writes no spreadsheet", hint))
        }
        Some(Err(fault)) => Err(Failure::asked("the spreadsheet cannot be made", fault)),
        Some(Ok(bytes)) => {
            to(file, |out| out.write_all(&bytes))?;
            Ok(exit(answer))
        }
    }
}

/// The format of a page for people.
fn page(writing: &Writing, common: &Common) -> Box<dyn Render> {
    match writing.format {
        Format::Markdown => Box::new(Markdown),
        Format::Html => Box::new(Html),
        _ => Box::new(text(common, writing.output.as_deref())),
    }
}

/// Text for a terminal, or for a file, which has no colour of its own.
fn text(common: &Common, file: Option<&Path>) -> Text {
    let colour = match file {
        Some(_) => common.colour == Colour::Always,
        None => terminal::colour(common.colour),
    };
    let width = if file.is_some() { terminal::PAGE } else { terminal::width() };
    Text { width, colour }
}

/// Hands a writer to whoever has something to write.
pub(crate) fn to(
    file: Option<&Path>,
    write: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> Result<(), Failure> {
    let Some(path) = file else {
        let mut out = BufWriter::with_capacity(1 << 16, io::stdout().lock());
        return write(&mut out).and_then(|()| out.flush()).map_err(Failure::of_stdout);
    };
    let failed = |fault: FileFault| Failure::Output { file: Some(path.to_path_buf()), fault };
    let mut draft = Draft::begin(path).map_err(failed)?;
    interrupt::watch_draft(draft.temporary());
    match write(&mut draft) {
        Ok(()) => interrupt::finish_draft(|| draft.finish()).map_err(failed),
        Err(error) => Err(failed(error.into())),
    }
}
