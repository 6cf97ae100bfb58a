//! Claims about cost.

use operator::counts::Counts;

use super::{Decided, Measured, Test};
use crate::model::{BudgetClaim, ClaimKind, GateDef, Outcome};

impl Test<'_> {
    /// Each stated bound against what was counted or measured.
    pub(super) fn bounds(
        &self,
        bounds: &BudgetClaim,
        counts: &Counts,
        gate: Option<&GateDef>,
    ) -> Decided {
        let encoding = gate.and_then(|gate| self.encoding(gate));
        let cx = counts.cx.map(|cx| cx as f64);
        let ancillas = encoding.as_ref().and_then(|m| m.ancillas).map(|a| a as f64);
        let error = encoding.as_ref().and_then(|m| m.error);
        let success = encoding.as_ref().and_then(|m| m.success).map(|s| s.worst);
        let found = [
            ("cx", bounds.cx, cx, false),
            ("depth", bounds.depth, Some(counts.depth as f64), false),
            ("ancilla", bounds.ancilla, ancillas, false),
            ("error", bounds.error, error, false),
            ("success", bounds.success, success, true),
        ];
        let (mut broken, mut unknown) = (Vec::new(), Vec::new());
        for (name, bound, found, lower) in found {
            let Some(bound) = bound else { continue };
            match found {
                None => unknown.push(name),
                Some(found) if (found > bound && !lower) || (found < bound && lower) => {
                    broken.push(format!("{name} is {found}, allowed {bound}"));
                }
                Some(_) => {}
            }
        }
        let mut measured = Measured::decided(0.0, 0.0);
        measured.error = None;
        if !broken.is_empty() {
            measured.outcome = Outcome::Broken;
            measured.note = Some(broken.join("; "));
        } else if !unknown.is_empty() {
            let reason = format!("not known here: {}", unknown.join(", "));
            measured.outcome = Outcome::Undecided(reason);
        }
        Ok(measured)
    }

    /// What the gate's own `@cantle.encodes` measures.
    fn encoding(&self, gate: &GateDef) -> Option<Measured> {
        let claims = gate.claims.iter().filter_map(|index| self.program.claims().get(*index));
        let mut encodes = claims.filter(|claim| matches!(claim.kind, ClaimKind::Encodes { .. }));
        encodes.next().map(|claim| super::measure(self.program, claim, self.budget))
    }
}
