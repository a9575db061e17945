//! Rigid planetary sets: `zs*w_sun + zr*w_ring = (zs + zr)*w_carrier`.

/// A planetary set as typed.
#[derive(Clone, Debug, PartialEq)]
pub struct PlanetaryGear {
    /// Its name.
    pub name: String,
    /// Body at the sun, or `ground`.
    pub sun: String,
    /// Body at the carrier, or `ground`.
    pub carrier: String,
    /// Body at the ring, or `ground`.
    pub ring: String,
    /// Teeth of the sun.
    pub teeth_sun: u32,
    /// Teeth of the ring.
    pub teeth_ring: u32,
    /// Where its figures come from.
    pub source: Option<String>,
}
