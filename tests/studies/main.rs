//! Studies through the whole program: a scenario file in, answers and tables out.
//!
//! Expected values come from closed forms of a train of one body behind a magnetic coupling:
//!
//! ```text
//! J a'' = T - K sin(p a)      from rest at a = 0, no damping
//! slips when T > 0.724611353777 K   (equal areas: T (pi - asin T) = 1 + sqrt(1 - T^2), T over K)
//! ```

// Helpers of tests may fail by panicking, and results of tests are compared as they are.
#![allow(clippy::unwrap_used, clippy::cast_precision_loss, clippy::float_cmp)]

mod carried;
mod cases;
mod contract;
mod helper;
mod margin;
mod messages;
mod resume;
mod scatter;
mod sweep;
mod vibration;
