//! A circuit as flat lines of standard gates.

use std::f64::consts::PI;

use operator::{Circuit, Control, Gate, Step};

use crate::model::Cannot;

/// Most lines that are written; a file of more is of no use in an editor.
const MOST_LINES: usize = 1_000_000;

/// Deepest nesting of definitions, inverses and powers that is written.
const DEEPEST: usize = 64;

/// The statements of a circuit, one a line, wire `k` called `names[k]`. They
/// need the standard library and nothing else; shared definitions are written
/// out. Their operator is the circuit's, global phase included.
///
/// # Errors
/// A stand-in, an angle that is not finite, a fractional power of a
/// definition, or more lines than a file should have.
pub fn circuit_lines(circuit: &Circuit, names: &[String]) -> Result<Vec<String>, Cannot> {
    Ok(statements(circuit, names)?.iter().map(Statement::line).collect())
}

/// A gate statement in two parts.
pub(super) struct Statement {
    /// Modifiers, the gate's name, parameters.
    pub(super) head: String,
    operands: String,
}

impl Statement {
    pub(super) fn line(&self) -> String {
        let space = if self.operands.is_empty() { "" } else { " " };
        format!("{}{space}{};", self.head, self.operands)
    }

    /// Whether this is a word of the head.
    pub(super) fn uses(&self, word: &str) -> bool {
        let part = |c: char| !(c.is_alphanumeric() || c == '_');
        self.head.split(part).any(|found| found == word)
    }
}

/// See [`circuit_lines`].
pub(super) fn statements(circuit: &Circuit, names: &[String]) -> Result<Vec<Statement>, Cannot> {
    let mut writer = Writer { names, lines: Vec::new() };
    for step in &circuit.steps {
        writer.step(step, 0)?;
    }
    Ok(writer.lines)
}

/// A finite angle as an expression: a small rational multiple of π as such,
/// anything else with the digits that give the same number again.
pub fn angle_text(angle: f64) -> String {
    /// Denominators that people write.
    const DENOMINATORS: [i64; 22] =
        [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 12, 16, 20, 24, 32, 48, 64, 128, 256, 512, 1024, 2048];
    /// Largest numerator that is easier to read than a decimal number.
    const LARGEST: f64 = 4096.0;
    /// A few units in the last place: what π costs when it comes out of an
    /// arctangent. The text is evaluated again before it is offered.
    const SLACK: f64 = 8.0 * f64::EPSILON;
    if angle == 0.0 {
        return "0".to_owned();
    }
    for denominator in DENOMINATORS {
        let numerator = (angle * denominator as f64 / PI).round();
        if numerator == 0.0 || numerator.abs() > LARGEST {
            continue;
        }
        let exact = numerator * PI / denominator as f64;
        if (exact - angle).abs() <= SLACK * angle.abs() {
            return multiple(numerator as i64, denominator);
        }
    }
    format!("{angle:?}")
}

fn multiple(numerator: i64, denominator: i64) -> String {
    let top = match numerator {
        1 => "pi".to_owned(),
        -1 => "-pi".to_owned(),
        other => format!("{other}*pi"),
    };
    if denominator == 1 { top } else { format!("{top}/{denominator}") }
}

struct Writer<'a> {
    names: &'a [String],
    lines: Vec<Statement>,
}

impl Writer<'_> {
    fn step(&mut self, step: &Step, depth: usize) -> Result<(), Cannot> {
        if depth > DEEPEST || self.lines.len() >= MOST_LINES {
            return Err(Cannot::new("the circuit is too large to be written out"));
        }
        if let Some(inner) = expanded(&step.gate)? {
            for part in &inner.steps {
                let mut part = part.mapped(|wire| step.targets[wire]);
                part.controls = step.controls.iter().copied().chain(part.controls).collect();
                self.step(&part, depth + 1)?;
            }
            return Ok(());
        }
        let line = self.line(step)?;
        self.lines.push(line);
        Ok(())
    }

    fn line(&self, step: &Step) -> Result<Statement, Cannot> {
        let all_on = step.controls.iter().all(|control| control.on);
        let mut wires: Vec<usize> = step.controls.iter().map(|control| control.wire).collect();
        wires.extend(&step.targets);
        let operands: Vec<&str> =
            wires.iter().map(|wire| self.names.get(*wire).map_or("", String::as_str)).collect();
        let head = match (&step.gate, step.controls.as_slice()) {
            // A phase under a control is a phase gate on that control.
            (Gate::Phase(angle), [front @ .., _]) if all_on => named(&Gate::P(*angle), front)?,
            (gate, controls) => named(gate, controls)?,
        };
        Ok(Statement { head, operands: operands.join(", ") })
    }
}

/// The circuit of a gate that has no line of its own.
fn expanded(gate: &Gate) -> Result<Option<Circuit>, Cannot> {
    /// Longest repetition that is written out.
    const REPEATED: f64 = 64.0;
    Ok(match gate {
        Gate::Call(definition) => Some(definition.circuit.clone()),
        Gate::Inverse(inner) => expanded(inner)?.map(|circuit| circuit.inverse()),
        Gate::Power(inner, exponent) => match expanded(inner)? {
            None => None,
            Some(_) if exponent.fract() != 0.0 || exponent.abs() > REPEATED => {
                return Err(Cannot::new(format!("a power of {exponent} cannot be written out")));
            }
            Some(circuit) => {
                let base = if *exponent < 0.0 { circuit.inverse() } else { circuit };
                let mut product = Circuit::new(base.wires);
                for _ in 0..exponent.abs() as usize {
                    product.steps.extend(base.steps.iter().cloned());
                }
                Some(product)
            }
        },
        _ => None,
    })
}

