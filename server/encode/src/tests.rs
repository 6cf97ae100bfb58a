//! Every method on every kind of matrix, and counts against the literature.

use operator::{Budget, C64, Circuit, Gate, Matrix, encoded_columns, norm};

use crate::testing::{cx_count, dft, gap, haar, matrix_of, permutation};
use crate::{Candidate, Error, METHODS, Options, Prefer, Target, candidates, synthesise};

/// Error allowed to a synthesised unitary: rounding of a few thousand
/// products of matrices of size up to 32.
const EXACT: f64 = 1e-12;

fn check_synthesis(unitary: &Matrix, most: usize, name: &str) {
    let circuit = synthesise(unitary, &Budget::default()).unwrap();
    let error = gap(&matrix_of(&circuit), unitary);
    assert!(error < EXACT, "{name}: {error:e}");
    assert!(cx_count(&circuit) <= most, "{name}: {} CX", cx_count(&circuit));
}

/// Shende, Bullock, Markov 2006, table 1 with both savings:
/// 23/48·4ⁿ − 3/2·2ⁿ + 4/3.
#[test]
fn haar_unitaries_cost_what_is_published() {
    for (n, cx) in [(0, 0), (1, 0), (2, 3), (3, 20), (4, 100), (5, 444)] {
        for seed in 0..if n < 5 { 5 } else { 1 } {
            check_synthesis(&haar(1 << n, 17 * n as u64 + seed), cx, &format!("{n} qubits"));
        }
    }
}

#[test]
fn structure_is_found_first() {
    let controlled = |u: &Matrix| {
        let mut m = Matrix::identity(2 * u.rows());
        m.set_block(u.rows(), u.rows(), u);
        m
    };
    let phases = |n: usize| {
        Matrix::from_diagonal(&(0..n).map(|k| C64::cis((k * k) as f64 * 0.37)).collect::<Vec<_>>())
    };
    let local = haar(2, 1).kron(&haar(2, 2)).kron(&haar(2, 3)).kron(&haar(2, 4));
    let swap = permutation(4, |c| [0, 2, 1, 3][c]);
    let table: Vec<(&str, Matrix, usize)> = vec![
        ("identity", Matrix::identity(16), 0),
        ("a phase", Matrix::identity(8).scaled(C64::cis(0.3)), 0),
        ("local gates", local, 0),
        ("a pair on outer wires", permutation(16, |c| c ^ ((c & 1) << 3)), 1),
        ("two pairs", haar(4, 5).kron(&haar(4, 6)), 6),
        ("diagonal", phases(16), 14),
        ("Toffoli", permutation(8, |c| if c >= 6 { 13 - c } else { c }), 6),
        ("Fredkin", controlled(&swap), 14),
        ("doubly controlled gate", controlled(&controlled(&haar(2, 7))), 6),
        ("controlled pair", controlled(&haar(4, 8)), 9),
        ("selected gates", multiplexed(4, 9), 9),
        ("X on a selecting wire", &permutation(8, |c| c ^ 4) * &controlled(&haar(4, 8)), 9),
        ("bit reversal", permutation(8, |c| c.reverse_bits() >> 61), 3),
    ];
    for (name, unitary, most) in &table {
        check_synthesis(unitary, *most, name);
    }
}

fn multiplexed(gates: usize, seed: u64) -> Matrix {
    let mut m = Matrix::zeros(2 * gates, 2 * gates);
    (0..gates).for_each(|k| m.set_block(2 * k, 2 * k, &haar(2, seed + k as u64)));
    m
}

