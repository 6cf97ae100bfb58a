//! From a matrix to a circuit
