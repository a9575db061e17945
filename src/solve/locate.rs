//! Roots and extremes of a function of one variable inside a bracket.

/// The place in `[low, high]` where `function` changes sign, from the side of `low` kept right.
///
/// Regula falsi with the Illinois correction, guarded by bisection: it needs only a sign change,
/// converges on jumps too, and returns the first point on the far side within `tolerance`.
pub fn root(low: f64, high: f64, mut function: impl FnMut(f64) -> f64, tolerance: f64) -> f64 {
    let (mut a, mut b) = (low, high);
    let (mut fa, mut fb) = (function(a), function(b));
    if (fa < 0.0) == (fb < 0.0) {
        return b;
    }
    let mut side = 0;
    for iteration in 0..200 {
        if (b - a).abs() <= tolerance || fb == 0.0 {
            break;
        }
        let mut c = (a * fb - b * fa) / (fb - fa);
        if iteration % 4 == 3 || !c.is_finite() || c <= a.min(b) || c >= a.max(b) {
            c = 0.5 * (a + b);
        }
        if c == a || c == b {
            break;
        }
        let fc = function(c);
        if (fc < 0.0) == (fb < 0.0) {
            b = c;
            fb = fc;
            if side == 1 {
                fa *= 0.5;
            }
            side = 1;
        } else {
            a = c;
            fa = fc;
            if side == -1 {
                fb *= 0.5;
            }
            side = -1;
        }
    }
    b
}

/// The place and value of the largest `function` in `[low, high]`, by golden section with parabolas.
///
/// Source: Brent, *Algorithms for Minimization without Derivatives* (1973), chapter 5.
pub fn maximum(low: f64, high: f64, mut function: impl FnMut(f64) -> f64) -> (f64, f64) {
    const GOLDEN: f64 = 0.381_966_011_250_105_1;
    let (mut a, mut b) = (low, high);
    let mut x = a + GOLDEN * (b - a);
    let (mut w, mut v) = (x, x);
    let mut fx = -function(x);
    let (mut fw, mut fv) = (fx, fx);
    let (mut step, mut before) = (0.0_f64, 0.0_f64);
    for _ in 0..60 {
        let middle = 0.5 * (a + b);
        let tolerance = 1e-9 * x.abs() + 1e-12;
        if (x - middle).abs() <= 2.0 * tolerance - 0.5 * (b - a) {
            break;
        }
        let mut golden = true;
        if before.abs() > tolerance {
            let r = (x - w) * (fx - fv);
            let mut q = (x - v) * (fx - fw);
            let mut p = (x - v) * q - (x - w) * r;
            q = 2.0 * (q - r);
            if q > 0.0 {
                p = -p;
            }
            q = q.abs();
            let old = before;
            before = step;
            if p.abs() < (0.5 * q * old).abs() && p > q * (a - x) && p < q * (b - x) {
                step = p / q;
                golden = false;
            }
        }
        if golden {
            before = if x >= middle { a - x } else { b - x };
            step = GOLDEN * before;
        }
        let u = if step.abs() >= tolerance { x + step } else { x + tolerance.copysign(step) };
        let fu = -function(u);
        if fu <= fx {
            if u >= x {
                a = x;
            } else {
                b = x;
            }
            (v, fv, w, fw, x, fx) = (w, fw, x, fx, u, fu);
        } else {
            if u < x {
                a = u;
            } else {
                b = u;
            }
            if fu <= fw || w == x {
                (v, fv, w, fw) = (w, fw, u, fu);
            } else if fu <= fv || v == x || v == w {
                (v, fv) = (u, fu);
            }
        }
    }
    (x, -fx)
}

/// The vertex of the parabola through three points with rising places, when it lies between the outer ones.
pub fn vertex(x: [f64; 3], y: [f64; 3]) -> Option<(f64, f64)> {
    let left = (y[1] - y[0]) / (x[1] - x[0]);
    let right = (y[2] - y[1]) / (x[2] - x[1]);
    let bend = (right - left) / (x[2] - x[0]);
    if bend == 0.0 || !bend.is_finite() {
        return None;
    }
    let place = 0.5 * (x[0] + x[1] - left / bend);
    (place > x[0] && place < x[2]).then(|| {
        let value = y[0] + left * (place - x[0]) + bend * (place - x[0]) * (place - x[1]);
        (place, value)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_root_is_found_to_the_tolerance_and_lies_on_the_far_side() {
        let found = root(0.0, 2.0, |x| 2.0 - x * x, 1e-13);
        assert!((found - 2.0_f64.sqrt()).abs() < 1e-12 && 2.0 - found * found <= 1e-12);
        assert!((root(0.0, 1.0, |x| if x < 0.3 { 1.0 } else { -1.0 }, 1e-12) - 0.3).abs() < 1e-11);
    }

    #[test]
    fn a_maximum_is_found_within_the_bracket() {
        let (place, value) = maximum(0.0, 3.0, f64::sin);
        assert!((place - std::f64::consts::FRAC_PI_2).abs() < 1e-7 && (value - 1.0).abs() < 1e-14);
    }

    #[test]
    fn the_vertex_of_a_parabola_is_exact() {
        let parabola = |x: f64| 1.0 - (x - 0.4) * (x - 0.4);
        let (place, value) = vertex([0.0, 0.5, 1.0], [0.0, 0.5, 1.0].map(parabola)).unwrap();
        assert!((place - 0.4).abs() < 1e-12 && (value - 1.0).abs() < 1e-12);
    }
}
