//! What happens to scale, ancillas and error when encodings are combined.
//!
//! An encoding of `A` with scale `α`, `a` ancillas and error `ε` is a circuit
//! `U` with `‖A − α ⟨0|ᵃ U |0⟩ᵃ‖ ≤ ε`. The rules are those of Gilyén, Su, Low
//! and Wiebe 2019.

/// The figures of a block encoding.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Account {
    /// The subnormalisation `α`.
    pub scale: f64,
    /// Number of ancillas.
    pub ancillas: usize,
    /// Bound on `‖A − α · corner‖` in spectral norm.
    pub error: f64,
}

impl Account {
    /// A circuit that is the matrix itself.
    pub const EXACT: Account = Account { scale: 1.0, ancillas: 0, error: 0.0 };

    /// The encoding of `A B`, each part on its own ancillas:
    /// `(αβ, a + b, α ε_B + β ε_A)`, with the product of the errors added,
    /// since `‖A‖` may exceed `α` by `ε_A`.
    pub fn times(self, other: Account) -> Account {
        Account {
            scale: self.scale * other.scale,
            ancillas: self.ancillas + other.ancillas,
            error: self.cross(other),
        }
    }

    /// The encoding of `A ⊗ B`: `(αβ, a + b, α ε_B + β ε_A + ε_A ε_B)`.
    pub fn tensor(self, other: Account) -> Account {
        self.times(other)
    }

    /// The encoding of `A†`, the adjoint circuit: nothing changes.
    pub fn adjoint(self) -> Account {
        self
    }

    /// The encoding of `Σ_j y_j A_j` through an index register of
    /// ⌈log₂ count⌉ wires: `(Σ|y_j| α_j, index + max a_j, Σ|y_j| ε_j + δ)`.
    ///
    /// The parts are selected by the index, so they share their ancillas.
    /// `preparation` bounds the 1-norm distance of the prepared weights
    /// `α c_j d_j*` from `y_j α_j`, where `c` and `d` are the states that the
    /// index enters and leaves with; zero for exact ones.
    pub fn combination(parts: &[(f64, Account)], preparation: f64) -> Account {
        let index = parts.len().next_power_of_two().trailing_zeros() as usize;
        let shared = parts.iter().map(|(_, part)| part.ancillas).max().unwrap_or(0);
        Account {
            scale: parts.iter().map(|(y, part)| y.abs() * part.scale).sum(),
            ancillas: index + shared,
            error: parts.iter().map(|(y, part)| y.abs() * part.error).sum::<f64>() + preparation,
        }
    }

    fn cross(self, other: Account) -> f64 {
        self.scale * other.error + other.scale * self.error + self.error * other.error
    }
}

#[cfg(test)]
mod tests {
    use operator::{C64, Circuit, Control, Gate, Matrix};

    use super::*;
    use crate::testing::{haar, matrix_of};

    /// Rounding of products of matrices of size up to 32.
    const ROUNDING: f64 = 1e-13;

    /// `W diag(c) V†` on one ancilla (wire 0) and one signal wire, with every
    /// rotation off by `wrong`; and the matrix it was meant for.
    fn encoding(seed: u64, wrong: f64) -> (Circuit, Matrix, Account) {
        let cosines = [0.9, 0.2 + 0.1 * seed as f64];
        let (left, right) = (haar(2, seed), haar(2, seed + 50));
        let mut circuit = Circuit::new(2);
        crate::euler::push(&mut circuit, &right.adjoint(), 1);
        let angles = cosines.map(|c: f64| 2.0 * c.acos() + wrong);
        crate::mux::rotation(&mut circuit, crate::mux::Axis::Y, &angles, &[1], 0);
        crate::euler::push(&mut circuit, &left, 1);
        let middle = Matrix::from_diagonal(&cosines.map(|c| C64::from(2.0 * c)));
        let matrix = &(&left * &middle) * &right.adjoint();
        let account = account(&circuit, 1, &matrix, 2.0);
        (circuit, matrix, account)
    }

    /// Figures of a circuit, its error measured.
    fn account(circuit: &Circuit, ancillas: usize, matrix: &Matrix, scale: f64) -> Account {
        let corner = matrix_of(circuit).block(0, 0, matrix.rows(), matrix.cols());
        let error = (matrix - &corner.scaled(C64::from(scale))).frobenius();
        Account { scale, ancillas, error }
    }

    /// The rule's figures are those of the circuit, its error a bound that is
    /// not idle (within a factor of ten) where there is one.
    fn check(rule: Account, circuit: &Circuit, matrix: &Matrix) {
        let measured = account(circuit, rule.ancillas, matrix, rule.scale);
        assert_eq!(circuit.wires, rule.ancillas + matrix.rows().trailing_zeros() as usize);
        // The measured error is a Frobenius norm: up to √N above the spectral.
        let wide = (matrix.rows() as f64).sqrt();
        assert!(measured.error <= wide * rule.error + ROUNDING, "{measured:?} {rule:?}");
        assert!(rule.error <= 10.0 * measured.error + ROUNDING, "{measured:?} {rule:?}");
    }

    #[test]
    fn rules_bound_the_measured_circuits() {
        for wrong in [0.0, 1e-3] {
            let (a, ma, fa) = encoding(1, wrong);
            let (b, mb, fb) = encoding(2, wrong);
            let mut product = Circuit::new(3);
            product.append(&b, &[1, 2]);
            product.append(&a, &[0, 2]);
            check(fa.times(fb), &product, &(&ma * &mb));
            let mut tensor = Circuit::new(4);
            tensor.append(&a, &[0, 2]);
            tensor.append(&b, &[1, 3]);
            check(fa.tensor(fb), &tensor, &ma.kron(&mb));
            check(fa.adjoint(), &a.inverse(), &ma.adjoint());
        }
    }

    #[test]
    fn a_combination_adds_up_scales_and_errors() {
        for wrong in [0.0, 1e-3] {
            let (a, ma, fa) = encoding(1, wrong);
            let (b, mb, fb) = encoding(2, wrong);
            let (ya, yb) = (0.7, 0.4);
            let rule = Account::combination(&[(ya, fa), (yb, fb)], 0.0);
            // Wire 0 is the index, wire 1 the shared ancilla, wire 2 the signal.
            let mut circuit = Circuit::new(3);
            let angle = 2.0 * ((yb * fb.scale / rule.scale).sqrt()).asin();
            circuit.push(Gate::Ry(angle), &[0]);
            for (part, on) in [(&a, false), (&b, true)] {
                for step in &part.steps {
                    let mut step = step.mapped(|wire| wire + 1);
                    step.controls.push(Control { wire: 0, on });
                    circuit.steps.push(step);
                }
            }
            circuit.push(Gate::Ry(-angle), &[0]);
            let sum = &ma.scaled(C64::from(ya)) + &mb.scaled(C64::from(yb));
            check(rule, &controlled_phases_as_gates(&circuit), &sum);
        }
    }

    /// A phase under one control is a `P` on the control.
    fn controlled_phases_as_gates(circuit: &Circuit) -> Circuit {
        let mut out = Circuit::new(circuit.wires);
        for step in &circuit.steps {
            match (&step.gate, &step.controls[..]) {
                (Gate::Phase(angle), [control]) => {
                    let flip = |out: &mut Circuit| {
                        if !control.on {
                            out.push(Gate::X, &[control.wire]);
                        }
                    };
                    flip(&mut out);
                    out.push(Gate::P(*angle), &[control.wire]);
                    flip(&mut out);
                }
                _ => out.steps.push(step.clone()),
            }
        }
        out
    }
}
