//! `textDocument/inlayHint`: beside each gate, what it is.

use program::queries;
use tower_lsp::lsp_types::request::InlayHintRequest;
use tower_lsp::lsp_types::{InlayHint, InlayHintLabel, InlayHintParams, OneOf, ServerCapabilities};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum InlayHints {}

impl Handler for InlayHints {
    type Lsp = InlayHintRequest;
    const LANE: Lane = Lane::Operators;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.inlay_hint_provider = Some(OneOf::Left(true));
    }

    fn handle(context: &Context, params: InlayHintParams) -> Result<Option<Vec<InlayHint>>, Fail> {
        let document = context.document(&params.text_document.uri)?;
        if !context.world.settings.inlay_hints {
            return Ok(None);
        }
        let encoding = context.world.client.encoding;
        let range = convert::text_range(&document.text, params.range, encoding);
        let hints = queries::hints(document.program(), range, &context.budget);
        // Half-done hints of a text that has moved on would stand in wrong places.
        if context.budget.is_stopped() {
            return Ok(None);
        }
        let hint = |hint: queries::Hint| InlayHint {
            position: convert::position(&document.text, hint.offset.into(), encoding),
            label: InlayHintLabel::String(hint.label),
            kind: None,
            text_edits: None,
            tooltip: None,
            padding_left: Some(true),
            padding_right: Some(true),
            data: None,
        };
        Ok(Some(hints.into_iter().map(hint).collect()))
    }
}
