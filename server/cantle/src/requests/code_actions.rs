//! `textDocument/codeAction`: quick fixes, and circuits for stand-ins.
//!
//! The candidates for a stand-in are listed with their measured numbers. The
//! edit of one is worked out when it is chosen: by `codeAction/resolve` where
//! the client resolves edits, by a command where it lets us apply edits, and
//! at once for a client that can do neither.

use encode::Candidate;
use program::queries::{self, counted, error, number};
use program::{FileId, Finding, GateDef, TextRange};
use tower_lsp::lsp_types::request::CodeActionRequest;
use tower_lsp::lsp_types::{
    CodeAction, CodeActionKind, CodeActionOptions, CodeActionOrCommand, CodeActionParams,
    CodeActionProviderCapability, Command, ServerCapabilities,
};

use super::Handler;
use super::replace_command::{self, Choice};
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Document, Lane};

pub(crate) enum CodeActions {}

impl Handler for CodeActions {
    type Lsp = CodeActionRequest;
    const LANE: Lane = Lane::Operators;

    fn advertise(capabilities: &mut ServerCapabilities, client: &ClientProfile) {
        let options = CodeActionOptions {
            code_action_kinds: Some(vec![
                CodeActionKind::QUICKFIX,
                CodeActionKind::REFACTOR_REWRITE,
            ]),
            resolve_provider: Some(client.resolves_edits),
            ..CodeActionOptions::default()
        };
        capabilities.code_action_provider = Some(CodeActionProviderCapability::Options(options));
    }

    fn handle(
        context: &Context,
        params: CodeActionParams,
    ) -> Result<Option<Vec<CodeActionOrCommand>>, Fail> {
        let document = context.document(&params.text_document.uri)?;
        let client = &context.world.client;
        let selection = convert::text_range(&document.text, params.range, client.encoding);
        let wanted = |kind: &CodeActionKind| match &params.context.only {
            None => true,
            Some(only) if only.is_empty() => true,
            Some(only) => only.iter().any(|asked| includes(asked.as_str(), kind.as_str())),
        };
        let mut actions = Vec::new();
        if wanted(&CodeActionKind::QUICKFIX) {
            actions.extend(quick_fixes(&document, selection, client));
        }
        if wanted(&CodeActionKind::REFACTOR_REWRITE)
            && let Some(gate) = queries::stand_in_at(document.program(), selection)
        {
            actions.extend(replacements(context, &document, gate)?);
        }
        Ok(Some(actions.into_iter().map(CodeActionOrCommand::CodeAction).collect()))
    }
}

/// Whether a kind asked for covers a kind: kinds are dotted paths.
fn includes(asked: &str, kind: &str) -> bool {
    let rest = kind.strip_prefix(asked);
    rest.is_some_and(|rest| asked.is_empty() || rest.is_empty() || rest.starts_with('.'))
}

/// The fixes of the findings that the selection touches.
fn quick_fixes(
    document: &Document,
    selection: TextRange,
    client: &ClientProfile,
) -> Vec<CodeAction> {
    let here = |finding: &&Finding| {
        finding.file == FileId::MAIN && finding.range.intersect(selection).is_some()
    };
    let fixes = document.findings().filter(here).flat_map(|finding| {
        let diagnostic = convert::diagnostic(document, finding, client);
        let best = finding.fixes.len() == 1;
        finding.fixes.iter().map(move |fix| CodeAction {
            title: fix.title.clone(),
            kind: Some(CodeActionKind::QUICKFIX),
            diagnostics: diagnostic.clone().map(|(_, diagnostic)| vec![diagnostic]),
            edit: Some(convert::workspace_edit(document, &fix.edits, client)),
            is_preferred: Some(best),
            ..CodeAction::default()
        })
    });
    fixes.collect()
}

/// One action for each candidate.
fn replacements(
    context: &Context,
    document: &Document,
    gate: &GateDef,
) -> Result<Vec<CodeAction>, Fail> {
    let found = match replace_command::candidates(context, document, &gate.name) {
        Ok(found) => found,
        // Diagnostics say what is wrong with the matrix.
        Err(Fail::Refused(why)) => {
            tracing::info!("no replacement for `{}`: {why}", gate.name);
            return Ok(Vec::new());
        }
        Err(fail) => return Err(fail),
    };
    let client = &context.world.client;
    let mut actions = Vec::new();
    for (index, candidate) in found.candidates.iter().enumerate() {
        let choice = Choice::new(document, gate, candidate, index);
        let mut action = CodeAction {
            title: title(gate, candidate),
            kind: Some(CodeActionKind::REFACTOR_REWRITE),
            ..CodeAction::default()
        };
        let value = serde_json::to_value(&choice).map_err(|_| Fail::Internal)?;
        if client.resolves_edits {
            action.data = Some(value);
        } else if client.applies_edits {
            let command = replace_command::NAME.to_owned();
            action.command = Some(Command::new(action.title.clone(), command, Some(vec![value])));
        } else {
            match replace_command::edit(context, document, &choice) {
                Ok(edit) => action.edit = Some(edit),
                Err(Fail::Refused(_)) => continue,
                Err(fail) => return Err(fail),
            }
        }
        actions.push(action);
    }
    Ok(actions)
}

fn title(gate: &GateDef, candidate: &Candidate) -> String {
    let cx = candidate.counts.cx.map_or("CX not known".to_owned(), |cx| format!("{cx} CX"));
    format!(
        "Replace `{}` by {}: error {}, scale {}, {}, {cx}",
        gate.name,
        candidate.method,
        error(candidate.error),
        number(candidate.scale),
        counted(candidate.ancillas, "ancilla"),
    )
}

#[cfg(test)]
mod tests {
    use super::includes;

    #[test]
    fn kinds_are_paths() {
        assert!(includes("", "quickfix") && includes("refactor", "refactor.rewrite"));
        assert!(includes("refactor.rewrite", "refactor.rewrite"));
        assert!(!includes("refactor.rew", "refactor.rewrite"));
        assert!(!includes("refactor.rewrite.x", "refactor.rewrite"));
    }
}
