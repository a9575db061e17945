//! Lodeshaft: how close a drivetrain with magnetic gears comes to slipping.
//!
//! The floors, from the ground up; a module uses only modules below it:
//! `diagnostic < tree < quantity < results < signal < component < scenario < model <
//! equations < solve < analysis < render < cli`.

pub mod analysis;
pub mod cli;
pub mod component;
pub mod diagnostic;
pub mod equations;
pub mod model;
pub mod quantity;
pub mod render;
pub mod results;
pub mod scenario;
pub mod signal;
pub mod solve;
pub mod tree;
