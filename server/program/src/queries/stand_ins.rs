//! The stand-ins that a place of the text is about.

use grammar::TextRange;

use crate::{FileId, GateDef, Program};

/// The stand-in that a selection of the main file touches: in its
/// definition, or in a name that means it (a call, most often).
pub fn stand_in_at(program: &Program, selection: TextRange) -> Option<&GateDef> {
    let stand_ins = || program.gates().iter().filter(|gate| gate.stand_in.is_some());
    let touches = |range: TextRange| range.intersect(selection).is_some();
    let defined = stand_ins().find(|gate| gate.file == FileId::MAIN && touches(gate.range));
    defined.or_else(|| {
        let named = |gate: &&GateDef| {
            program
                .references()
                .iter()
                .any(|r| r.file == FileId::MAIN && r.symbol == gate.symbol && touches(r.range))
        };
        stand_ins().find(named)
    })
}

/// The stand-ins that the main file defines, in the order of the text.
pub fn stand_ins(program: &Program) -> impl Iterator<Item = &GateDef> {
    let own = |gate: &&GateDef| gate.file == FileId::MAIN && gate.stand_in.is_some();
    program.gates().iter().filter(own)
}
