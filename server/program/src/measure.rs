//! Claims put to the test: the circuit that the text means is evaluated and
//! compared with what was claimed.

mod blocks;
mod budgets;
mod properties;

use std::f64::consts::TAU;

use operator::counts::counts;
use operator::{Budget, C64, Circuit, Matrix, encoded_columns, evaluate, evaluate_columns, norm};

use crate::build::DEFAULT_TOLERANCE;
use crate::model::{Cannot, Claim, ClaimKind, GateDef, MatrixDef, Measured, Outcome, Subject};
use crate::program::Program;

/// Points at which a gate is checked for each parameter without a stated
/// value. Three generic ones tell trigonometric polynomials of the low
/// degrees that gates have from those that only agree at special angles.
const POINTS: usize = 3;

/// Relative excess of a matrix's norm over a scale that rounding explains.
const NORM_SLACK: f64 = 1e-12;

impl Measured {
    /// Nothing found out, for a reason.
    fn undecided(tolerance: f64, reason: impl Into<String>) -> Measured {
        Measured {
            outcome: Outcome::Undecided(reason.into()),
            error: None,
            tolerance,
            scale: None,
            ancillas: None,
            norm: None,
            success: None,
            samples: Vec::new(),
            note: None,
        }
    }

    /// A distance against what is allowed.
    fn decided(error: f64, tolerance: f64) -> Measured {
        let outcome = if error <= tolerance { Outcome::Holds } else { Outcome::Broken };
        Measured { outcome, error: Some(error), ..Measured::undecided(tolerance, "") }
    }
}

/// Why a claim cannot be decided, in words.
struct Reason(String);

impl From<operator::Error> for Reason {
    fn from(error: operator::Error) -> Self {
        Reason(error.to_string())
    }
}

impl From<Cannot> for Reason {
    fn from(cannot: Cannot) -> Self {
        Reason(cannot.reason)
    }
}

impl From<&str> for Reason {
    fn from(reason: &str) -> Self {
        Reason(reason.to_owned())
    }
}

type Decided = Result<Measured, Reason>;

/// See [`Program::measure`].
pub(crate) fn measure(program: &Program, claim: &Claim, budget: &Budget) -> Measured {
    let test = Test { program, claim, budget };
    let tolerance = test.tolerance();
    test.run().unwrap_or_else(|Reason(reason)| Measured::undecided(tolerance, reason))
}

/// One claim with everything that deciding it takes.
struct Test<'a> {
    program: &'a Program,
    claim: &'a Claim,
    budget: &'a Budget,
}

