//! A small store of results that are dear to work out.

use std::sync::{Arc, Mutex};

use super::locked;
use crate::error::Fail;

/// Results kept: a person works on a few matrices at a time.
const KEPT: usize = 16;

/// The latest results by key, the most recently used last.
#[derive(Debug)]
pub(crate) struct Memo<K, V>(Mutex<Vec<(K, Arc<V>)>>);

impl<K, V> Default for Memo<K, V> {
    fn default() -> Self {
        Memo(Mutex::default())
    }
}

impl<K: PartialEq, V> Memo<K, V> {
    /// The result for a key, made if it is not there. Failures are not kept:
    /// what was stopped once may be finished the next time.
    pub(crate) fn get_or_make(
        &self,
        key: K,
        make: impl FnOnce(&K) -> Result<V, Fail>,
    ) -> Result<Arc<V>, Fail> {
        {
            let mut kept = locked(&self.0);
            if let Some(at) = kept.iter().position(|(known, _)| *known == key) {
                let entry = kept.remove(at);
                let value = entry.1.clone();
                kept.push(entry);
                return Ok(value);
            }
        }
        let value = Arc::new(make(&key)?);
        let mut kept = locked(&self.0);
        if kept.len() >= KEPT {
            kept.remove(0);
        }
        kept.push((key, value.clone()));
        Ok(value)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn makes_each_result_once_and_keeps_the_latest() {
        let memo = Memo::default();
        let mut made = Vec::new();
        let mut get = |key: usize| {
            let value = memo.get_or_make(key, |&key| {
                made.push(key);
                Ok(key * key)
            });
            assert_eq!(*value.expect("made"), key * key);
        };
        [1, 2, 1].into_iter().for_each(&mut get);
        (100..100 + KEPT - 1).for_each(&mut get);
        // 2 was used longest ago.
        [1, 2].into_iter().for_each(&mut get);
        assert_eq!(made.iter().filter(|&&key| key == 1).count(), 1);
        assert_eq!(made.iter().filter(|&&key| key == 2).count(), 2);
        assert!(memo.get_or_make(7, |_| Err::<usize, _>(Fail::Stale)).is_err());
        assert!(memo.get_or_make(7, |_| Ok(49)).is_ok());
    }
}
