//! What a request or a command can fail with, and the numbers outsiders see.

use std::process::ExitCode;

use thiserror::Error as ThisError;
use tower_lsp::jsonrpc;

/// Why an answer cannot be given. The only place that knows the protocol's
/// error codes and the program's exit codes.
#[derive(Debug, Clone, PartialEq, ThisError)]
pub enum Fail {
    /// The client asked to stop the request, or the session is ending.
    #[error("cancelled")]
    Cancelled,
    /// The text moved on while the answer was being worked out.
    #[error("the text has changed since the question was asked")]
    Stale,
    /// The message is not JSON.
    #[error("not a JSON message: {0}")]
    NotJson(String),
    /// The message is JSON but no request the protocol knows at this point.
    #[error("invalid request: {0}")]
    InvalidRequest(String),
    /// Nothing serves this method.
    #[error("unknown method {0}")]
    UnknownMethod(String),
    /// The parameters do not have the shape that the method wants.
    #[error("wrong parameters: {0}")]
    BadParams(String),
    /// `initialize` has not been sent.
    #[error("the session has not been initialised")]
    NotInitialised,
    /// What was asked cannot be done; the text says why, for the user.
    #[error("{0}")]
    Refused(String),
    /// A defect of ours; the details are in the log.
    #[error("internal error; this one request failed, the session goes on")]
    Internal,
}

impl Fail {
    /// The protocol's number for it.
    pub fn code(&self) -> jsonrpc::ErrorCode {
        use jsonrpc::ErrorCode;
        match self {
            Fail::Cancelled => ErrorCode::RequestCancelled,
            Fail::Stale => ErrorCode::ContentModified,
            Fail::NotJson(_) => ErrorCode::ParseError,
            Fail::InvalidRequest(_) => ErrorCode::InvalidRequest,
            Fail::UnknownMethod(_) => ErrorCode::MethodNotFound,
            Fail::BadParams(_) => ErrorCode::InvalidParams,
            Fail::NotInitialised => ErrorCode::ServerError(-32002),
            // 3.17's RequestFailed: the request was understood and refused.
            Fail::Refused(_) => ErrorCode::ServerError(-32803),
            Fail::Internal => ErrorCode::InternalError,
        }
    }

    /// The exit code of a command that ends with it: it could not run.
    pub fn exit_code(&self) -> ExitCode {
        ExitCode::from(2)
    }
}

impl From<&Fail> for jsonrpc::Error {
    fn from(fail: &Fail) -> Self {
        jsonrpc::Error { code: fail.code(), message: fail.to_string().into(), data: None }
    }
}
