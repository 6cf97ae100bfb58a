//! What a method is: a name, a test whether it fits, and drafts.

use operator::{Budget, Circuit};

use crate::{Result, Target};

/// What to look for among the ways to encode a matrix.
#[derive(Debug, Clone, PartialEq)]
pub struct Options {
    /// Largest allowed ‖M − scale · corner‖, in the units of the matrix.
    pub tolerance: f64,
    /// Only this method; `None` tries every one.
    pub method: Option<String>,
    /// What comes first among the candidates.
    pub prefer: Prefer,
}

/// The default of [`Options::tolerance`]: what a claim without a figure of
/// its own promises, far above rounding and far below any modelling error.
pub const DEFAULT_TOLERANCE: f64 = 1e-8;

impl Default for Options {
    fn default() -> Self {
        Options { tolerance: DEFAULT_TOLERANCE, method: None, prefer: Prefer::default() }
    }
}

/// The quantity that decides the order of candidates.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Prefer {
    /// Fewest CX.
    #[default]
    Cx,
    /// Smallest scale.
    Scale,
    /// Fewest ancillas.
    Ancilla,
    /// Smallest depth.
    Depth,
}

/// A circuit as a method proposes it, not yet measured.
#[derive(Debug, Clone)]
pub struct Draft {
    /// Ancillas first, then the signal wires, most significant first.
    pub circuit: Circuit,
    /// How many of the first wires are ancillas.
    pub ancillas: usize,
    /// `scale · corner` is meant to equal [`Target::matrix`] (the matrix
    /// after its power of two was taken out).
    pub scale: f64,
    /// One short phrase for a person: what was found or chosen.
    pub note: String,
}

/// One way to turn matrices into circuits.
pub trait Method: Sync {
    /// The name users type, in kebab case.
    fn name(&self) -> &'static str;

    /// Whether the method can do anything with this matrix; if not, why.
    fn fits(&self, target: &Target) -> std::result::Result<(), String>;

    /// The method's proposals. The same target gives the same gates.
    ///
    /// # Errors
    /// [`Error::Unfit`](crate::Error::Unfit) with a reason, or whatever the
    /// numerical work reports, [`Stopped`](operator::Error::Stopped) included.
    fn encode(&self, target: &Target, options: &Options, budget: &Budget) -> Result<Vec<Draft>>;
}
