//! Plain mathematics that knows nothing of the domain.

pub mod circular;
pub mod cosine;
pub mod instruction_set;
pub mod lane;
pub mod low_discrepancy;
pub mod periodic_table;
pub mod quantile;
pub mod rounding;
pub mod sun;
