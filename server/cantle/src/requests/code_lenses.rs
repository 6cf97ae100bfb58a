//! `textDocument/codeLens`: above each stand-in, the command that replaces it.

use program::queries;
use tower_lsp::lsp_types::request::CodeLensRequest;
use tower_lsp::lsp_types::{
    CodeLens, CodeLensOptions, CodeLensParams, Command, ServerCapabilities,
};

use super::Handler;
use super::replace_command::{self, Choice};
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum CodeLenses {}

impl Handler for CodeLenses {
    type Lsp = CodeLensRequest;
    const LANE: Lane = Lane::Names;

    fn advertise(capabilities: &mut ServerCapabilities, client: &ClientProfile) {
        // The lens is a command that ends in an edit by the server.
        if client.applies_edits {
            capabilities.code_lens_provider =
                Some(CodeLensOptions { resolve_provider: Some(false) });
        }
    }

    fn handle(context: &Context, params: CodeLensParams) -> Result<Option<Vec<CodeLens>>, Fail> {
        let document = context.document(&params.text_document.uri)?;
        let encoding = context.world.client.encoding;
        let mut lenses = Vec::new();
        for gate in queries::stand_ins(document.program()) {
            let choice = Choice {
                uri: document.uri.clone(),
                gate: gate.name.clone(),
                version: None,
                method: None,
                index: 0,
            };
            let argument = serde_json::to_value(choice).map_err(|_| Fail::Internal)?;
            let title = format!("Replace `{}` by the first candidate", gate.name);
            let command =
                Command::new(title, replace_command::NAME.to_owned(), Some(vec![argument]));
            let range = convert::range(&document.text, gate.name_range, encoding);
            lenses.push(CodeLens { range, command: Some(command), data: None });
        }
        Ok(Some(lenses))
    }
}