impl Test<'_> {
    /// What the claim allows, or the default of its kind.
    fn tolerance(&self) -> f64 {
        match &self.claim.kind {
            ClaimKind::Dense { within, .. }
            | ClaimKind::Encodes { within, .. }
            | ClaimKind::Equals { within, .. } => within.unwrap_or(DEFAULT_TOLERANCE),
            ClaimKind::Clean { .. } => DEFAULT_TOLERANCE,
            ClaimKind::Property(_) => properties::TOLERANCE,
            ClaimKind::Budget(_) => 0.0,
        }
    }

    fn run(&self) -> Decided {
        match (self.claim.subject, &self.claim.kind) {
            (Subject::Matrix(index), ClaimKind::Property(property)) => {
                properties::measure(&self.program.matrices()[index], *property)
            }
            (Subject::Gate(gate), _) => self.gate(&self.program.gates()[gate]),
            (Subject::Block(range), _) => self.block(range),
            (Subject::Subroutine(_), _) => Err("subroutines are not lowered yet".into()),
            (Subject::Matrix(_), _) => Err("this cannot be claimed of a matrix".into()),
        }
    }

    /// Worst over all sample points.
    fn gate(&self, gate: &GateDef) -> Decided {
        let points = sample_points(gate);
        let mut worst: Option<Measured> = None;
        for point in &points {
            let found = self.gate_at(gate, point)?;
            let more = |a: &Measured, b: &Measured| rank(a) > rank(b);
            if worst.as_ref().is_none_or(|worst| more(&found, worst)) {
                worst = Some(found);
            }
        }
        let mut worst = worst.ok_or("there is no point to check")?;
        if !gate.params.is_empty() {
            worst.samples = points;
        }
        Ok(worst)
    }

    fn gate_at(&self, gate: &GateDef, params: &[f64]) -> Decided {
        if let ClaimKind::Dense { matrix, .. } = &self.claim.kind {
            return self.dense(gate, matrix);
        }
        let circuit = self.program.gate_circuit(&gate.name, params)?.circuit;
        match &self.claim.kind {
            ClaimKind::Encodes { matrix, ancilla, scale, .. } => {
                self.encodes(&circuit, matrix, *ancilla, *scale)
            }
            ClaimKind::Equals { of, .. } => self.equals(&circuit, of, params),
            ClaimKind::Clean { operands } => self.clean(&circuit, gate, operands),
            ClaimKind::Budget(bounds) => self.bounds(bounds, &counts(&circuit), Some(gate)),
            ClaimKind::Dense { .. } | ClaimKind::Property(_) => {
                Err("this cannot be claimed of a gate".into())
            }
        }
    }

    /// The matrix of a name, with its entries.
    fn matrix(&self, name: &str) -> Result<(&MatrixDef, &Matrix), Reason> {
        let def = self.program.matrix(name);
        let def = def.ok_or_else(|| Reason(format!("there is no matrix `{name}`")))?;
        let matrix = def.matrix.as_deref();
        let matrix =
            matrix.ok_or_else(|| Reason(format!("the entries of `{name}` are not known")))?;
        Ok((def, matrix))
    }

    /// A stand-in is its matrix by definition; what can be said is whether
    /// that is an operator on its operands.
    fn dense(&self, gate: &GateDef, name: &str) -> Decided {
        let (_, matrix) = self.matrix(name)?;
        if gate.stand_in.is_none() {
            return Err("a gate with a body is no stand-in".into());
        }
        if matrix.qubits() != Some(gate.operands.len()) {
            return Err("the matrix is no operator on the operands of the gate".into());
        }
        let mut measured = Measured::decided(0.0, self.tolerance());
        measured.norm = Some(norm::spectral(matrix)?);
        measured.note = Some("a stand-in is its matrix and has no circuit yet".to_owned());
        Ok(measured)
    }

    /// ‖M − scale·corner‖, the corner being the block of the circuit's
    /// operator whose ancillas are 0 before and after.
    fn encodes(
        &self,
        circuit: &Circuit,
        name: &str,
        ancilla: Option<usize>,
        scale: Option<f64>,
    ) -> Decided {
        let (_, matrix) = self.matrix(name)?;
        let n = matrix.qubits().ok_or("the matrix is no operator on qubits")?;
        let ancillas = ancilla.or_else(|| circuit.wires.checked_sub(n));
        let ancillas = ancillas.filter(|a| a.checked_add(n) == Some(circuit.wires));
        let ancillas = ancillas.ok_or("the gate has another number of operands than claimed")?;
        let columns = encoded_columns(circuit, ancillas, self.budget)?;
        let corner = columns.block(0, 0, matrix.rows(), matrix.cols());
        let scale = scale.or_else(|| best_scale(matrix, &corner));
        let scale = scale.ok_or("the corner is zero, so no scale makes it the matrix")?;
        let difference = matrix - &corner.scaled(C64::new(scale, 0.0));
        let mut measured = Measured::decided(norm::spectral(&difference)?, self.tolerance());
        let size = norm::spectral(matrix)?;
        measured.scale = Some(scale);
        measured.ancillas = Some(ancillas);
        measured.norm = Some(size);
        measured.success = Some(operator::success::success(matrix, scale)?);
        if size > scale * (1.0 + NORM_SLACK) {
            measured.note = Some(format!(
                "the norm of `{name}` is {size:.6}, and no unitary has a corner that reaches it \
                 at scale {scale}"
            ));
        }
        Ok(measured)
    }

    /// The distance from a gate or matrix.
    fn equals(&self, circuit: &Circuit, of: &str, params: &[f64]) -> Decided {
        let other = self.equal_to(of, params)?;
        if other.qubits() != Some(circuit.wires) {
            let reason = format!(
                "`{of}` is an operator on another number of qubits than this, which is on {}",
                circuit.wires
            );
            return Err(Reason(reason));
        }
        let own = evaluate(circuit, self.budget)?;
        let exact = matches!(self.claim.kind, ClaimKind::Equals { exact_phase: true, .. });
        let distance = if exact {
            operator::distance::exact(&own, &other)?
        } else {
            operator::distance::up_to_phase(&own, &other)?
        };
        let mut measured = Measured::decided(distance, self.tolerance());
        if !exact && measured.outcome == Outcome::Holds {
            let phase = operator::distance::exact(&own, &other)?;
            if phase > self.tolerance() {
                let words = format!("equal up to a global phase only; with it {phase:.3e} apart");
                measured.note = Some(words);
            }
        }
        Ok(measured)
    }

    /// The operator of the gate or matrix that a claim names.
    fn equal_to(&self, of: &str, params: &[f64]) -> Result<Matrix, Reason> {
        if self.program.matrix(of).is_some() {
            return Ok(self.matrix(of)?.1.clone());
        }
        let gate = self.program.gate(of);
        let gate = gate.ok_or_else(|| Reason(format!("there is no gate or matrix `{of}`")))?;
        let params = if gate.params.is_empty() { &[] } else { params };
        let circuit = self.program.gate_circuit(of, params)?.circuit;
        Ok(evaluate(&circuit, self.budget)?)
    }

    /// The norm of what leaves |0⟩ on operands that start there.
    fn clean(&self, circuit: &Circuit, gate: &GateDef, operands: &[String]) -> Decided {
        // Only the columns in which they are 0 are looked at.
        let free = circuit.wires.saturating_sub(operands.len());
        self.budget.admit(free)?;
        self.budget.admit_columns(circuit.wires, 1 << free)?;
        let mut bits = Vec::with_capacity(operands.len());
        for name in operands {
            let wire = gate.operands.iter().position(|operand| operand == name);
            let wire = wire.ok_or_else(|| Reason(format!("there is no operand `{name}`")))?;
            bits.push((name, 1_usize << (circuit.wires - 1 - wire)));
        }
        let mask = bits.iter().fold(0, |mask, (_, bit)| mask | bit);
        let starts: Vec<usize> = (0..1 << circuit.wires).filter(|k| k & mask == 0).collect();
        let states = evaluate_columns(circuit, &starts, self.budget)?;
        let leak = |mask: usize| norm::spectral(&rows_where(&states, |row| row & mask != 0));
        let mut measured = Measured::decided(leak(mask)?, self.tolerance());
        if measured.outcome == Outcome::Broken {
            let mut dirty = Vec::new();
            for (name, bit) in &bits {
                let amount = leak(*bit)?;
                if amount > self.tolerance() {
                    dirty.push(format!("`{name}` ({amount:.3e})"));
                }
            }
            measured.note = Some(format!("left dirty: {}", dirty.join(", ")));
        }
        Ok(measured)
    }
}

