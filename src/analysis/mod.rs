//! What is asked of a train: one run in time, and the studies built on it.

pub mod poles;
pub mod study;
pub mod train;
pub mod transient;
