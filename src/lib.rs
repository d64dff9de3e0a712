//! lossbook books every watt lost in a step-down rail to one part and one mechanism.
//!
//! ```text
//! files -> input (as written -> as meant) -> sheet, stage, grid (validated, SI)
//!       -> fitted (curves) -> heat: [ waveform -> edges -> loss ] until temperatures settle -> ledger
//!       -> compare, tabulate and the other questions -> answer -> JSON, CSV (full precision)
//!                                                              -> report (typed cells) -> render (text, Markdown, ...)
//! ```
//!
//! An arrow never points back: physics knows no files, questions know no formats. The equations stand in [`model`].
//!
//! ```no_run
//! use lossbook::{candidate::Candidate, input};
//!
//! # fn main() -> Result<(), Box<dyn std::error::Error>> {
//! let (budget, _warnings) = input::load_budget("budgets/grain-dryer-camera.yaml".as_ref())?;
//! for candidate in Candidate::all(&budget) {
//!     match candidate.evaluate(candidate.headline()) {
//!         Ok(solved) => println!("{}: {:.3} W", candidate.name(), solved.loss()),
//!         Err(reason) => println!("{}: {reason}", candidate.name()),
//!     }
//! }
//! # Ok(())
//! # }
//! ```

pub mod absorb;
pub mod answer;
pub mod average;
pub mod bench;
pub mod booking;
pub mod budget;
pub mod candidate;
pub mod columns;
pub mod compare;
pub mod crossover;
pub mod diff;
pub mod draws;
pub mod edges;
pub mod energy;
pub mod evidence;
pub mod files;
pub mod findings;
pub mod fit;
pub mod fitted;
pub mod gaps;
pub mod grid;
pub mod headroom;
pub mod heat;
pub mod hints;
pub mod import;
pub mod infeasible;
pub mod input;
pub mod justify;
pub mod ledger;
pub mod limits;
pub mod linear;
pub mod loads;
pub mod loss;
pub mod model;
pub mod model_spread;
pub mod near;
pub mod nnls;
pub mod parts;
pub mod pick;
pub mod printable;
pub mod purchase;
pub mod random;
pub mod ratings;
pub mod reconcile;
pub mod record;
pub mod rehearse;
pub mod render;
pub mod report;
pub mod requirements;
pub mod review;
pub mod root;
pub mod sensitivity;
pub mod sheet;
pub mod solved;
pub mod spread;
pub mod stage;
pub mod sweep;
pub mod tabulate;
pub mod tolerance;
pub mod units;
pub mod values;
pub mod waveform;
#[cfg(feature = "xlsx")]
pub mod workbook;
pub mod worst;
