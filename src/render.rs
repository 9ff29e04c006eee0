//! From the report to bytes: terminal text, JSON, CSV, HTML with inline SVG, Parquet.
//!
//! Renderers write what the document holds and compute nothing.
//! Input text is never evaluated: HTML is escaped, text that begins like a formula is guarded in CSV.

pub mod chart;
pub mod csv;
pub mod html;
pub mod json;
#[cfg(feature = "parquet")]
pub mod parquet;
pub mod rhythm;
pub mod sample;
pub mod svg;
pub mod terminal;
pub mod validation;
