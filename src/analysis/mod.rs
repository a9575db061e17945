//! What is asked of a train: one run in time, and the studies built on it.

pub mod characteristics;
pub mod poles;
pub mod separatrix;
pub mod train;
pub mod transient;
