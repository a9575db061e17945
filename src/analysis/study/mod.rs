//! Studies: from one run to an answer.
//!
//! A study varies numbers of the file by their dotted paths, reads the changed file again
//! with the same checks, runs it and draws one conclusion. Runs are spread over threads;
//! what is found does not depend on how many there are.

mod draws;
mod fingerprint;
mod load_cases;
mod margin;
mod monte_carlo;
mod normal;
pub mod outcome;
mod plan;
pub mod results;
mod run;
pub mod spec;
mod statistics;
mod steady;
mod sweep;
mod trial;
pub mod work;

pub use plan::{Plan, load, plan};
pub use run::{StudyOptions, layout, mark, run, varied};
pub use spec::{Kind, Study};
