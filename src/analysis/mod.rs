//! What is asked of a train: one run in time, and the studies built on it.

pub mod estimates;
pub mod linear_point;
pub mod modes;
pub mod poles;
pub mod rainflow;
pub mod study;
#[cfg(test)]
mod testing;
pub mod train;
pub mod transient;