/// Any 2ⁿ matrices a method may be handed.
fn zoo(n: usize) -> Vec<(String, Matrix)> {
    let size = 1 << n;
    let haar_of = |seed| haar(size, seed + 1000 * n as u64);
    let real = |f: &dyn Fn(usize, usize) -> f64| {
        Matrix::from_fn(size, size, |r, c| C64::new(f(r, c), 0.0))
    };
    let graded = |sigma: &dyn Fn(usize) -> f64| {
        let s: Vec<C64> = (0..size).map(|k| C64::new(sigma(k), 0.0)).collect();
        &(&haar_of(1) * &Matrix::from_diagonal(&s)) * &haar_of(2)
    };
    let general = graded(&|k| 2.0 - k as f64 / size as f64);
    let list: Vec<(&str, Matrix)> = vec![
        ("identity", Matrix::identity(size)),
        ("zero", Matrix::zeros(size, size)),
        ("Haar", haar_of(3)),
        ("seven times Haar", haar_of(4).scaled(C64::new(7.0, 0.0))),
        ("increment", permutation(size, |c| (c + 1) % size)),
        ("reversal", permutation(size, |c| size - 1 - c)),
        ("DFT", dft(size)),
        ("diagonal", Matrix::from_diagonal(general.column(0))),
        ("real diagonal", real(&|r, c| if r == c { r as f64 - 1.0 } else { 0.0 })),
        ("general", general.clone()),
        ("repeated singular values", graded(&|k| if 2 * k < size { 1.0 } else { 0.5 })),
        ("nearly singular", graded(&|k| 10.0_f64.powi(-(3 * k as i32)))),
        ("rank one", graded(&|k| if k == 0 { 3.0 } else { 0.0 })),
        ("Jordan block", real(&|r, c| if r == c || r + 1 == c { 1.0 } else { 0.0 })),
        ("nilpotent", real(&|r, c| if r + 1 == c { 1.0 } else { 0.0 })),
        ("Hilbert", real(&|r, c| 1.0 / (r + c + 1) as f64)),
        ("Hermitian", &general + &general.adjoint()),
        ("Laplacian", real(&|r, c| [2.0, -1.0].get(r.abs_diff(c)).copied().unwrap_or(0.0))),
        ("ones", real(&|_, _| 1.0)),
        ("one entry", real(&|r, c| if r == 0 && c + 1 == size { -2.0 } else { 0.0 })),
        ("tiny", general.scaled(C64::new(1e-200, 0.0))),
        ("huge", general.scaled(C64::new(1e200, 0.0))),
    ];
    list.into_iter().map(|(name, m)| (format!("{name}, {n} qubits"), m)).collect()
}

/// A tolerance that suits a matrix: relative to its norm.
fn options(m: &Matrix) -> Options {
    Options { tolerance: 1e-11 * m.max_abs().max(f64::MIN_POSITIVE), ..Options::default() }
}

/// Largest number of qubits on which a method meets the whole zoo: the search
/// for a tensor rank takes seconds a matrix where no short sum exists.
fn most_qubits(method: &str) -> usize {
    if method == "kronecker-sum" { 3 } else { 4 }
}

#[test]
fn every_method_gives_the_matrix_back() {
    let budget = Budget::default();
    for n in 1..=4 {
        for (name, m) in zoo(n) {
            let mut found = 0;
            for method in METHODS.iter().map(|m| m.name()).filter(|m| n <= most_qubits(m)) {
                let options = Options { method: Some(method.into()), ..options(&m) };
                let outcome = candidates(&m, &options, &budget).unwrap();
                found += outcome.candidates.len();
                for candidate in &outcome.candidates {
                    check_candidate(candidate, &m, options.tolerance, &name);
                }
            }
            assert!(found > 0, "{name}");
        }
    }
}

/// Most wires of a circuit that is also multiplied out by the test's own
/// means, gate after gate.
const MULTIPLIED_OUT: usize = 6;

