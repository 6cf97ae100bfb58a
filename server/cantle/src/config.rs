//! The settings of a session, as the editor gives them.

use std::path::PathBuf;

use encode::Prefer;
use operator::Budget;
use serde_json::Value;

/// What a user can set, in the editor's section `cantle` or in the
/// initialization options.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Settings {
    /// `maxQubits`: most qubits of a dense operator.
    pub max_qubits: usize,
    /// `prefer`: what comes first among candidates (`cx`, `scale`,
    /// `ancilla` or `depth`).
    pub prefer: Prefer,
    /// `includePath`: directories searched for includes.
    pub include_path: Vec<PathBuf>,
    /// `inlayHints`: whether portraits are shown beside gates.
    pub inlay_hints: bool,
}

impl Default for Settings {
    fn default() -> Self {
        Settings {
            max_qubits: Budget::default().max_wires,
            prefer: Prefer::default(),
            include_path: Vec::new(),
            inlay_hints: true,
        }
    }
}

impl Settings {
    /// Reads settings, bare or under `cantle`. What is missing or has the
    /// wrong shape keeps its default: a typing error in one setting must not
    /// cost the user the others.
    pub(crate) fn read(value: &Value) -> Self {
        let value = value.get("cantle").unwrap_or(value);
        let default = Settings::default();
        let size = value["maxQubits"].as_u64().and_then(|n| usize::try_from(n).ok());
        let paths = value["includePath"].as_array().map(|list| {
            list.iter().filter_map(Value::as_str).map(PathBuf::from).collect::<Vec<_>>()
        });
        Settings {
            max_qubits: size.unwrap_or(default.max_qubits),
            prefer: value["prefer"].as_str().and_then(prefer).unwrap_or(default.prefer),
            include_path: paths.unwrap_or(default.include_path),
            inlay_hints: value["inlayHints"].as_bool().unwrap_or(default.inlay_hints),
        }
    }

    /// A fresh budget within these settings.
    pub(crate) fn budget(&self) -> Budget {
        let mut budget = Budget::default();
        budget.max_wires = self.max_qubits;
        budget
    }
}

/// The preference of this name.
pub(crate) fn prefer(name: &str) -> Option<Prefer> {
    match name {
        "cx" => Some(Prefer::Cx),
        "scale" => Some(Prefer::Scale),
        "ancilla" => Some(Prefer::Ancilla),
        "depth" => Some(Prefer::Depth),
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use serde_json::json;

    use super::*;

    #[test]
    fn what_is_wrong_keeps_its_default() {
        let read = Settings::read(&json!({ "cantle": { "maxQubits": 9, "prefer": "speed" } }));
        assert_eq!(read, Settings { max_qubits: 9, ..Settings::default() });
        let read = Settings::read(&json!({ "prefer": "depth", "includePath": ["a", 3] }));
        let include_path = vec![PathBuf::from("a")];
        let expected = Settings { prefer: Prefer::Depth, include_path, ..Settings::default() };
        assert_eq!(read, expected);
        for nothing in [json!(null), json!([1]), json!({ "maxQubits": -3, "inlayHints": "x" })] {
            assert_eq!(Settings::read(&nothing), Settings::default());
        }
    }
}
