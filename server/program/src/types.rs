//! Classical types, with their sizes already known.

use std::fmt;

/// A classical scalar type.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Type {
    Bool,
    /// A single bit, the same values as a bool.
    Bit,
    /// `bit[n]`
    Bits(usize),
    Int {
        width: u32,
        signed: bool,
    },
    Float,
    /// An unsigned number of `width` bits times 2π/2^width.
    Angle(u32),
    Complex,
    Duration,
    /// Not known, because the declaration is broken; fits everything.
    Unknown,
}

/// The width of `int`, `uint` and `angle` without one, and the widest that
/// is evaluated.
pub(crate) const WIDEST: u32 = 64;

impl fmt::Display for Type {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Type::Bool => write!(f, "bool"),
            Type::Bit => write!(f, "bit"),
            Type::Bits(n) => write!(f, "bit[{n}]"),
            Type::Int { width, signed } => {
                let name = if *signed { "int" } else { "uint" };
                if *width == WIDEST { write!(f, "{name}") } else { write!(f, "{name}[{width}]") }
            }
            Type::Float => write!(f, "float"),
            Type::Angle(WIDEST) => write!(f, "angle"),
            Type::Angle(width) => write!(f, "angle[{width}]"),
            Type::Complex => write!(f, "complex"),
            Type::Duration => write!(f, "duration"),
            Type::Unknown => write!(f, "unknown"),
        }
    }
}
