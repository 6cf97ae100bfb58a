//! Real and complex numbers under one name, so that the decomposition of a
//! real tensor runs in real arithmetic at a quarter of the cost.

use std::ops::{Add, AddAssign, Mul, Neg, Sub, SubAssign};

use operator::C64;

/// A field element of the decomposition: `f64` or [`C64`].
pub trait Scalar:
    Copy
    + Add<Output = Self>
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Neg<Output = Self>
    + AddAssign
    + SubAssign
    + 'static
{
    /// Zero.
    const ZERO: Self;
    /// One.
    const ONE: Self;
    /// Complex conjugate.
    fn conj(self) -> Self;
    /// Squared magnitude.
    fn abs2(self) -> f64;
    /// Real part.
    fn re(self) -> f64;
    /// Multiplied by a real number.
    fn times(self, factor: f64) -> Self;
    /// As a complex number.
    fn complex(self) -> C64;
    /// An element spread evenly over the unit square (or interval).
    fn random(rng: &mut fastrand::Rng) -> Self;
}

impl Scalar for f64 {
    const ZERO: f64 = 0.0;
    const ONE: f64 = 1.0;
    fn conj(self) -> f64 {
        self
    }
    fn abs2(self) -> f64 {
        self * self
    }
    fn re(self) -> f64 {
        self
    }
    fn times(self, factor: f64) -> f64 {
        self * factor
    }
    fn complex(self) -> C64 {
        C64::new(self, 0.0)
    }
    fn random(rng: &mut fastrand::Rng) -> f64 {
        2.0 * rng.f64() - 1.0
    }
}

impl Scalar for C64 {
    const ZERO: C64 = C64::ZERO;
    const ONE: C64 = C64::ONE;
    fn conj(self) -> C64 {
        C64::conj(&self)
    }
    fn abs2(self) -> f64 {
        self.norm_sqr()
    }
    fn re(self) -> f64 {
        self.re
    }
    fn times(self, factor: f64) -> C64 {
        self * factor
    }
    fn complex(self) -> C64 {
        self
    }
    fn random(rng: &mut fastrand::Rng) -> C64 {
        C64::new(f64::random(rng), f64::random(rng))
    }
}
