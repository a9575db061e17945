//! The summary of a run for people.
