//! Views of types and of the brackets that carry their sizes.

use super::*;
use SyntaxKind as K;

nodes! {
    /// A scalar type with its width.
    ScalarType;
    /// `array[TYPE, sizes]`
    ArrayType;
    /// `readonly array[TYPE, …]` or `mutable array[TYPE, …]`
    ArrayReferenceType;
    /// `qubit` or `qubit[n]`
    QubitType;
    /// `qreg` or `creg` as the type of a parameter.
    OldType;
    /// `[size]` of a type or `[duration]` of a quantum statement.
    Designator;
}

choice! {
    /// Any type.
    Type {
        /// See [`ScalarType`].
        Scalar(ScalarType),
        /// See [`ArrayType`].
        Array(ArrayType),
        /// See [`ArrayReferenceType`].
        Reference(ArrayReferenceType),
        /// See [`QubitType`].
        Qubit(QubitType),
        /// See [`OldType`].
        Old(OldType),
    }
}

impl ScalarType {
    /// The keyword of the type, such as `int` or `complex`.
    pub fn keyword(&self) -> Option<SyntaxToken> {
        self.token_of(SCALAR_KEYWORDS)
    }

    /// The width in brackets.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }

    /// The type of the two parts of a `complex`.
    pub fn part(&self) -> Option<ScalarType> {
        self.child()
    }
}

/// The words that begin a scalar type.
pub(crate) const SCALAR_KEYWORDS: &[SyntaxKind] = &[
    K::BitKw,
    K::IntKw,
    K::UintKw,
    K::FloatKw,
    K::AngleKw,
    K::BoolKw,
    K::DurationKw,
    K::StretchKw,
    K::ComplexKw,
];

impl ArrayType {
    /// The type of the entries.
    pub fn element(&self) -> Option<ScalarType> {
        self.child()
    }

    /// The sizes of the dimensions, outermost first.
    pub fn sizes(&self) -> AstChildren<Expression> {
        self.children()
    }
}

impl ArrayReferenceType {
    /// Whether the array may be written.
    pub fn is_mutable(&self) -> bool {
        self.token(K::MutableKw).is_some()
    }

    /// The type of the entries.
    pub fn element(&self) -> Option<ScalarType> {
        self.child()
    }

    /// The sizes of the dimensions, or none if `#dim` gives their number.
    pub fn sizes(&self) -> Vec<Expression> {
        match self.token(K::HashDimKw) {
            Some(_) => Vec::new(),
            None => self.children().collect(),
        }
    }

    /// The number of dimensions after `#dim =`.
    pub fn dimensions(&self) -> Option<Expression> {
        self.token(K::HashDimKw)?;
        self.child()
    }
}

impl QubitType {
    /// The size in brackets.
    pub fn designator(&self) -> Option<Designator> {
        self.child()
    }
}

impl OldType {
    /// Whether this is `qreg`.
    pub fn is_quantum(&self) -> bool {
        self.token(K::QregKw).is_some()
    }
}

impl Designator {
    /// The value in the brackets.
    pub fn value(&self) -> Option<Expression> {
        self.child()
    }
}
