//! The physics: one kind of thing a file, with its shape in YAML, its checks and its law.

pub mod body;
pub mod brake;
pub mod channel;
mod channel_list;
pub mod clutch;
pub mod elastic_curve;
pub mod fluid_coupling;
pub mod gear_pair;
pub mod law;
pub mod load;
pub mod magnet_losses;
pub mod magnet_temperature;
pub mod magnet_thermal;
pub mod magnetic_gear;
pub mod magnetic_law;
mod magnetic_read;
pub mod measured;
pub mod monotone;
pub mod motor;
pub mod pair_law;
pub mod planetary;
mod points;
pub mod polyline;
pub mod protection;
pub mod requirement;
pub mod shaft;
pub mod torque_table;
