//! How late each wire leaves a piece of a circuit, by when each came in.
//!
//! A wire leaves at the largest of (arrival of an input + longest chain of
//! gates from it). These longest chains make a matrix, and pieces one after
//! another multiply in the algebra of maximum and sum, so that a definition
//! is timed once however often it is called, and exactly.

/// Longest chains of gates from each input, by output wire; `None` where no
/// chain leads.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Delay(Vec<Vec<Option<usize>>>);

impl Delay {
    /// Wires that all come in at time 0, with nothing done yet.
    pub(super) fn start(wires: usize) -> Self {
        Delay(vec![vec![Some(0)]; wires])
    }

    /// Wires with no gate on them.
    pub(super) fn none(wires: usize) -> Self {
        let lag = |out: usize, into: usize| (out == into).then_some(0);
        Delay((0..wires).map(|out| (0..wires).map(|into| lag(out, into)).collect()).collect())
    }

    /// One gate on all of these wires.
    pub(super) fn joint(wires: usize) -> Self {
        Delay(vec![vec![Some(1); wires]; wires])
    }

    /// This, then a piece on some of the wires.
    pub(super) fn then(&mut self, piece: &Delay, wires: &[usize]) {
        let before: Vec<Vec<Option<usize>>> = wires.iter().map(|&w| self.0[w].clone()).collect();
        for (lags, &wire) in piece.0.iter().zip(wires) {
            let row = &mut self.0[wire];
            row.iter_mut().for_each(|time| *time = None);
            for (lag, times) in lags.iter().zip(&before) {
                let Some(lag) = lag else { continue };
                for (time, came) in row.iter_mut().zip(times) {
                    *time = (*time).max(came.map(|came| came.saturating_add(*lag)));
                }
            }
        }
    }

    /// The piece many times over, by squaring.
    pub(super) fn repeated(self, times: u64) -> Self {
        let wires: Vec<usize> = (0..self.0.len()).collect();
        let (mut power, mut square, mut left) = (Delay::none(wires.len()), self, times);
        while left > 0 {
            if left & 1 == 1 {
                power.then(&square, &wires);
            }
            left >>= 1;
            if left > 0 {
                let half = square.clone();
                square.then(&half, &wires);
            }
        }
        power
    }

    /// The piece run backwards.
    pub(super) fn reversed(&self) -> Self {
        let wires = 0..self.0.len();
        Delay(
            wires
                .clone()
                .map(|out| wires.clone().map(|into| self.0[into][out]).collect())
                .collect(),
        )
    }

    /// When the last wire leaves.
    pub(super) fn longest(&self) -> usize {
        self.0.iter().flatten().flatten().copied().max().unwrap_or(0)
    }
}
