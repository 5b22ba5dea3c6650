//! Errors on the wire: RFC 9457 problem details, and the one table from code to status.

use std::borrow::Cow;

use axum::body::{Body, Bytes};
use axum::http::header::{CONTENT_LENGTH, CONTENT_TYPE, RETRY_AFTER};
use axum::http::{HeaderValue, Response, StatusCode};
use serde::Serialize;
use utoipa::ToSchema;

use crate::diagnostic::{Code, Diagnostic};

/// The media type of every answer from 400 on.
pub const MEDIA_TYPE: &str = "application/problem+json";

/// Seconds after which an overloaded service may be asked again.
const RETRY_AFTER_SECONDS: u32 = 1;

/// The status that a code is answered with. What is not named here is a fault in the description.
pub const fn status(code: Code) -> StatusCode {
    match code {
        Code::NotJson | Code::BadParameter => StatusCode::BAD_REQUEST,
        Code::NotFound => StatusCode::NOT_FOUND,
        Code::MethodNotAllowed => StatusCode::METHOD_NOT_ALLOWED,
        Code::NotAcceptable => StatusCode::NOT_ACCEPTABLE,
        Code::RequestTimeout => StatusCode::REQUEST_TIMEOUT,
        Code::BodyTooLarge => StatusCode::PAYLOAD_TOO_LARGE,
        Code::UnsupportedMediaType => StatusCode::UNSUPPORTED_MEDIA_TYPE,
        Code::Internal => StatusCode::INTERNAL_SERVER_ERROR,
        Code::Overloaded | Code::DeadlineExceeded => StatusCode::SERVICE_UNAVAILABLE,
        _ => StatusCode::UNPROCESSABLE_ENTITY,
    }
}

/// The code that describes a bare status, for answers that some layer made without one.
const fn code_of(status: StatusCode) -> Code {
    match status {
        StatusCode::NOT_FOUND => Code::NotFound,
        StatusCode::METHOD_NOT_ALLOWED => Code::MethodNotAllowed,
        StatusCode::NOT_ACCEPTABLE => Code::NotAcceptable,
        StatusCode::REQUEST_TIMEOUT => Code::RequestTimeout,
        StatusCode::PAYLOAD_TOO_LARGE
        | StatusCode::URI_TOO_LONG
        | StatusCode::REQUEST_HEADER_FIELDS_TOO_LARGE => Code::LimitExceeded,
        StatusCode::UNSUPPORTED_MEDIA_TYPE => Code::UnsupportedMediaType,
        StatusCode::SERVICE_UNAVAILABLE => Code::Overloaded,
        StatusCode::INTERNAL_SERVER_ERROR => Code::Internal,
        _ => Code::BadParameter,
    }
}

/// One fault in the body or the query.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct ProblemFault {
    /// RFC 6901 JSON Pointer to the place; empty for the whole document. For a call that takes its
    /// input from the query, a parameter `a.b` is `/a/b`.
    pub pointer: String,
    /// What kind of fault; listed by `GET /v1/codes`.
    #[schema(value_type = String)]
    pub code: &'static str,
    /// What is wrong, in one sentence.
    pub detail: String,
    /// How to put it right, where that is known.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = String, required = false, nullable = false)]
    pub hint: Option<Cow<'static, str>>,
}

/// Problem details as in RFC 9457.
#[derive(Clone, Debug, Serialize, ToSchema)]
pub struct Problem {
    /// Relative URI that names the kind of problem; its fragment is the code of the first fault.
    #[serde(rename = "type")]
    #[schema(value_type = String)]
    pub kind: Box<str>,
    /// The kind of problem in a few words.
    #[schema(value_type = String)]
    pub title: &'static str,
    /// The status code of the answer.
    #[schema(minimum = 400, maximum = 599)]
    pub status: u16,
    /// What went wrong this time.
    #[schema(value_type = String)]
    pub detail: Box<str>,
    /// The answer's `x-request-id`, also found in the log.
    #[serde(skip_serializing_if = "str::is_empty")]
    #[schema(value_type = String, required = false)]
    pub request_id: Box<str>,
    /// Every fault that was found; empty where the fault is not in what was sent.
    pub errors: Vec<ProblemFault>,
}

impl Problem {
    /// A problem of one kind.
    pub fn new(code: Code, detail: impl Into<Box<str>>) -> Problem {
        Problem::with_status(status(code), code, detail)
    }

