//! Any text is analysed, lowered and edited without a panic.

use operator::Budget;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

use super::with_library;
use crate::{TextRange, TextSize, apply_edits};

/// Pieces that statements are made of, whole ones among them.
const PIECES: [&str; 44] = [
    "qubit[3] q;\n",
    "qubit r;\n",
    "gate g a, b { cx a, b; }\n",
    "g q[0], q[1];\n",
    "x q;\n",
    "ctrl @ x q[0], q[2];\n",
    "let a = q[0:1] ++ r;\n",
    "x a[1];\n",
    "for int i in [0:2] ",
    "{ ",
    "}\n",
    "if (i == 1) ",
    "x q[i];\n",
    "bit[2] c;\n",
    "c = measure q[0:1];\n",
    "reset r;\n",
    "int n = 3;\n",
    "n += 2 * n ** 2;\n",
    "const float f = 2.5 / 0;\n",
    "rx(f) r;\n",
    "pow(",
    ") @ ",
    "inv @ ",
    "negctrl @ ",
    "gphase(pi) ",
    ";\n",
    "\n@cantle.dense m within 1e-3\n",
    "\n@cantle.clean a\n",
    "gate s a {}\n",
    "s r;\n",
    "array[float, 2, 2] m = {{1, 0}, {0, 1}};\n",
    "array[complex, 2, 3] w = {{1, 2im}, {}};\n",
    "def d(qubit z) { x z; }\n",
    "d(r);\n",
    "box ",
    "while (true) ",
    "switch (n) { case 1 { x r; } }\n",
    "break;\n",
    "(",
    "[",
    "\"01\"",
    "𝛉",
    "- ",
    "end;\n",
];

proptest! {
    #![proptest_config(ProptestConfig { cases: 256, rng_seed: RngSeed::Fixed(3), ..ProptestConfig::default() })]

    #[test]
    fn any_text_is_survived(picks in prop::collection::vec(0..PIECES.len(), 0..40)) {
        let text: String = picks.iter().map(|pick| PIECES[*pick]).collect();
        let program = with_library(&text);
        let own = program.files()[0].text.clone();
        let whole = TextRange::up_to(TextSize::of(&*own));
        for finding in program.findings() {
            prop_assert!(whole.contains_range(finding.range), "{finding:?}");
            prop_assert!(own.is_char_boundary(finding.range.start().into()), "{finding:?}");
            for fix in &finding.fixes {
                let _edited = apply_edits(&own, &fix.edits);
            }
        }
        for reference in program.references() {
            prop_assert!(whole.contains_range(reference.range));
        }
        for claim in program.claims() {
            let _measured = program.measure(claim, &Budget::default());
        }
        let lowered = program.program_circuit();
        if let Ok(lowered) = lowered {
            prop_assert_eq!(lowered.origins.len(), lowered.circuit.steps.len());
            for step in &lowered.circuit.steps {
                let mut wires: Vec<usize> = step.targets.clone();
                wires.extend(step.controls.iter().map(|control| control.wire));
                let count = wires.len();
                wires.sort_unstable();
                wires.dedup();
                prop_assert_eq!(wires.len(), count);
                prop_assert!(wires.iter().all(|wire| *wire < lowered.circuit.wires));
            }
        }
    }
}
