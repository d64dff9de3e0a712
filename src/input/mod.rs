//! Files in, validated types out.
pub mod error;
pub mod node;
pub mod notes;
pub mod outline;
pub mod path;
pub mod place;
pub mod yaml;
