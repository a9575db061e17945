//! Rigid planetary sets: `zs*w_sun + zr*w_ring = (zs + zr)*w_carrier`.

use crate::tree::Fields;

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

/// More teeth than any wheel has.
const MOST_TEETH: i64 = 100_000;

impl PlanetaryGear {
    /// Reads a planetary set.
    pub fn read(fields: &mut Fields<'_>) -> Self {
        let sun = fields.name("sun", "Body at the sun, or ground.");
        let carrier = fields.name("carrier", "Body at the carrier, or ground.");
        let ring = fields.name("ring", "Body at the ring, or ground.");
        let teeth = fields.group("teeth", "Numbers of teeth.", |teeth| {
            let sun = teeth.whole("sun", 1, MOST_TEETH, "Teeth of the sun.");
            let ring = teeth.whole("ring", 1, MOST_TEETH, "Teeth of the ring.");
            if teeth.has("sun") && teeth.has("ring") && ring <= sun {
                teeth.fault(
                    "ring",
                    format!("the ring ({ring} teeth) must have more teeth than the sun ({sun})"),
                );
            }
            (sun as u32, ring as u32)
        });
        let (teeth_sun, teeth_ring) = teeth.unwrap_or((1, 2));
        Self {
            name: fields.own_name().to_owned(),
            sun,
            carrier,
            ring,
            teeth_sun,
            teeth_ring,
            source: fields.source(),
        }
    }
}
