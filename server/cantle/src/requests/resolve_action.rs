//! `codeAction/resolve`: the edit of a chosen replacement.

use tower_lsp::lsp_types::request::CodeActionResolveRequest;
use tower_lsp::lsp_types::{CodeAction, ServerCapabilities};

use super::Handler;
use super::replace_command::{self, Choice};
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum ResolveAction {}

impl Handler for ResolveAction {
    type Lsp = CodeActionResolveRequest;
    const LANE: Lane = Lane::Operators;

    /// Announced with the code actions themselves.
    fn advertise(_: &mut ServerCapabilities, _: &ClientProfile) {}

    fn handle(context: &Context, mut action: CodeAction) -> Result<CodeAction, Fail> {
        // Some clients resolve every action without an edit: those that are
        // complete go back as they came.
        let Some(data) = action.data.take().filter(|_| action.edit.is_none()) else {
            return Ok(action);
        };
        let choice: Choice =
            serde_json::from_value(data).map_err(|error| Fail::BadParams(error.to_string()))?;
        let document = context.document(&choice.uri)?;
        action.edit = Some(replace_command::edit(context, &document, &choice)?);
        Ok(action)
    }
}
