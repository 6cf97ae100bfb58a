//! `textDocument/references`: where a name is used.

use program::queries;
use tower_lsp::lsp_types::request::References as Lsp;
use tower_lsp::lsp_types::{Location, OneOf, ReferenceParams, ServerCapabilities};

use super::Handler;
use crate::convert;
use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};

pub(crate) enum References {}

impl Handler for References {
    type Lsp = Lsp;
    const LANE: Lane = Lane::Names;

    fn advertise(capabilities: &mut ServerCapabilities, _: &ClientProfile) {
        capabilities.references_provider = Some(OneOf::Left(true));
    }

    fn handle(context: &Context, params: ReferenceParams) -> Result<Option<Vec<Location>>, Fail> {
        let (document, offset) = context.place(&params.text_document_position)?;
        let with_declaration = params.context.include_declaration;
        let places = queries::references(document.program(), offset, with_declaration);
        let locations = places.into_iter().filter_map(|place| {
            convert::location(&document, place.file, place.range, &context.world.client)
        });
        Ok(Some(locations.collect()))
    }
}
