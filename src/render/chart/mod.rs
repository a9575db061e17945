//! Charts: plain data becomes drawings, drawings become SVG and PNG.
//!
//! ```text
//! input structs -> run / torque_speed / swing / map / ... -> Drawing -> svg, png
//! ```
//!
//! plotters is the canvas for both formats; axes, marks and labels are our own (`pen`, `axes`,
//! `marks`, `labels`). Colour tells the side of the gear and lost grip, nothing else (`palette`).

pub mod axes;
pub mod clip;
pub mod compare;
pub mod curve;
pub mod drawing;
pub mod font;
pub mod free;
pub mod interference;
pub mod labels;
pub mod load_cases;
pub mod map;
pub mod margin;
pub mod marks;
pub mod number;
pub mod palette;
pub mod pen;
pub mod pick;
pub mod pick_records;
pub mod pick_rows;
pub mod plane_tables;
pub mod png;
pub mod rainflow;
mod raster;
pub mod run;
pub mod run_data;
pub mod run_input;
pub mod schematic;
pub mod strip;
pub mod svg;
pub mod swing;
pub mod ticks;
pub mod tolerance;
pub mod torque_speed;
pub mod train;
pub mod units;