    fn with_status(status: StatusCode, code: Code, detail: impl Into<Box<str>>) -> Problem {
        let meaning = code.meaning();
        Problem {
            kind: format!("/v1/codes#{code}").into(),
            title: meaning.strip_suffix('.').unwrap_or(meaning),
            status: status.as_u16(),
            detail: detail.into(),
            request_id: Box::default(),
            errors: Vec::new(),
        }
    }

    /// A problem for an answer of which only the status is known.
    pub fn from_status(status: StatusCode) -> Problem {
        let reason = status.canonical_reason().unwrap_or("The call failed");
        let mut problem = Problem::with_status(status, code_of(status), format!("{reason}."));
        if code_of(status) == Code::BadParameter {
            problem.kind = "about:blank".into();
            problem.title = reason;
        }
        problem
    }

    /// The faults found in a description; the status follows the first.
    pub fn rejected(faults: Vec<Diagnostic>) -> Problem {
        let Some(first) = faults.first() else {
            return Problem::new(Code::Internal, "A description was refused without a reason.");
        };
        let detail = match faults.len() {
            1 => first.message.clone(),
            n => format!("{n} faults; each is located under errors. The first: {}", first.message),
        };
        let mut problem = Problem::new(first.code, detail);
        problem.errors = faults
            .into_iter()
            .map(|d| ProblemFault {
                pointer: d.pointer,
                code: d.code.text(),
                detail: d.message,
                hint: d.hint,
            })
            .collect();
        problem
    }

    /// A query parameter that cannot be read.
    pub fn parameter(name: &str, detail: impl Into<String>, hint: Option<Cow<'static, str>>) -> Problem {
        let mut pointer = String::new();
        for token in name.split('.') {
            crate::diagnostic::push_token(&mut pointer, token);
        }
        let mut fault = Diagnostic::new(Code::BadParameter, pointer, detail);
        fault.hint = hint;
        Problem::rejected(vec![fault])
    }

    /// The status code of the answer.
    pub fn status(&self) -> StatusCode {
        StatusCode::from_u16(self.status).unwrap_or(StatusCode::INTERNAL_SERVER_ERROR)
    }

    /// The problem as JSON.
    pub fn to_json(&self) -> Vec<u8> {
        serde_json::to_vec(self).unwrap_or_default()
    }

    /// The same without an id, for places that do not know it; the outermost layer adds it.
    pub fn into_bare_response(self) -> Response<Body> {
        let mut response = Response::new(Body::empty());
        *response.status_mut() = self.status();
        response.extensions_mut().insert(self);
        response
    }

    /// The answer that carries this problem; `with_body` is false for HEAD.
    pub fn into_response(mut self, request_id: &str, with_body: bool) -> Response<Body> {
        self.request_id = request_id.into();
        let bytes = self.to_json();
        let length = bytes.len();
        let mut response =
            Response::new(if with_body { Body::from(Bytes::from(bytes)) } else { Body::empty() });
        *response.status_mut() = self.status();
        let headers = response.headers_mut();
        headers.insert(CONTENT_TYPE, HeaderValue::from_static(MEDIA_TYPE));
        headers.insert(CONTENT_LENGTH, HeaderValue::from(length));
        if self.status() == StatusCode::SERVICE_UNAVAILABLE {
            headers.insert(RETRY_AFTER, HeaderValue::from(RETRY_AFTER_SECONDS));
        }
        response
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn several_faults_are_counted_and_each_keeps_its_place() {
        let problem = Problem::rejected(vec![
            Diagnostic::new(Code::UnknownUnit, "/flows/a/pressure", "no unit \"bra\"").hint("bar?"),
            Diagnostic::new(Code::MissingField, "/flows/b", "fluid is missing"),
        ]);
        assert_eq!(problem.status, 422);
        assert_eq!(&*problem.kind, "/v1/codes#unknown-unit");
        assert!(problem.detail.starts_with("2 faults"));
        assert_eq!(problem.errors[1].pointer, "/flows/b");
        assert_eq!(problem.errors[0].hint.as_deref(), Some("bar?"));
    }

    #[test]
    fn a_status_without_a_code_stays_generic() {
        let problem = Problem::from_status(StatusCode::EXPECTATION_FAILED);
        assert_eq!((problem.status, &*problem.kind), (417, "about:blank"));
        assert_eq!(&*Problem::from_status(StatusCode::URI_TOO_LONG).kind, "/v1/codes#limit-exceeded");
    }
}
