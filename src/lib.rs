//! Lodeshaft: how close a drivetrain with magnetic gears comes to slipping.
//!
//! The floors, from the ground up; a module uses only modules below it:
//! `diagnostic < tree < quantity < signal < component < scenario < model < equations <
//! solve < results < analysis < render < cli`.

pub mod component;
pub mod diagnostic;
pub mod quantity;
pub mod results;
pub mod scenario;
pub mod signal;
pub mod tree;
