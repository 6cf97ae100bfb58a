//! What is read, what is refused, and which edit mends it.

use grammar::{TextRange, TextSize};

use super::read;
use crate::finding::{FileId, apply_edits};

/// Reads a whole annotation line; `Err` is the message and the mended line.
fn check(line: &str) -> Result<String, (String, Option<String>)> {
    let name_end = line.find(' ').unwrap_or(line.len());
    let content = line[name_end..].trim_start();
    let size = |at: usize| TextSize::from(at as u32);
    let range = TextRange::new(size(0), size(name_end));
    let start = size(line.len() - content.len());
    match read(FileId::MAIN, &line[1..name_end], range, content, start) {
        None => Ok("not ours".to_owned()),
        Some(Ok(annotation)) => Ok(format!("{annotation:?}")),
        Some(Err(finding)) => {
            assert!(usize::from(finding.range.end()) <= line.len());
            let mended = finding.fixes.first().map(|fix| apply_edits(line, &fix.edits));
            Err((finding.message, mended))
        }
    }
}

#[test]
fn well_formed_lines_are_read() {
    for line in [
        "@cantle.dense M within 1e-8",
        "@cantle.dense M",
        "@cantle.encodes M ancilla 3 scale 4.0 within 1e-8",
        "@cantle.encodes M within 1e-8 scale 4",
        "@cantle.equals G exactphase within 1e-9",
        "@cantle.clean a, b",
        "@cantle.budget cx 400, depth 900, ancilla 4, error 1e-6, success 0.2",
        "@cantle.matrix unitary, real",
        "@cantle.matrix from \"bench.mtx\"",
        "@cantle.matrix pauli 0.5*XXI + 0.5*IYY - ZZZ",
        "@cantle.matrix bands -1: -1.0, 0: 2.0, 1: -1.0 (periodic)",
        "@cantle.matrix bands -1: -1.0, 0: 2.0, 1: -1.0 periodic",
        "@cantle.sample theta = -3*pi/4, phi = 0.5   ",
        "@cantle.allow stand-in-not-replaced, claim-undecided",
        "@other.dense whatever ; you like",
    ] {
        assert!(check(line).is_ok(), "{line}: {:?}", check(line));
    }
}

#[test]
fn malformed_lines_are_explained_and_mended() {
    for (line, words, mended) in [
        ("@cantle.dens M", "is no claim", Some("@cantle.dense M")),
        ("@cantle", "is no claim", None),
        ("@cantle.dense", "name of a matrix is missing", None),
        ("@cantle.dense M 1e-8", "what this number is", Some("@cantle.dense M within 1e-8")),
        ("@cantle.dense M withn 1e-8", "no field", Some("@cantle.dense M within 1e-8")),
        ("@cantle.dense M within", "tolerance is missing", None),
        ("@cantle.dense M within -1", "above zero", None),
        ("@cantle.dense M within 1e-8 within 2", "twice", None),
        ("@cantle.encodes M ancillas 2", "no field", Some("@cantle.encodes M ancilla 2")),
        ("@cantle.encodes M ancilla 1.5", "must be 0, 1, 2", None),
        ("@cantle.encodes M scale 0", "above zero", None),
        ("@cantle.clean a b", "not part", None),
        ("@cantle.matrix unitry", "no property", Some("@cantle.matrix unitary")),
        ("@cantle.matrix pauli 0.5*XA", "only I, X, Y and Z", None),
        ("@cantle.matrix pauli XX + X", "one length", None),
        ("@cantle.matrix bands 0: 1, 0: 2", "twice", None),
        ("@cantle.matrix from bench.mtx", "in quotes", None),
        ("@cantle.sample theta 0.3", "`=` is missing", Some("@cantle.sample theta = 0.3")),
        ("@cantle.budget", "bound is missing", None),
        ("@cantle.allow", "name of a lint is missing", None),
    ] {
        let (message, fixed) = check(line).expect_err(line);
        assert!(message.contains(words), "{line}: {message}");
        assert_eq!(fixed.as_deref(), mended, "{line}");
        if let Some(mended) = mended {
            assert!(check(mended).is_ok(), "{mended}");
        }
    }
}
