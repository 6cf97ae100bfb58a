//! Angles, phases and products as short text.

use std::f64::consts::PI;
use std::fmt;

use super::Portrait;

/// Denominators of the fractions of π that are recognised: what circuits of
/// hand-written gates and small Fourier transforms hold.
const DENOMINATORS: [u32; 8] = [1, 2, 3, 4, 6, 8, 16, 32];

/// How near to a fraction of π an angle must be to be called one.
const SAME_ANGLE: f64 = 1e-9;

/// An angle as a fraction of π, or to six figures.
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
    format!("{x:.6}").trim_end_matches('0').trim_end_matches('.').to_owned()
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

/// Factors with the wires they act on, in the order of their first wires.
pub(super) fn tensor(
    f: &mut fmt::Formatter<'_>,
    factors: &[(Vec<usize>, Portrait)],
) -> fmt::Result {
    for (at, (wires, factor)) in factors.iter().enumerate() {
        let wires: Vec<String> = wires.iter().map(usize::to_string).collect();
        let cross = if at == 0 { "" } else { " ⊗ " };
        write!(f, "{cross}{factor}[{}]", wires.join(","))?;
    }
    Ok(())
}
