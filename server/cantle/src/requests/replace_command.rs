//! `workspace/executeCommand` for `cantle.replace`: writes a circuit in the
//! place of a stand-in and asks the client to apply the edit.

use std::sync::Arc;

use encode::{Candidate, Outcome};
use program::GateDef;
use serde::{Deserialize, Serialize};
use serde_json::Value;
use tower_lsp::lsp_types::notification::ShowMessage;
use tower_lsp::lsp_types::request::{ApplyWorkspaceEdit, ExecuteCommand};
use tower_lsp::lsp_types::{
    ApplyWorkspaceEditParams, ExecuteCommandOptions, ExecuteCommandParams, MessageType,
    ServerCapabilities, ShowMessageParams, Url, WorkspaceEdit,
};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Document, Lane};
use crate::replace;

/// The command's name, also in the client's global table of commands.
pub(crate) const NAME: &str = "cantle.replace";

/// One candidate for one stand-in in one state of a text. Without `version`
/// the newest state is meant, without `method` the preferred candidate.
#[derive(Debug, Clone, Serialize, Deserialize)]
pub(crate) struct Choice {
    pub uri: Url,
    pub gate: String,
    pub version: Option<i32>,
    pub method: Option<String>,
    #[serde(default)]
    pub index: usize,
}

pub(crate) enum ReplaceCommand {}

impl Handler for ReplaceCommand {
    type Lsp = ExecuteCommand;
    const LANE: Lane = Lane::Operators;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.execute_command_provider = Some(ExecuteCommandOptions {
            commands: vec![NAME.to_owned()],
            ..ExecuteCommandOptions::default()
        });
    }

    fn handle(context: &Context, params: ExecuteCommandParams) -> Result<Option<Value>, Fail> {
        if params.command != NAME {
            return Err(Fail::BadParams(format!("there is no command {}", params.command)));
        }
        let argument = params.arguments.into_iter().next();
        let argument = argument.ok_or_else(|| Fail::BadParams(format!("{NAME} needs a choice")))?;
        let choice: Choice =
            serde_json::from_value(argument).map_err(|error| Fail::BadParams(error.to_string()))?;
        if !context.world.client.applies_edits {
            return Err(Fail::Refused("the editor does not let the server apply edits".into()));
        }
        let document = context.document(&choice.uri)?;
        let edit = edit(context, &document, &choice)?;
        apply(context, format!("Replace `{}`", choice.gate), edit);
        Ok(None)
    }
}

/// Asks the client to apply an edit. The answer to the command does not wait
/// for it: a client may apply the edit only after that answer.
fn apply(context: &Context, label: String, edit: WorkspaceEdit) {
    let session = context.session.clone();
    tokio::runtime::Handle::current().spawn(async move {
        let params = ApplyWorkspaceEditParams { label: Some(label), edit };
        let complaint = match session.outbox.request::<ApplyWorkspaceEdit>(params).await {
            Ok(answer) if answer.applied => return,
            Ok(answer) => answer.failure_reason.unwrap_or_else(|| "no reason given".into()),
            Err(fail) => fail.to_string(),
        };
        let message = format!("The edit was not applied: {complaint}");
        session
            .outbox
            .notify::<ShowMessage>(ShowMessageParams { typ: MessageType::ERROR, message });
    });
}

impl Choice {
    /// The candidate at `index` of the list made for `document`.
    pub(crate) fn new(
        document: &Document,
        gate: &GateDef,
        candidate: &Candidate,
        index: usize,
    ) -> Self {
        Choice {
            uri: document.uri.clone(),
            gate: gate.name.clone(),
            version: Some(document.version),
            method: Some(candidate.method.to_owned()),
            index,
        }
    }
}

/// The candidates for a stand-in; kept, since editors ask at every movement
/// of the cursor.
pub(crate) fn candidates(
    context: &Context,
    document: &Document,
    gate: &str,
) -> Result<Arc<Outcome>, Fail> {
    let (matrix, tolerance) = replace::target(document.program(), gate)?;
    let prefer = context.world.settings.prefer;
    let key = (matrix, tolerance, prefer, context.budget.max_wires);
    context.session.outcomes.get_or_make(key, |(matrix, tolerance, prefer, _)| {
        replace::candidates(matrix, *tolerance, None, *prefer, &context.budget)
    })
}

/// The edit for a choice, its text read back and measured.
pub(crate) fn edit(
    context: &Context,
    document: &Document,
    choice: &Choice,
) -> Result<WorkspaceEdit, Fail> {
    if choice.version.is_some_and(|version| version != document.version) {
        return Err(Fail::Stale);
    }
    let found = candidates(context, document, &choice.gate)?;
    let candidate = found.candidates.get(choice.index).cloned();
    let candidate = candidate
        .filter(|candidate| choice.method.as_ref().is_none_or(|method| method == candidate.method))
        .ok_or_else(|| Fail::Refused(format!("no such candidate for `{}`", choice.gate)))?;
    let program = document.program();
    let plan = replace::write(program, &choice.gate, candidate, document.files(), &context.budget)?;
    Ok(convert::workspace_edit(document, &plan.edits, &context.world.client))
}
