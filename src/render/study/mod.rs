//! Studies as files and text: one row a run, one map an answer, one sentence at its head.

pub mod answer;
pub mod by_hand;
pub mod folder;
pub mod journal;
pub mod json;
pub mod of_one_run;
pub mod rows;
pub mod steady;
pub mod text;
