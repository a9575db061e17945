//! Acceptance tests through the whole program: a scenario file in, JSON and CSV out.
//!
//! Expected values come from outside the program: closed forms, standards, textbooks and
//! independent integrations; the source stands beside each of them. Where it says "from
//! memory" the value was not read again in the publication.

mod equal_area;
mod helper;
mod pendulum;
mod slipping;
mod swing;
