//! Requests that exist in tests only: one that panics, one that works until
//! it is stopped, one that shows the text the server holds.

use serde::{Deserialize, Serialize};
use tower_lsp::lsp_types::request::Request;
use tower_lsp::lsp_types::{ServerCapabilities, Url};

use crate::error::Fail;
use crate::lsp::{ClientProfile, Context, Lane};
use crate::requests::Handler;

/// Names a text.
#[derive(Debug, Serialize, Deserialize)]
pub(crate) struct Which {
    uri: Option<Url>,
}

/// A text as it is held.
#[derive(Debug, Serialize, Deserialize)]
pub(crate) struct Held {
    text: String,
    version: i32,
}

macro_rules! probe {
    ($name:ident, $method:literal, $lane:expr, $result:ty, $handle:expr) => {
        #[doc = $method]
        pub(crate) enum $name {}

        impl Request for $name {
            type Params = Which;
            type Result = $result;
            const METHOD: &'static str = $method;
        }

        impl Handler for $name {
            type Lsp = $name;
            const LANE: Lane = $lane;

            fn advertise(_: &mut ServerCapabilities, _: &ClientProfile) {}

            fn handle(context: &Context, params: Which) -> Result<$result, Fail> {
                let handle: fn(&Context, Which) -> Result<$result, Fail> = $handle;
                handle(context, params)
            }
        }
    };
}

probe!(Panic, "cantle/test/panic", Lane::Operators, (), |_, _| panic!("on purpose"));

probe!(Toil, "cantle/test/toil", Lane::Operators, (), |context, params| {
    if let Some(uri) = params.uri {
        context.document(&uri)?;
    }
    while !context.budget.is_stopped() {
        std::thread::yield_now();
    }
    Err(Fail::Stale)
});

probe!(Text, "cantle/test/text", Lane::Names, Held, |context, params| {
    let uri = params.uri.ok_or_else(|| Fail::BadParams("no uri".into()))?;
    let document = context.document(&uri)?;
    Ok(Held { text: document.text.to_string(), version: document.version })
});
