//! Files in, validated types out.
pub mod datum;
pub mod error;
pub mod fields;
pub mod nearest;
pub mod node;
pub mod notes;
pub mod outline;
pub mod path;
pub mod place;
pub mod quantity;
pub mod reader;
pub mod sample;
pub mod show;
pub mod units;
pub mod yaml;
