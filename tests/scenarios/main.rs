//! The shipped scenarios: their verdicts, their stories, their energy.

mod energy;
mod outcomes;
mod runner;
mod sources;
mod stories;
mod studies;
mod switching;