/// The rows of a matrix for which a condition holds.
fn rows_where(matrix: &Matrix, keep: impl Fn(usize) -> bool) -> Matrix {
    let rows: Vec<usize> = (0..matrix.rows()).filter(|row| keep(*row)).collect();
    Matrix::from_fn(rows.len(), matrix.cols(), |r, c| matrix[(rows[r], c)])
}

/// The positive real scale for which `scale·corner` is nearest to the matrix
/// in Frobenius norm; exact if there is an exact one.
fn best_scale(matrix: &Matrix, corner: &Matrix) -> Option<f64> {
    let product: C64 =
        corner.as_slice().iter().zip(matrix.as_slice()).map(|(c, m)| c.conj() * m).sum();
    let scale = product.re / corner.frobenius().powi(2);
    (scale.is_finite() && scale > 0.0).then_some(scale)
}

/// The order of outcomes from good to bad, then by error.
fn rank(measured: &Measured) -> (u8, f64) {
    let outcome = match measured.outcome {
        Outcome::Holds => 0,
        Outcome::Undecided(_) => 1,
        Outcome::Broken => 2,
    };
    (outcome, measured.error.unwrap_or(0.0))
}

/// The parameter values at which a gate is looked at: the stated ones, and
/// where some are not stated, several generic points.
pub(crate) fn sample_points(gate: &GateDef) -> Vec<Vec<f64>> {
    let stated = |name: &String| {
        gate.samples.iter().find(|(known, _)| known == name).map(|(_, value)| *value)
    };
    let values: Vec<Option<f64>> = gate.params.iter().map(stated).collect();
    let points = if values.iter().all(Option::is_some) { 1 } else { POINTS };
    (0..points)
        .map(|point| {
            let place = |(k, value): (usize, &Option<f64>)| value.unwrap_or(generic(point, k));
            values.iter().enumerate().map(place).collect()
        })
        .collect()
}

/// A value in [0, 2π) without a special place: multiples of the golden ratio
/// modulo one are spread as evenly as can be.
fn generic(point: usize, param: usize) -> f64 {
    const GOLDEN: f64 = 0.618_033_988_749_894_9;
    let turns = GOLDEN * (1 + point + POINTS * param) as f64;
    turns.fract() * TAU
}
