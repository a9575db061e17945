//! Pole-pair choices of a magnetic gear: ratios, ripple orders, symmetry.
//!
//! ```text
//! pieces       n = p_i + p_o
//! synchronism  p_i*w_inner + p_o*w_outer = n*w_modulator
//! ripple order LCM(2p, n) per relative turn of a rotor against the modulator
//! cogging factor f = 2p*n/LCM(2p, n) = GCD(2p, n), the same for both rotors as p_o = n - p_i
//! symmetry     GCD(2p_i, 2p_o, n): 1 means that the magnetic pull does not balance
//! ```
//!
//! A factor of 1 gives the least ripple, a whole ratio the most: Zhu and Howe, Influence of
//! design parameters on cogging torque in permanent magnet machines, IEEE Trans. Energy
//! Conversion 15 (2000) 407-412 (from memory), whose slots are the pieces here.

/// The member that is held.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Held {
    /// Inner rotor: outer against modulator.
    Inner,
    /// Modulator: inner against outer, in opposite senses.
    Modulator,
    /// Outer rotor: inner against modulator.
    Outer,
}

/// One choice of pole pairs.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct PolePairs {
    /// Pole pairs of the inner rotor.
    pub inner: u32,
    /// Pole pairs of the outer rotor.
    pub outer: u32,
}

/// Greatest common divisor.
pub fn greatest_common_divisor(a: u64, b: u64) -> u64 {
    if b == 0 { a } else { greatest_common_divisor(b, a % b) }
}

/// Least common multiple; 0 when one of them is 0.
pub fn least_common_multiple(a: u64, b: u64) -> u64 {
    match greatest_common_divisor(a, b) {
        0 => 0,
        divisor => (a / divisor).saturating_mul(b),
    }
}

impl PolePairs {
    /// Modulator pieces.
    pub fn pieces(self) -> u32 {
        self.inner.saturating_add(self.outer)
    }

    /// Speed of the first over the second turning member while one is held, signed: inner over
    /// outer, inner over modulator, or outer over modulator.
    pub fn ratio(self, held: Held) -> f64 {
        let (inner, outer) = (f64::from(self.inner), f64::from(self.outer));
        let pieces = f64::from(self.pieces());
        match held {
            Held::Modulator => -outer / inner,
            Held::Outer => pieces / inner,
            Held::Inner => pieces / outer,
        }
    }

    /// Ripple orders of the inner and the outer rotor against the modulator.
    pub fn ripple_orders(self) -> [u64; 2] {
        let pieces = u64::from(self.pieces());
        [self.inner, self.outer].map(|pairs| least_common_multiple(2 * u64::from(pairs), pieces))
    }

    /// Cogging factor: 1 is best.
    pub fn cogging_factor(self) -> u64 {
        greatest_common_divisor(2 * u64::from(self.inner), u64::from(self.pieces()))
    }

    /// Order of rotational symmetry: at 1 the magnetic pull does not balance.
    pub fn symmetry(self) -> u64 {
        greatest_common_divisor(
            greatest_common_divisor(2 * u64::from(self.inner), 2 * u64::from(self.outer)),
            u64::from(self.pieces()),
        )
    }

    /// True when one rotor's pole pairs are a multiple of the other's.
    pub fn has_whole_ratio(self) -> bool {
        let (small, large) = (self.inner.min(self.outer), self.inner.max(self.outer));
        small > 0 && large % small == 0
    }
}

/// All choices within a relative tolerance of a ratio (its magnitude counts), up to `most` pole
/// pairs on the outer rotor; the outer one has more than the inner one.
pub fn choices(ratio: f64, held: Held, tolerance: f64, most: u32) -> Vec<PolePairs> {
    let wanted = ratio.abs();
    // A little room, so that a deviation equal to the tolerance counts.
    let room = tolerance * (1.0 + 1e-12) + 1e-12;
    let mut found = Vec::new();
    for inner in 1..most {
        for outer in inner + 1..=most {
            let choice = PolePairs { inner, outer };
            if (choice.ratio(held).abs() / wanted - 1.0).abs() <= room {
                found.push(choice);
            }
        }
    }
    found
}

/// The choice nearest to a ratio.
pub fn nearest(ratio: f64, held: Held, most: u32) -> Option<PolePairs> {
    let off = |choice: &PolePairs| (choice.ratio(held).abs() / ratio.abs() - 1.0).abs();
    (1..most)
        .flat_map(|inner| (inner + 1..=most).map(move |outer| PolePairs { inner, outer }))
        .min_by(|a, b| off(a).total_cmp(&off(b)))
}

#[cfg(test)]
mod tests {
    use super::*;

    const GEAR: PolePairs = PolePairs { inner: 4, outer: 22 };

    /// Synchronism with one member at rest, by hand: `4 w_i + 22 w_o = 26 w_m`.
    #[test]
    fn ratios_follow_from_synchronism() {
        assert_eq!(GEAR.pieces(), 26);
        assert!((GEAR.ratio(Held::Modulator) + 5.5).abs() < 1e-15);
        assert!((GEAR.ratio(Held::Outer) - 6.5).abs() < 1e-15);
        assert!((GEAR.ratio(Held::Inner) - 26.0 / 22.0).abs() < 1e-15);
    }

    /// Arithmetic by hand: LCM(8, 26) = 104, LCM(44, 26) = 572; 2p*n/LCM = 8*26/104 = 2.
    #[test]
    fn ripple_orders_and_factor() {
        assert_eq!(GEAR.ripple_orders(), [104, 572]);
        assert_eq!(GEAR.cogging_factor(), 2);
        assert_eq!(GEAR.symmetry(), 2);
        let best = PolePairs { inner: 4, outer: 17 };
        assert_eq!((best.cogging_factor(), best.symmetry()), (1, 1));
    }

    /// The identity behind one factor for both rotors: `p_o = n - p_i`.
    #[test]
    fn both_rotors_share_one_cogging_factor() {
        for inner in 1..20_u32 {
            for outer in inner + 1..60 {
                let pairs = PolePairs { inner, outer };
                let other = greatest_common_divisor(2 * u64::from(outer), pairs.pieces().into());
                assert_eq!(pairs.cogging_factor(), other, "{inner}/{outer}");
            }
        }
    }

    #[test]
    fn choices_lie_within_the_tolerance() {
        let found = choices(5.5, Held::Modulator, 0.0, 40);
        assert_eq!(
            found,
            [(2, 11), (4, 22), (6, 33)].map(|(inner, outer)| PolePairs { inner, outer })
        );
        assert_eq!(nearest(5.3, Held::Modulator, 10), Some(PolePairs { inner: 1, outer: 5 }));
    }
}
