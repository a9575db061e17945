//! Conformance: each entry of the program's own list of parts goes through the whole program.
//!
//! The list is the description that the reading code gives of itself: sections, laws, forms of
//! signals, kinds of studies. Each entry needs a minimal train, a file in `trains` called after
//! it: `shafts.yaml`, `loads.friction.yaml`, `signals.step.yaml`, `studies.sweep.yaml`; a second
//! train of one entry is `loads.friction+between_bodies.yaml`. A part without its train, or a key
//! that no train uses, fails. What is asked of each train stands in the files beside this one.
//!
//! A new part needs its file, and where these apply one line each: its channels' units in
//! `channels.rs`, what turns it round in `mirror.rs`.

// Helpers of tests may fail by panicking.
#![allow(clippy::unwrap_used)]

mod channels;
mod descriptions;
mod kept;
mod mirror;
mod program;
mod refusals;
mod registry;
mod schema;
mod slopes;
mod trees;
