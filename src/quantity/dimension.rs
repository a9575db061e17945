//! What a quantity can measure.

/// What a quantity measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Dimension {
    /// Pure number, share, order.
    One,
    /// Time, s.
    Time,
    /// Angle, rad.
    Angle,
    /// Rotational speed, rad/s.
    Speed,
    /// Rotational acceleration, rad/s2.
    Acceleration,
    /// Torque, N*m.
    Torque,
    /// Moment of inertia, kg*m2.
    Inertia,
    /// Torsional stiffness, N*m/rad.
    Stiffness,
    /// Rotational damping, N*m*s/rad.
    Damping,
    /// Change of a torque over time, N*m/s.
    TorqueRate,
    /// Torque over speed squared, N*m*s2/rad2.
    TorquePerSpeedSquared,
    /// Power, W.
    Power,
    /// Energy, J.
    Energy,
    /// Temperature, degC.
    Temperature,
    /// Heat capacity, J/K.
    HeatCapacity,
    /// Thermal resistance, K/W.
    ThermalResistance,
    /// Relative change per kelvin, 1/K.
    PerKelvin,
    /// Voltage, V.
    Voltage,
    /// Current, A.
    Current,
    /// Electrical resistance or reactance, ohm.
    Resistance,
    /// Length, m.
    Length,
    /// Linear speed, m/s.
    LinearSpeed,
    /// Mass, kg.
    Mass,
    /// Force, N.
    Force,
    /// Pressure or modulus, Pa.
    Pressure,
    /// Density, kg/m3.
    Density,
    /// Frequency, Hz.
    Frequency,
}

impl Dimension {
    /// The SI unit in which values of this dimension are kept and written to files.
    pub fn si_unit(self) -> &'static str {
        match self {
            Self::One => "1",
            Self::Time => "s",
            Self::Angle => "rad",
            Self::Speed => "rad/s",
            Self::Acceleration => "rad/s2",
            Self::Torque => "N*m",
            Self::Inertia => "kg*m2",
            Self::Stiffness => "N*m/rad",
            Self::Damping => "N*m*s/rad",
            Self::TorqueRate => "N*m/s",
            Self::TorquePerSpeedSquared => "N*m*s2/rad2",
            Self::Power => "W",
            Self::Energy => "J",
            Self::Temperature => "degC",
            Self::HeatCapacity => "J/K",
            Self::ThermalResistance => "K/W",
            Self::PerKelvin => "1/K",
            Self::Voltage => "V",
            Self::Current => "A",
            Self::Resistance => "ohm",
            Self::Length => "m",
            Self::LinearSpeed => "m/s",
            Self::Mass => "kg",
            Self::Force => "N",
            Self::Pressure => "Pa",
            Self::Density => "kg/m3",
            Self::Frequency => "Hz",
        }
    }

    /// What people call it.
    pub fn name(self) -> &'static str {
        match self {
            Self::One => "plain number",
            Self::Time => "time",
            Self::Angle => "angle",
            Self::Speed => "rotational speed",
            Self::Acceleration => "rotational acceleration",
            Self::Torque => "torque",
            Self::Inertia => "moment of inertia",
            Self::Stiffness => "torsional stiffness",
            Self::Damping => "rotational damping",
            Self::TorqueRate => "rate of torque",
            Self::TorquePerSpeedSquared => "torque per speed squared",
            Self::Power => "power",
            Self::Energy => "energy",
            Self::Temperature => "temperature",
            Self::HeatCapacity => "heat capacity",
            Self::ThermalResistance => "thermal resistance",
            Self::PerKelvin => "change per kelvin",
            Self::Voltage => "voltage",
            Self::Current => "current",
            Self::Resistance => "resistance",
            Self::Length => "length",
            Self::LinearSpeed => "linear speed",
            Self::Mass => "mass",
            Self::Force => "force",
            Self::Pressure => "pressure",
            Self::Density => "density",
            Self::Frequency => "frequency",
        }
    }

    /// The name with its article, for messages: "a torque", "an angle".
    pub fn with_article(self) -> String {
        let article = if matches!(self, Self::Angle | Self::Energy) { "an" } else { "a" };
        format!("{article} {}", self.name())
    }
}
