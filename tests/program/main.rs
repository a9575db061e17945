//! Acceptance tests through the whole program: a scenario file in, JSON and CSV out.
//!
//! Expected values come from outside the program: closed forms, standards, textbooks and
//! independent integrations; the source stands beside each of them. Where it says "from
//! memory" the value was not read again in the publication.

// Helpers of tests may fail by panicking, and results of tests are compared as they are.
#![allow(clippy::unwrap_used, clippy::cast_precision_loss)]

mod checking;
mod clutches;
mod commands;
mod convergence;
mod drives;
mod elastic;
mod endings;
mod energy;
mod equal_area;
mod everyday;
mod fluid;
mod friction;
mod gears;
mod helper;
mod invariance;
mod law;
mod likeness;
mod limits_of_drives;
mod loads;
mod magnets_heat;
mod magnets_temperature;
mod motors;
mod oscillator;
mod output;
mod pendulum;
mod pitch;
mod protections;
mod signals;
mod slipping;
mod starts;
mod steady;
mod stops;
mod swing;
mod torture;
mod units;
mod verdicts;
mod verification;
mod wind;
