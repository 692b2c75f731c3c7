//! The only doors to transcendental functions: one implementation, the same bytes on every platform.

/// ln 10, dimensionless.
pub const LN_10: f64 = std::f64::consts::LN_10;

/// e to the power x; dimensionless number.
#[inline]
pub fn exp(x: f64) -> f64 {
    libm::exp(x)
}

/// Natural logarithm of a dimensionless number.
#[inline]
pub fn ln(x: f64) -> f64 {
    libm::log(x)
}

/// Decadic logarithm of a dimensionless number.
#[inline]
pub fn log10(x: f64) -> f64 {
    libm::log10(x)
}

/// Ten to the power x; dimensionless number.
#[inline]
pub fn exp10(x: f64) -> f64 {
    libm::exp10(x)
}

/// ln(1 + x) of a dimensionless number, accurate for small x.
#[inline]
pub fn ln_1p(x: f64) -> f64 {
    libm::log1p(x)
}

/// x to the power y; dimensionless number.
#[inline]
pub fn pow(x: f64, y: f64) -> f64 {
    libm::pow(x, y)
}

/// Cosine of an angle in radians; dimensionless number.
#[inline]
pub fn cos(x: f64) -> f64 {
    libm::cos(x)
}

/// The error function, a dimensionless number.
#[inline]
pub fn erf(x: f64) -> f64 {
    libm::erf(x)
}

/// Logarithm of the gamma function, a dimensionless number.
#[inline]
pub fn ln_gamma(x: f64) -> f64 {
    libm::lgamma(x)
}
