//! What is asked of a train: one run in time, and the studies built on it.
#[cfg(test)]
mod testing;

pub mod characteristics;
pub mod comparison;
pub mod estimates;
pub mod linear_point;
pub mod modes;
pub mod operating_point;
pub mod poles;
pub mod rainflow;
pub mod records;
pub mod separatrix;
pub mod study;
pub mod train;
pub mod transient;
