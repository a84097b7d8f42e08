//! A root of a function between two points where its signs differ.

/// Iterations after which the bracket is good enough in any case: bisection alone needs about 60.
const MOST: u32 = 120;

/// A root of `f` in `[a, b]`, where `fa = f(a)` and `fb = f(b)` differ in sign or one of them is zero.
/// Where `f` jumps through zero, the place of the jump.
///
/// Regula falsi with halved weights (the Illinois rule) and a bisection whenever the bracket shrinks too slowly;
/// ends when the bracket is at rounding level. Source: Dowell & Jarratt (1971), BIT 11, 168-174.
pub fn bracketed(mut a: f64, mut fa: f64, mut b: f64, mut fb: f64, mut f: impl FnMut(f64) -> f64) -> f64 {
    if fa == 0.0 {
        return a;
    }
    if fb == 0.0 {
        return b;
    }
    let mut side = 0_i8;
    for iteration in 0..MOST {
        let width = (b - a).abs();
        if width <= 2.0 * f64::EPSILON * super::larger(a.abs(), b.abs()) {
            break;
        }
        let mut x = (fa * b - fb * a) / (fa - fb);
        let (low, high) = if a < b { (a, b) } else { (b, a) };
        if iteration % 4 == 3 || !(x > low && x < high) {
            x = low + 0.5 * (high - low);
        }
        if x <= low || x >= high {
            break;
        }
        let fx = f(x);
        if fx == 0.0 || fx.is_nan() {
            return x;
        }
        if (fx < 0.0) == (fb < 0.0) {
            (b, fb) = (x, fx);
            if side == -1 {
                fa /= 2.0;
            }
            side = -1;
        } else {
            (a, fa) = (x, fx);
            if side == 1 {
                fb /= 2.0;
            }
            side = 1;
        }
    }
    if fa.abs() < fb.abs() { a } else { b }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_simple_root_is_found_to_rounding() {
        let root = bracketed(0.0, -2.0, 2.0, 2.0, |x| x * x - 2.0);
        assert!((root - std::f64::consts::SQRT_2).abs() <= 4.0 * f64::EPSILON);
    }

    #[test]
    fn a_flat_root_and_a_jump_end() {
        let flat = bracketed(-1.0, -1.0, 1.5, 1.0, |x| x * x * x * x * x);
        assert!(flat.abs() < 1e-3);
        let jump = bracketed(0.0, -1.0, 1.0, 1.0, |x| if x < 0.3 { -1.0 } else { 1.0 });
        assert!((jump - 0.3).abs() < 1e-12);
    }
}