/// A gate under controls, with its modifiers and parameters.
fn named(gate: &Gate, controls: &[Control]) -> Result<String, Cannot> {
    let all_on = controls.iter().all(|control| control.on);
    let short = match (gate, controls.len()) {
        (_, 0) => None,
        _ if !all_on => None,
        (Gate::X, 1) => Some("cx".to_owned()),
        (Gate::X, 2) => Some("ccx".to_owned()),
        (Gate::Y, 1) => Some("cy".to_owned()),
        (Gate::Z, 1) => Some("cz".to_owned()),
        (Gate::H, 1) => Some("ch".to_owned()),
        (Gate::Swap, 1) => Some("cswap".to_owned()),
        (Gate::P(a), 1) => Some(format!("cp({})", finite(*a)?)),
        (Gate::Rx(a), 1) => Some(format!("crx({})", finite(*a)?)),
        (Gate::Ry(a), 1) => Some(format!("cry({})", finite(*a)?)),
        (Gate::Rz(a), 1) => Some(format!("crz({})", finite(*a)?)),
        _ => None,
    };
    match short {
        Some(short) => Ok(short),
        None => Ok(format!("{}{}", control_prefix(controls), plain(gate)?)),
    }
}

/// `ctrl @ negctrl(2) @ ` for controls in their order.
fn control_prefix(controls: &[Control]) -> String {
    let mut prefix = String::new();
    for run in controls.chunk_by(|a, b| a.on == b.on) {
        let word = if run[0].on { "ctrl" } else { "negctrl" };
        // One negctrl a qubit: what negctrl(n) means is disputed.
        if run.len() == 1 || !run[0].on {
            prefix.push_str(&format!("{word} @ ").repeat(run.len()));
        } else {
            prefix.push_str(&format!("{word}({}) @ ", run.len()));
        }
    }
    prefix
}

/// A gate without controls.
fn plain(gate: &Gate) -> Result<String, Cannot> {
    Ok(match gate {
        Gate::Phase(a) => format!("gphase({})", finite(*a)?),
        Gate::Id => "id".to_owned(),
        Gate::X => "x".to_owned(),
        Gate::Y => "y".to_owned(),
        Gate::Z => "z".to_owned(),
        Gate::H => "h".to_owned(),
        Gate::S => "s".to_owned(),
        Gate::Sdg => "sdg".to_owned(),
        Gate::T => "t".to_owned(),
        Gate::Tdg => "tdg".to_owned(),
        Gate::Sx => "sx".to_owned(),
        Gate::P(a) => format!("p({})", finite(*a)?),
        Gate::Rx(a) => format!("rx({})", finite(*a)?),
        Gate::Ry(a) => format!("ry({})", finite(*a)?),
        Gate::Rz(a) => format!("rz({})", finite(*a)?),
        Gate::U(a, b, c) => format!("U({}, {}, {})", finite(*a)?, finite(*b)?, finite(*c)?),
        Gate::Swap => "swap".to_owned(),
        Gate::Inverse(inner) => format!("inv @ {}", plain(inner)?),
        Gate::Power(inner, k) => format!("pow({}) @ {}", finite(*k)?, plain(inner)?),
        Gate::Dense(_) | Gate::Call(_) => {
            return Err(Cannot::new("a matrix that is not synthesised cannot be written out"));
        }
    })
}

fn finite(angle: f64) -> Result<String, Cannot> {
    if angle.is_finite() {
        Ok(angle_text(angle))
    } else {
        Err(Cannot::new("an angle of the circuit is not a finite number"))
    }
}

#[cfg(test)]
mod tests {
    use super::{angle_text, circuit_lines};
    use operator::{Circuit, Control, Gate};
    use std::f64::consts::PI;

    #[test]
    fn angles_keep_their_value() {
        for (angle, text) in [
            (0.0, "0"),
            (-0.0, "0"),
            (PI, "pi"),
            (-PI / 2.0, "-pi/2"),
            (3.0 * PI / 4.0, "3*pi/4"),
            (0.1, "0.1"),
            (-1e-9, "-1e-9"),
            (PI / 7.0, "pi/7"),
            (1.2345678901234567, "1.2345678901234567"),
        ] {
            assert_eq!(angle_text(angle), text);
        }
    }

    #[test]
    fn gates_take_their_shortest_name() {
        let names = ["a", "b", "c"].map(str::to_owned);
        let (on, off) = (Control::one, Control::zero);
        for (gate, controls, targets, text) in [
            (Gate::X, vec![on(0)], vec![1], "cx a, b;"),
            (Gate::X, vec![on(2), on(0)], vec![1], "ccx c, a, b;"),
            (Gate::X, vec![off(0)], vec![1], "negctrl @ x a, b;"),
            (Gate::X, vec![on(0), off(1)], vec![2], "ctrl @ negctrl @ x a, b, c;"),
            (Gate::Phase(PI), vec![], vec![], "gphase(pi);"),
            (Gate::Phase(PI), vec![on(1)], vec![], "p(pi) b;"),
            (Gate::Phase(PI), vec![on(0), on(1)], vec![], "cp(pi) a, b;"),
            (Gate::Phase(PI), vec![off(1)], vec![], "negctrl @ gphase(pi) b;"),
            (
                Gate::U(1.0, 0.0, PI),
                vec![on(0), on(1)],
                vec![2],
                "ctrl(2) @ U(1.0, 0, pi) a, b, c;",
            ),
            (Gate::Inverse(Box::new(Gate::Sx)), vec![on(0)], vec![1], "ctrl @ inv @ sx a, b;"),
        ] {
            let mut circuit = Circuit::new(3);
            circuit.push_controlled(gate, &controls, &targets);
            assert_eq!(circuit_lines(&circuit, &names), Ok(vec![text.to_owned()]));
        }
    }
}
