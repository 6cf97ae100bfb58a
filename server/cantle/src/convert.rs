//! Between the protocol's types and ours. Nothing else converts positions.

mod position;

pub(crate) use position::{Encoding, offset, position, range, text_range};
