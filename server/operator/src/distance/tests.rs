//! Distances that are known, and a search by brute force.

use std::f64::consts::{PI, TAU};

use super::*;
use crate::norm::nearest_unitary;

/// Rounding of eigenphases.
const CLOSE: f64 = 1e-13;

fn diagonal(angles: &[f64]) -> Matrix {
    Matrix::from_diagonal(&angles.iter().map(|a| C64::cis(*a)).collect::<Vec<_>>())
}

fn random(n: usize, seed: u64) -> Matrix {
    let mut source = fastrand::Rng::with_seed(seed);
    Matrix::from_fn(n, n, |_, _| C64::new(source.f64() - 0.5, source.f64() - 0.5))
}

/// The least over many phases, from above.
fn by_grid(a: &Matrix, b: &Matrix, points: usize) -> f64 {
    let phases = (0..points).map(|k| TAU * k as f64 / points as f64);
    phases.fold(f64::INFINITY, |least, phase| {
        least.min(exact(a, &b.scaled(C64::cis(phase))).unwrap())
    })
}

#[test]
fn a_global_phase_counts_only_if_asked() {
    let (a, b) = (diagonal(&[0.3, 1.1]), diagonal(&[0.8, 1.6]));
    assert!(up_to_phase(&a, &b).unwrap() < CLOSE);
    let expected = 2.0 * (0.25_f64).sin();
    assert!((exact(&a, &b).unwrap() - expected).abs() < CLOSE);
}

#[test]
fn the_shortest_arc_decides() {
    let table: [(&[f64], f64); 7] = [
        (&[0.0; 4], 0.0),
        (&[0.0, 0.0, 0.0, 1e-9], 1e-9),
        (&[0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 1.5], 1.5),
        (&[3.0, -3.0], TAU - 6.0),
        (&[0.0, 2.0, 4.0], 4.0),
        (&[0.0, PI], PI),
        (&[0.0, 0.5 * PI, PI, 1.5 * PI], 1.5 * PI),
    ];
    for (angles, arc) in table {
        for turn in [0.0, 2.0, -3.1] {
            let (one, other) = (Matrix::identity(angles.len()), diagonal(angles));
            let found = up_to_phase(&one, &other.scaled(C64::cis(turn))).unwrap();
            assert!((found - 2.0 * (0.25 * arc).sin()).abs() < CLOSE, "{angles:?}: {found}");
        }
    }
}

/// Eight eigenphases of which one lies apart: the phase of the trace is not
/// the best one.
#[test]
fn the_best_phase_is_not_that_of_the_trace() {
    let other = diagonal(&[0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 1.5]);
    let trace = other.trace();
    let turned = other.scaled(trace.conj() / trace.norm());
    let at_trace = exact(&Matrix::identity(8), &turned).unwrap();
    let best = up_to_phase(&Matrix::identity(8), &other).unwrap();
    assert!(best + 0.1 < at_trace, "{best} {at_trace}");
}

#[test]
fn random_unitaries_agree_with_a_grid() {
    for (n, seed) in [(2, 1), (3, 2), (4, 3), (8, 4)] {
        let unitary = |seed| nearest_unitary(&random(n, seed)).unwrap();
        let (a, b) = (unitary(seed), unitary(seed + 100));
        let (found, above) = (up_to_phase(&a, &b).unwrap(), by_grid(&a, &b, 2000));
        // The norm changes by at most ‖B‖ a radian, half a step is 1.6e-3.
        assert!(found <= above + CLOSE && above - found < 1.6e-3, "{found} {above}");
    }
}

#[test]
fn matrices_that_are_not_unitary_agree_with_a_grid() {
    for (n, seed) in [(1, 1), (2, 2), (3, 3), (4, 4), (8, 5)] {
        for scale in [1.0, 1e-3, 1e150, 1e-150] {
            let (a, b) = (random(n, seed), random(n, seed + 100).scaled(C64::new(0.7, 0.0)));
            let [a, b] = [a, b].map(|m| m.scaled(C64::new(scale, 0.0)));
            let (found, above) = (up_to_phase(&a, &b).unwrap(), by_grid(&a, &b, 2000));
            let step = 1.6e-3 * spectral(&b).unwrap();
            assert!(found <= above * (1.0 + CLOSE) && above - found < step, "{found} {above}");
        }
    }
}

#[test]
fn nasty_pairs_have_their_distance() {
    let m = random(4, 9);
    let norm = spectral(&m).unwrap();
    let nothing = Matrix::zeros(4, 4);
    let turned = m.scaled(C64::cis(2.2));
    let twice = m.scaled(C64::new(0.0, 2.0));
    let mut noisy = turned.clone();
    noisy[(1, 2)] += 1e-10;
    // Here no phase matters: the norm is √10 at each.
    let left = Matrix::from_real(2, 2, &[3.0, 0.0, 0.0, 0.0]);
    let right = Matrix::from_real(2, 2, &[0.0, 1.0, 0.0, 0.0]);
    let table = [
        (&m, &turned, 0.0, 2e-12),
        (&m, &twice, norm, 2e-12),
        (&m, &nothing, norm, 2e-12),
        (&nothing, &nothing, 0.0, 0.0),
        (&m, &noisy, 0.9e-10, 0.11e-10),
        (&left, &right, 10.0_f64.sqrt(), 1e-13),
    ];
    for (a, b, distance, allowed) in table {
        for (a, b) in [(a, b), (b, a)] {
            let found = up_to_phase(a, b).unwrap();
            assert!((found - distance).abs() <= allowed, "{found} for {distance}");
        }
    }
    assert!(matches!(
        up_to_phase(&m, &nothing.scaled(C64::new(f64::NAN, 0.0))),
        Err(Error::NotFinite { .. })
    ));
}
