//! The checks of one program, in the two stages in which an editor sees them.

use operator::Budget;
use program::{Finding, Program};

/// What names, syntax and annotations tell.
pub(crate) fn names(program: &Program) -> Vec<Finding> {
    let shown = |f: &&Finding| !program.suppressed(f.code, f.file, f.range);
    program.findings().iter().filter(shown).cloned().collect()
}

/// What the arithmetic on operators tells. Unfinished once `budget` stops.
///
/// No lint needs arithmetic yet, so there is nothing to find.
pub(crate) fn operators(_program: &Program, _budget: &Budget) -> Vec<Finding> {
    Vec::new()
}