fn check_candidate(candidate: &Candidate, m: &Matrix, tolerance: f64, name: &str) {
    let columns = encoded_columns(&candidate.circuit, candidate.ancillas, &Budget::default());
    let columns = columns.unwrap();
    let corner = columns.block(0, 0, m.rows(), m.cols());
    let difference = &corner.scaled(C64::new(candidate.scale, 0.0)) - m;
    let method = candidate.method;
    assert!(difference.max_abs() <= tolerance, "{name}, {method}: {:e}", difference.max_abs());
    assert!(candidate.error <= tolerance, "{name}, {method}: {:e}", candidate.error);
    assert_eq!(candidate.circuit.wires, candidate.ancillas + m.rows().trailing_zeros() as usize);
    assert!(gap(&(&columns.adjoint() * &columns), &Matrix::identity(m.cols())) < EXACT);
    if candidate.circuit.wires <= MULTIPLIED_OUT {
        let whole = matrix_of(&candidate.circuit);
        assert!(gap(&whole.block(0, 0, columns.rows(), m.cols()), &columns) < EXACT);
    }
    for step in &candidate.circuit.steps {
        let plain = step.controls.is_empty() && step.targets.len() <= 1;
        let cx = step.controls.len() == 1 && matches!(step.gate, Gate::X);
        assert!(plain || cx, "{name}, {method}: {step:?}");
    }
}

/// Twice a unitary and the rotation, 2 U(n) + 2ⁿ − 2, with U(n) of Shende,
/// Bullock, Markov 2006. Scale: the spectral norm, the least there is.
#[test]
fn dilations_cost_two_unitaries_and_a_rotation() {
    for (n, cx) in [(1, 1), (2, 8), (3, 46), (4, 214), (5, 918)] {
        let m = zoo(n).into_iter().find(|(name, _)| name.starts_with("general")).unwrap().1;
        let found = only("dilation", &m);
        assert!(found.counts.cx.unwrap() <= cx, "{n} qubits: {:?}", found.counts.cx);
        let norm = norm::spectral(&m).unwrap();
        assert!((found.scale / norm - 1.0).abs() < 1e-13);
        assert_eq!(found.ancillas, 1);
    }
}

fn only(method: &str, m: &Matrix) -> Candidate {
    let options = Options { method: Some(method.into()), ..options(m) };
    let mut outcome = candidates(m, &options, &Budget::default()).unwrap();
    assert_eq!(outcome.candidates.len(), 1, "{:?}", outcome.refused);
    outcome.candidates.remove(0)
}

#[test]
fn unitaries_take_no_ancilla_and_keep_their_scale() {
    for n in 1..=3 {
        for scale in [1.0, 7.0, 1e-3] {
            let m = haar(1 << n, 8).scaled(C64::new(scale, 0.0));
            let outcome = candidates(&m, &options(&m), &Budget::default()).unwrap();
            let [found] = &outcome.candidates[..] else { panic!("{:?}", outcome.candidates) };
            assert_eq!(found.ancillas, 0);
            assert!((found.scale / scale - 1.0).abs() < 1e-13);
            assert!(scale != 1.0 || found.scale == 1.0);
        }
    }
}

/// Random circuits of all one-qubit gates, CX and phases.
fn random_circuit(wires: usize, steps: usize, seed: u64) -> Circuit {
    let mut random = fastrand::Rng::with_seed(seed);
    let mut circuit = Circuit::new(wires);
    for _ in 0..steps {
        let (wire, angle) = (random.usize(0..wires), 6.0 * random.f64() - 3.0);
        let gate = match random.usize(0..18) {
            0 => Gate::X,
            1 => Gate::H,
            2 => Gate::T,
            3 => Gate::Sx,
            4 => Gate::Rx(angle),
            5 => Gate::Rz(angle),
            6 => Gate::U(angle, 0.3, -angle),
            7 => Gate::Inverse(Box::new(Gate::Sx)),
            8 => {
                circuit.push(Gate::Phase(angle), &[]);
                continue;
            }
            _ => {
                circuit.cx(wire, (wire + 1 + random.usize(0..wires - 1)) % wires);
                continue;
            }
        };
        circuit.push(gate, &[wire]);
    }
    circuit
}

#[test]
fn rewriting_keeps_the_operator_and_adds_nothing() {
    for seed in 0..60 {
        let circuit = random_circuit(2 + seed as usize % 3, 40, seed);
        let after = crate::passes::simplified(&circuit, &Budget::default()).unwrap();
        assert!(gap(&matrix_of(&after), &matrix_of(&circuit)) < EXACT, "seed {seed}");
        assert!(cx_count(&after) <= cx_count(&circuit), "seed {seed}");
        let [before, now] = [&circuit, &after].map(operator::counts::counts);
        assert!(now.one_qubit <= before.one_qubit && now.depth <= before.depth, "seed {seed}");
    }
}

