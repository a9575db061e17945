//! Studies: from one run to an answer.
//!
//! A study varies numbers of the file by their dotted paths, reads the changed file again
//! with the same checks, runs it and draws one conclusion. Runs are spread over threads;
//! what is found does not depend on how many there are.

mod plan;
pub mod spec;

pub use plan::{Plan, load, plan};
pub use spec::{Kind, Study};
