//! The table of all methods. A new one is a file beside this and a line here.

mod kronecker_sum;

use crate::Method;

/// All methods, in the order in which they are tried.
pub static METHODS: &[&dyn Method] = &[&kronecker_sum::KroneckerSum];
