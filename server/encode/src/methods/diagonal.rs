//! `diagonal`: a diagonal matrix, unitary or not.

use operator::{Budget, C64, Circuit};

use crate::{Draft, Method, Options, Result, Target, mux};

/// Magnitudes by one multiplexed rotation of an ancilla, phases by a diagonal
/// gate: at most 2ⁿ − 1 and 2ⁿ − 2 CX. Where all magnitudes agree there is
/// no rotation and no ancilla.
pub(super) struct Diagonal;

impl Method for Diagonal {
    fn name(&self) -> &'static str {
        "diagonal"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        let m = &target.matrix;
        let off = (0..m.cols()).flat_map(|c| (0..m.rows()).map(move |r| (r, c)));
        match off.filter(|(r, c)| r != c).find(|&at| m[at] != C64::ZERO) {
            Some((r, c)) => Err(format!("entry ({r}, {c}) is off the diagonal and not zero")),
            None => Ok(()),
        }
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        budget.admit(target.wires + 1)?;
        let entries = target.matrix.diagonal();
        let sizes: Vec<f64> = entries.iter().map(|z| z.norm()).collect();
        let largest = sizes.iter().copied().fold(0.0, f64::max);
        let scale = if largest > 0.0 { largest } else { 1.0 };
        let flat = sizes.iter().all(|s| scale - s <= FLAT * scale);
        let ancillas = usize::from(!flat);
        let signal: Vec<usize> = (ancillas..ancillas + target.wires).collect();
        let mut circuit = Circuit::new(ancillas + target.wires);
        if !flat {
            let angles: Vec<f64> =
                sizes.iter().map(|s| 2.0 * (s / scale).min(1.0).acos()).collect();
            mux::projected_rotation(&mut circuit, &angles, &signal, 0);
        }
        mux::diagonal(&mut circuit, &mux::phases_of(&entries), &signal);
        let note = if flat { "phases only" } else { "magnitudes and phases apart" };
        Ok(vec![Draft { circuit, ancillas, scale, note: note.into() }])
    }
}

/// Relative spread of magnitudes that is rounding, not a difference.
const FLAT: f64 = 1e-14;
