//! What rhythm do measured values hold? Cosinor, populations, circular statistics, regularity, saliva.
//!
//! Nothing here knows a roster or a model: samples go in, estimates with their limits come out.
//! Acrophases in degrees are negative (0 at the reference time, -360 one period later); in hours they are clock times after it.

pub mod circular;
pub mod cosinor;
pub mod ellipse;
pub mod groups;
pub mod populations;
pub mod regularity;
pub mod saliva;
pub mod shape;
pub mod subjects;

pub use cosinor::{Component, Cosinor, Design, Observation, Refusal, fit};
pub use populations::{Comparison, Population, Vector};
pub use shape::Shape;
