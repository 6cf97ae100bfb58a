//! The table of all methods. A new one is a file beside this and a line here.

mod cosine_sine;
mod diagonal;
mod dilation;
mod euler;
mod kak;
mod kronecker_sum;
mod pauli_sum;

use crate::Method;

/// All methods, in the order in which they are tried.
pub static METHODS: &[&dyn Method] = &[
    &euler::Euler,
    &kak::Kak,
    &cosine_sine::CosineSine,
    &diagonal::Diagonal,
    &dilation::Dilation,
    &kronecker_sum::KroneckerSum,
    &pauli_sum::PauliSum,
];
