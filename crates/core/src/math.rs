//! The one place where transcendental functions are computed, over the crate `libm`:
//! native and WebAssembly then give the same bits. Clippy forbids the `std` ones elsewhere.

pub use num_complex::Complex64;

macro_rules! over_libm {
    ($($(#[$doc:meta])* $name:ident($($arg:ident),+) = $target:ident;)*) => {
        $($(#[$doc])* #[inline] #[must_use]
        pub fn $name($($arg: f64),+) -> f64 { libm::$target($($arg),+) })*
    };
}

over_libm! {
    /// e^x.
    exp(x) = exp;
    /// e^x - 1 without cancellation.
    expm1(x) = expm1;
    /// Natural logarithm.
    ln(x) = log;
    /// ln(1 + x) without cancellation.
    ln_1p(x) = log1p;
    /// Base-10 logarithm.
    log10(x) = log10;
    /// x^y.
    pow(x, y) = pow;
    /// Sine (rad).
    sin(x) = sin;
    /// Cosine (rad).
    cos(x) = cos;
    /// Tangent (rad).
    tan(x) = tan;
    /// Arc sine (rad).
    asin(x) = asin;
    /// Arc cosine (rad).
    acos(x) = acos;
    /// Arc tangent (rad).
    atan(x) = atan;
    /// Arc tangent of y/x on the right quadrant (rad).
    atan2(y, x) = atan2;
    /// Hyperbolic sine.
    sinh(x) = sinh;
    /// Hyperbolic cosine.
    cosh(x) = cosh;
    /// Hyperbolic tangent.
    tanh(x) = tanh;
    /// Inverse hyperbolic sine.
    asinh(x) = asinh;
    /// Inverse hyperbolic tangent.
    atanh(x) = atanh;
    /// Cube root.
    cbrt(x) = cbrt;
    /// sqrt(x^2 + y^2) without overflow.
    hypot(x, y) = hypot;
    /// Error function.
    erf(x) = erf;
    /// Complementary error function.
    erfc(x) = erfc;
    /// ln |Gamma(x)|.
    ln_gamma(x) = lgamma;
    /// Gamma(x).
    gamma(x) = tgamma;
}

/// x^n by repeated multiplication in a fixed order.
#[inline]
#[must_use]
pub fn powi(x: f64, n: u32) -> f64 {
    let mut out = 1.0;
    for _ in 0..n {
        out *= x;
    }
    out
}

/// |z|.
#[inline]
#[must_use]
pub fn abs(z: Complex64) -> f64 {
    libm::hypot(z.re, z.im)
}

/// Phase of z in rad, in (-pi, pi].
#[inline]
#[must_use]
pub fn arg(z: Complex64) -> f64 {
    libm::atan2(z.im, z.re)
}

/// r e^{i phase_rad}.
#[inline]
#[must_use]
pub fn polar(r: f64, phase_rad: f64) -> Complex64 {
    Complex64::new(r * libm::cos(phase_rad), r * libm::sin(phase_rad))
}

/// e^z.
#[must_use]
pub fn cexp(z: Complex64) -> Complex64 {
    polar(libm::exp(z.re), z.im)
}

/// Principal logarithm of z.
#[must_use]
pub fn cln(z: Complex64) -> Complex64 {
    Complex64::new(libm::log(abs(z)), arg(z))
}

/// Principal square root (Re >= 0; on the cut the sign of Im z decides).
#[must_use]
pub fn csqrt(z: Complex64) -> Complex64 {
    if z.re == 0.0 && z.im == 0.0 {
        return Complex64::new(0.0, z.im);
    }
    let r = abs(z);
    if z.re >= 0.0 {
        let a = (0.5 * (r + z.re)).sqrt();
        Complex64::new(a, 0.5 * z.im / a)
    } else {
        let b = (0.5 * (r - z.re)).sqrt();
        Complex64::new(0.5 * z.im.abs() / b, b.copysign(z.im))
    }
}

/// Principal z^p for real p.
#[must_use]
pub fn cpow(z: Complex64, p: f64) -> Complex64 {
    if z.re == 0.0 && z.im == 0.0 {
        return Complex64::new(0.0, 0.0);
    }
    cexp(cln(z) * p)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn complex_functions_keep_their_identities() {
        for &(re, im) in &[
            (1.0, 2.0),
            (-3.0, 0.5),
            (-2.0, -1e-9),
            (0.0, 4.0),
            (5.0, 0.0),
        ] {
            let z = Complex64::new(re, im);
            let root = csqrt(z);
            assert!(abs(root * root - z) < 1e-15 * (1.0 + abs(z)));
            assert!(root.re >= 0.0);
            assert!(abs(cexp(cln(z)) - z) < 4e-15 * abs(z));
            assert!(abs(cpow(z, 0.5) - root) < 4e-15 * abs(root));
        }
    }
}