#[test]
fn a_circuit_and_its_mirror_cancel() {
    for seed in 0..20 {
        let half = random_circuit(3, 30, seed);
        let mut whole = half.clone();
        whole.append(&half.inverse(), &[0, 1, 2]);
        let after = crate::passes::simplified(&whole, &Budget::default()).unwrap();
        assert_eq!(after.steps.len(), 0, "seed {seed}: {:?}", after.steps);
    }
}

#[test]
fn the_same_matrix_gives_the_same_gates() {
    let budget = Budget::default();
    for (name, m) in zoo(2) {
        let [a, b] = [0, 1].map(|_| candidates(&m, &options(&m), &budget).unwrap());
        assert_eq!(format!("{a:?}"), format!("{b:?}"), "{name}");
    }
}

#[test]
fn every_method_stops_when_told() {
    let budget = Budget::default();
    budget.stop();
    let stopped = Error::Operator(operator::Error::Stopped);
    for n in 1..=3 {
        for (_, m) in zoo(n) {
            assert_eq!(candidates(&m, &options(&m), &budget).unwrap_err(), stopped);
            let running = Budget::default();
            let target = Target::new(&m, 1e-8, &running).unwrap();
            for method in METHODS.iter().filter(|method| method.fits(&target).is_ok()) {
                let ended = method.encode(&target, &Options::default(), &budget);
                assert_eq!(ended.unwrap_err(), stopped, "{}", method.name());
            }
        }
    }
}

#[test]
fn what_does_not_fit_is_refused_with_the_reason() {
    let mut budget = Budget::default();
    budget.max_wires = 3;
    let ask = |m: &Matrix, options: &Options| candidates(m, options, &budget);
    let shape = ask(&Matrix::identity(3), &Options::default()).unwrap_err();
    assert_eq!(shape, Error::NotQubits { rows: 3, cols: 3 });
    let large = ask(&Matrix::identity(16), &Options::default()).unwrap_err();
    assert_eq!(large, Error::Operator(operator::Error::TooLarge { wires: 4, limit: 3 }));
    let mut nan = Matrix::identity(4);
    nan[(1, 2)] = C64::new(f64::NAN, 0.0);
    let finite = ask(&nan, &Options::default()).unwrap_err();
    assert_eq!(finite, Error::Operator(operator::Error::NotFinite { row: 1, col: 2 }));
    let named = Options { method: Some("magic".into()), ..Options::default() };
    assert!(matches!(ask(&Matrix::identity(4), &named), Err(Error::UnknownMethod { .. })));
    let strict = Options { tolerance: 1e-30, ..Options::default() };
    let missed = ask(&haar(4, 1), &strict).unwrap();
    assert!(missed.candidates.is_empty());
    assert!(missed.refused.iter().any(|(_, reason)| reason.contains("misses the matrix")));
    // One wire short of what the ancilla needs.
    let full = ask(&Matrix::from_real(8, 8, &[0.5; 64]), &Options::default()).unwrap();
    assert!(full.refused.iter().any(|(_, reason)| reason.contains("limit of 3")));
}

#[test]
fn the_preference_decides_the_order() {
    let m = zoo(3).into_iter().find(|(name, _)| name.starts_with("real diagonal")).unwrap().1;
    for prefer in [Prefer::Cx, Prefer::Scale, Prefer::Ancilla, Prefer::Depth] {
        let outcome =
            candidates(&m, &Options { prefer, ..options(&m) }, &Budget::default()).unwrap();
        let key = |c: &Candidate| match prefer {
            Prefer::Cx => c.counts.cx.unwrap() as f64,
            Prefer::Scale => c.scale,
            Prefer::Ancilla => c.ancillas as f64,
            Prefer::Depth => c.counts.depth as f64,
        };
        assert!(outcome.candidates.is_sorted_by(|a, b| key(a) <= key(b)));
    }
}
