//! The limits that keep every analysis bounded in time and memory.

/// Bounds on what an analysis takes on. Each is named in the message of the
/// `limit-reached` finding that it causes, and can be raised by a setting.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Limits {
    /// Most bytes of one file.
    pub file_bytes: usize,
    /// Most files of one analysis, includes counted.
    pub files: usize,
    /// Deepest nesting of includes, blocks, expressions and gate calls.
    pub depth: usize,
    /// Most qubits of a program or operands of a gate.
    pub qubits: usize,
    /// Most statements executed while loops are unrolled, in one block.
    pub steps: usize,
    /// Most distinct (gate, parameter values) pairs kept as definitions.
    pub definitions: usize,
    /// Most controls on one call.
    pub controls: usize,
    /// Most qubits of a matrix: its size is a power of two up to this one.
    pub matrix_qubits: usize,
    /// Most ancilla qubits that a replacement may declare.
    pub ancillas: usize,
    /// Most findings of one analysis; further ones are dropped.
    pub findings: usize,
}

impl Default for Limits {
    fn default() -> Self {
        Limits {
            // Ten times the largest hand-kept circuit file we know how to read in a blink.
            file_bytes: 16 << 20,
            files: 256,
            // Well inside a thread's stack, well past what a person nests.
            depth: 128,
            // Enough for any circuit that is checked by column, small enough to list.
            qubits: 1 << 16,
            // About a tenth of a second of unrolling.
            steps: 200_000,
            definitions: 20_000,
            controls: 64,
            // A dense matrix of 12 qubits takes 256 MiB, as in `operator`.
            matrix_qubits: 12,
            ancillas: 4096,
            findings: 2000,
        }
    }
}
