//! Angles, phases and products as short text.

use std::f64::consts::PI;
use std::fmt;

use super::Portrait;

/// Denominators of the fractions of π that are recognised: what circuits of
/// hand-written gates and small Fourier transforms hold.
const DENOMINATORS: [u32; 8] = [1, 2, 3, 4, 6, 8, 16, 32];

/// How near to a fraction of π an angle must be to be called one: what the
/// entries of an operator leave of it, see [`super::SAME`].
const SAME_ANGLE: f64 = 1e-12;

/// An angle as a fraction of π, or to seven figures.
pub(super) fn angle(x: f64) -> String {
    for denominator in DENOMINATORS {
        let numerator = (x / PI * f64::from(denominator)).round();
        let near = (x - numerator * PI / f64::from(denominator)).abs() <= SAME_ANGLE;
        if near && numerator != 0.0 && numerator.abs() < 1e6 {
            let sign = if numerator < 0.0 { "-" } else { "" };
            let count = match numerator.abs() {
                1.0 => String::new(),
                many => many.to_string(),
            };
            let over = if denominator == 1 { String::new() } else { format!("/{denominator}") };
            return format!("{sign}{count}π{over}");
        }
    }
    // Seven figures, whatever the size: a tiny angle is not written as none.
    let figures = format!("{x:.6e}");
    match figures.parse::<f64>() {
        Ok(short) if short != 0.0 && (short.abs() < 1e-3 || short.abs() >= 1e6) => {
            format!("{short:e}")
        }
        Ok(short) => short.to_string(),
        Err(_) => figures,
    }
}

/// The factor e^{iγ} in front of something.
pub(super) fn factor(phase: f64) -> String {
    match angle(phase).as_str() {
        "0" => String::new(),
        "π" | "-π" => "-".to_owned(),
        "π/2" => "i ".to_owned(),
        "-π/2" => "-i ".to_owned(),
        other => format!("e^(i {other}) "),
    }
}

/// A portrait as one line; wires are named only where they are not all in
/// order.
pub(super) fn whole(f: &mut fmt::Formatter<'_>, portrait: &Portrait) -> fmt::Result {
    match portrait {
        Portrait::Named { wires, .. } if wires.iter().enumerate().any(|(k, wire)| k != *wire) => {
            placed(f, portrait, wires)
        }
        Portrait::Tensor(factors) => {
            for (at, (wires, factor)) in factors.iter().enumerate() {
                f.write_str(if at == 0 { "" } else { " ⊗ " })?;
                placed(f, factor, wires)?;
            }
            Ok(())
        }
        Portrait::Controlled { wire, on, inner } => {
            control(f, *wire, *on)?;
            match &**inner {
                Portrait::Named { wires, .. } => placed(f, inner, wires),
                other => whole(f, other),
            }
        }
        plain => kind(f, plain),
    }
}

/// A part of a larger operator with the wires that it acts on.
fn placed(f: &mut fmt::Formatter<'_>, portrait: &Portrait, wires: &[usize]) -> fmt::Result {
    let wires = match portrait {
        Portrait::Controlled { wire, on, inner } => {
            control(f, *wire, *on)?;
            let others: Vec<usize> = wires.iter().copied().filter(|other| other != wire).collect();
            return placed(f, inner, &others);
        }
        Portrait::Tensor(_) => return whole(f, portrait),
        Portrait::Named { wires, .. } => wires,
        _ => wires,
    };
    kind(f, portrait)?;
    let wires: Vec<String> = wires.iter().map(usize::to_string).collect();
    write!(f, "[{}]", wires.join(","))
}

fn control(f: &mut fmt::Formatter<'_>, wire: usize, on: bool) -> fmt::Result {
    write!(f, "{}[{wire}] @ ", if on { "ctrl" } else { "negctrl" })
}

/// What an operator is, without its wires.
fn kind(f: &mut fmt::Formatter<'_>, portrait: &Portrait) -> fmt::Result {
    match portrait {
        Portrait::Zero => f.write_str("zero"),
        Portrait::Identity => f.write_str("identity"),
        Portrait::GlobalPhase(phase) => write!(f, "global phase {}", angle(*phase)),
        Portrait::Pauli { phase, letters } => write!(f, "{}Pauli {letters}", factor(*phase)),
        Portrait::Rotation { phase, angle: by, letters } => {
            let sign = if *by < 0.0 { "" } else { "-" };
            write!(f, "{}exp({sign}i {} {letters})", factor(*phase), angle(by.abs()))
        }
        Portrait::Named { phase, gate, angle: None, .. } => {
            write!(f, "{}{gate}", factor(*phase))
        }
        Portrait::Named { phase, gate, angle: Some(by), .. } => {
            write!(f, "{}{gate}({})", factor(*phase), angle(*by))
        }
        Portrait::Diagonal => f.write_str("diagonal"),
        Portrait::Permutation => f.write_str("permutation"),
        Portrait::PhasedPermutation => f.write_str("phased permutation"),
        Portrait::Reflection { rank } => write!(f, "reflection I - 2P, rank P = {rank}"),
        Portrait::Plain { rows, cols } => write!(f, "{rows}×{cols} matrix"),
        Portrait::Controlled { .. } | Portrait::Tensor(_) => whole(f, portrait),
    }
}
