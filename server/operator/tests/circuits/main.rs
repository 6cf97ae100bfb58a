//! The crate from outside: published circuits, and random circuits against
//! operators built from Kronecker products.

mod published;
mod reference;
