//! Shafts: elastic with damping and free play, or rigid.

/// A shaft as typed; `stiffness` and `damping` are worked out from dimensions and ratio where those are given.
#[derive(Clone, Debug, PartialEq)]
pub struct Shaft {
    /// Its name.
    pub name: String,
    /// The bodies a and b (or `ground`).
    pub between: [String; 2],
    /// Torsional stiffness, N*m/rad; ignored when rigid.
    pub stiffness: f64,
    /// Damping.
    pub damping: ShaftDamping,
    /// Total free play, rad; 0 for none.
    pub backlash: f64,
    /// The two bodies turn as one.
    pub rigid: bool,
    /// Torque for utilisation in long running, N*m.
    pub rated_torque: Option<f64>,
    /// Torque for utilisation at peaks, N*m.
    pub peak_torque: Option<f64>,
    /// Where its figures come from.
    pub source: Option<String>,
}

/// How a shaft's damping is given.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum ShaftDamping {
    /// N*m*s/rad.
    Coefficient(f64),
    /// Share of critical damping of the shaft's own two-body mode.
    Ratio(f64),
}
