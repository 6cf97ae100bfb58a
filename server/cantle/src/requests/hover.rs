//! `textDocument/hover`: what stands at a place, and what it does.

use program::queries;
use tower_lsp::lsp_types::request::HoverRequest;
use tower_lsp::lsp_types::{
    Hover as Answer, HoverParams, HoverProviderCapability, ServerCapabilities,
};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum Hover {}

impl Handler for Hover {
    type Lsp = HoverRequest;
    const LANE: Lane = Lane::Operators;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.hover_provider = Some(HoverProviderCapability::Simple(true));
    }

    fn handle(context: &Context, params: HoverParams) -> Result<Option<Answer>, Fail> {
        let (document, offset) = context.place(&params.text_document_position_params)?;
        let found = queries::hover(document.program(), offset, &context.budget);
        // A text that has moved on is no error of the user's: nothing to show.
        let found = found.filter(|_| !context.budget.is_stopped());
        let client = &context.world.client;
        Ok(found.map(|hover| Answer {
            contents: convert::hover_contents(&hover.blocks, client),
            range: Some(convert::range(&document.text, hover.range, client.encoding)),
        }))
    }
}
