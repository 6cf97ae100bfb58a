//! Whole analyses: what is found in a text, and what is not.

mod findings;
mod lowering;
mod measuring;
mod raising;
mod strange;
mod values;

use std::collections::BTreeMap;
use std::sync::Arc;

use crate::{FileProblem, Files, Limits, Program};

/// Files of a test, by path; an include names a path.
#[derive(Default)]
pub(crate) struct Texts(pub(crate) BTreeMap<&'static str, &'static str>);

impl Files for Texts {
    fn read(&self, _from: &str, include: &str) -> Result<(String, Arc<str>), FileProblem> {
        match self.0.get(include) {
            Some(text) => Ok((include.to_owned(), Arc::from(*text))),
            None => Err(FileProblem::NotFound { looked_in: vec!["here".to_owned()] }),
        }
    }
}

/// Analyses a text on its own.
pub(crate) fn analyse(text: &str) -> Program {
    Program::analyse("main.qasm", Arc::from(text), &Texts::default(), &Limits::default())
}

/// Analyses a text behind a version line and the standard library.
pub(crate) fn with_library(text: &str) -> Program {
    analyse(&format!("OPENQASM 3.0;\ninclude \"stdgates.inc\";\n{text}"))
}

/// Every finding as `code: the text it is about`.
pub(crate) fn found(program: &Program) -> Vec<String> {
    let text = |finding: &crate::Finding| {
        let text = &program.files()[finding.file.index()].text;
        text[usize::from(finding.range.start())..usize::from(finding.range.end())].to_owned()
    };
    program.findings().iter().map(|f| format!("{}: {}", f.code, text(f))).collect()
}

#[test]
fn a_program_can_be_shared_between_threads() {
    fn shared<T: Send + Sync>() {}
    shared::<Program>();
}
