//! `textDocument/definition`: where a name is declared.

use program::queries;
use tower_lsp::lsp_types::request::GotoDefinition;
use tower_lsp::lsp_types::{
    GotoDefinitionParams, GotoDefinitionResponse, OneOf, ServerCapabilities,
};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum Definition {}

impl Handler for Definition {
    type Lsp = GotoDefinition;
    const LANE: Lane = Lane::Names;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.definition_provider = Some(OneOf::Left(true));
    }

    fn handle(
        context: &Context,
        params: GotoDefinitionParams,
    ) -> Result<Option<GotoDefinitionResponse>, Fail> {
        let (document, offset) = context.place(&params.text_document_position_params)?;
        let place = queries::definition(document.program(), offset);
        let location = place.and_then(|place| {
            convert::location(&document, place.file, place.range, &context.world.client)
        });
        Ok(location.map(GotoDefinitionResponse::Scalar))
    }
}
