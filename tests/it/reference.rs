//! Published and independently computed numbers, each with its source and tolerance.

mod cascade;
mod entrainment;
mod kernel;
mod pacemaker;
mod rhythm;
mod sleep;
mod sun;
