//! The normal distribution: share below a value, and the value below which a share lies.

/// Share of draws below `value` of a standard normal distribution.
///
/// ```text
/// P(x) = erfc(-x/sqrt 2)/2
/// ```
/// Series about zero and Lentz' continued fraction beyond (Abramowitz and Stegun 7.1.6 and
/// 7.1.14), good to rounding.
pub fn share_below(value: f64) -> f64 {
    let x = value.abs() / std::f64::consts::SQRT_2;
    let upper = if x < 2.0 { 0.5 * (1.0 - error_function(x)) } else { 0.5 * tail(x) };
    if value > 0.0 { 1.0 - upper } else { upper }
}

/// erf(x) = 2/sqrt(pi) exp(-x^2) sum of 2^n x^(2n+1)/(1*3*...*(2n+1)).
fn error_function(x: f64) -> f64 {
    let mut term = x;
    let mut sum = x;
    let mut odd = 1.0;
    while term > 1e-17 * sum {
        odd += 2.0;
        term *= 2.0 * x * x / odd;
        sum += term;
    }
    std::f64::consts::FRAC_2_SQRT_PI * (-x * x).exp() * sum
}

/// erfc(x) = exp(-x^2)/sqrt(pi) / (x + (1/2)/(x + 1/(x + (3/2)/(x + ...)))), for x of 2 and more.
fn tail(x: f64) -> f64 {
    let mut inner = x;
    for level in (1..=100).rev() {
        inner = x + 0.5 * f64::from(level) / inner;
    }
    0.5 * std::f64::consts::FRAC_2_SQRT_PI * (-x * x).exp() / inner
}

/// The value below which a share (above 0, below 1) of a standard normal distribution lies.
///
/// Wichura, algorithm AS 241 (Applied Statistics 37, 1988), PPND16: relative error 1e-16. The
/// third range, shares below 1e-11, is left out: draws are cut at four standard deviations.
pub fn value_at(share: f64) -> f64 {
    let q = share - 0.5;
    if q.abs() <= 0.425 {
        let r = 0.425 * 0.425 - q * q;
        return q * polynomial(&MIDDLE[0], r) / polynomial(&MIDDLE[1], r);
    }
    let r = (-share.min(1.0 - share).ln()).sqrt() - 1.6;
    let size = polynomial(&OUTER[0], r) / polynomial(&OUTER[1], r);
    if q < 0.0 { -size } else { size }
}

fn polynomial(coefficients: &[f64; 8], r: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, coefficient| sum * r + coefficient)
}

const MIDDLE: [[f64; 8]; 2] = [
    [
        3.387_132_872_796_366_5,
        133.141_667_891_784_38,
        1_971.590_950_306_551_3,
        13_731.693_765_509_46,
        45_921.953_931_549_87,
        67_265.770_927_008_7,
        33_430.575_583_588_13,
        2_509.080_928_730_122_7,
    ],
    [
        1.0,
        42.313_330_701_600_91,
        687.187_007_492_057_9,
        5_394.196_021_424_751,
        21_213.794_301_586_597,
        39_307.895_800_092_71,
        28_729.085_735_721_943,
        5_226.495_278_852_854,
    ],
];

const OUTER: [[f64; 8]; 2] = [
    [
        1.423_437_110_749_683_5,
        4.630_337_846_156_546,
        5.769_497_221_460_691,
        3.647_848_324_763_204_5,
        1.270_458_252_452_368_4,
        0.241_780_725_177_450_6,
        0.022_723_844_989_269_184,
        7.745_450_142_783_414e-4,
    ],
    [
        1.0,
        2.053_191_626_637_759,
        1.676_384_830_183_803_8,
        0.689_767_334_985_1,
        0.148_103_976_427_480_08,
        0.015_198_666_563_616_457,
        5.475_938_084_995_345e-4,
        1.050_750_071_644_416_9e-9,
    ],
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shares_are_those_of_the_tables() {
        // Any statistical table; digits from memory of the usual quantiles.
        for (value, share) in [
            (0.0, 0.5),
            (1.0, 0.841_344_746_068_542_9),
            (-1.0, 0.158_655_253_931_457_05),
            (1.959_963_984_540_054, 0.975),
            (3.0, 0.998_650_101_968_369_9),
            (-4.0, 3.167_124_183_311_992e-5),
        ] {
            let found = share_below(value);
            assert!((found / share - 1.0).abs() < 1e-13, "{value}: {found}");
        }
    }

    #[test]
    fn the_value_at_a_share_has_that_share_below_it() {
        // The two functions come from different publications and must agree.
        for step in 1..4000 {
            let share = f64::from(step) / 4000.0;
            let back = share_below(value_at(share));
            assert!((back - share).abs() < 2e-15, "{share}: {back}");
        }
        for share in [4e-5, 1e-4, 1e-3] {
            assert!((share_below(value_at(share)) / share - 1.0).abs() < 1e-12, "{share}");
        }
    }
}
