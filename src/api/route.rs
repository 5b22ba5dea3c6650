//! What a route is: its address, its documentation, what it takes and gives, and its handler, in one
//! value. The router, the checks on parameters and media types, and the OpenAPI document are drawn
//! from it.

use std::future::Future;
use std::pin::Pin;
use std::sync::Arc;
use std::time::Duration;

use axum::body::{Body, Bytes};
use axum::extract::{FromRequestParts, RawPathParams, Request};
use axum::http::header::{ACCEPT, CONTENT_TYPE, VARY};
use axum::http::request::Parts;
use axum::http::{HeaderValue, Response};
use axum::routing::{MethodRouter, get, post};

use super::body;
use super::negotiate;
use super::problem::Problem;
use super::query::Query;
use super::service::Service;
use crate::diagnostic::Code;

/// JSON.
pub const JSON: &str = "application/json";
/// One JSON value a line.
pub const NDJSON: &str = "application/x-ndjson";
/// A page.
pub const HTML: &str = "text/html";
/// Plain text.
pub const TEXT: &str = "text/plain";
/// Media type of a table.
pub const CSV: &str = "text/csv";

/// What a handler gives.
pub type Outcome = Result<Response<Body>, Problem>;
type Pending = Pin<Box<dyn Future<Output = Outcome> + Send>>;

/// An answer with a value as JSON.
pub fn json_response(value: &impl serde::Serialize) -> Outcome {
    match serde_json::to_vec(value) {
        Ok(bytes) => Ok(Response::new(Body::from(bytes))),
        Err(_) => Err(Problem::new(Code::Internal, "the answer could not be written; the fault is ours")),
    }
}

/// The method of a route; GET answers HEAD as well.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// Reads.
    Get,
    /// Hands over a body.
    Post,
}

impl Method {
    /// The key under which OpenAPI lists it.
    pub const fn key(self) -> &'static str {
        match self {
            Method::Get => "get",
            Method::Post => "post",
        }
    }
}

/// A parameter in the path or the query.
#[derive(Debug)]
pub struct Parameter {
    /// Its name.
    pub name: &'static str,
    /// Whether it stands in the path.
    pub in_path: bool,
    /// Whether the call needs it.
    pub required: bool,
    /// The words it takes; empty if it takes any text.
    pub choices: &'static [&'static str],
    /// The regular expression that its text matches, for the documentation; the handler enforces it.
    pub pattern: Option<&'static str>,
    /// What it does.
    pub description: &'static str,
    /// A value that works.
    pub example: &'static str,
}

/// An optional query parameter that takes any text.
pub const fn optional(name: &'static str, description: &'static str, example: &'static str) -> Parameter {
    Parameter { name, in_path: false, required: false, choices: &[], pattern: None, description, example }
}

/// The body that a route takes.
#[derive(Debug)]
pub struct Takes {
    /// Media types; the first is documented.
    pub media: &'static [&'static str],
    /// The name of its schema among the components.
    pub schema: &'static str,
    /// What it is.
    pub description: &'static str,
    /// Whether the examples of descriptions are examples of it.
    pub examples: bool,
    /// Whether the handler reads it piece by piece.
    pub streamed: bool,
}

/// What a route gives in one media type.
#[derive(Debug)]
pub struct Gives {
    /// The media type.
    pub media: &'static str,
    /// The name of its schema among the components; text where there is none.
    pub schema: Option<&'static str>,
}

/// One route.
#[derive(Debug)]
pub struct Route {
    /// Its method.
    pub method: Method,
    /// Its address; `{name}` is a parameter.
    pub path: &'static str,
    /// The operation's name in generated clients.
    pub id: &'static str,
    /// The group it is documented under; undocumented where there is none.
    pub tag: Option<&'static str>,
    /// What it does, in a few words.
    pub summary: &'static str,
    /// What it does, in a paragraph.
    pub description: &'static str,
    /// Parameters in path and query.
    pub parameters: &'static [Parameter],
    /// Further parameters that follow from a declaration elsewhere, read as text: a sentence on them
    /// where there are such.
    pub further: Option<&'static str>,
    /// The body it takes.
    pub takes: Option<Takes>,
    /// The media types it gives, the preferred first.
    pub gives: &'static [Gives],
    /// What a 200 says, for the documentation.
    pub answer: &'static str,
    /// Statuses from 400 on that it may answer besides those of every route.
    pub refuses: &'static [u16],
    /// The code that runs.
    pub handler: fn(Call) -> Pending,
}

/// The values that most routes share, so that each names only what is its own.
pub const BASE: Route = Route {
    method: Method::Get,
    path: "/",
    id: "",
    tag: None,
    summary: "",
    description: "",
    parameters: &[],
    further: None,
    takes: None,
    gives: &[],
    answer: "",
    refuses: &[],
    handler: |_| Box::pin(async { Err(Problem::new(Code::NotFound, "there is nothing at this address")) }),
};

/// One call on its way to a handler, with parameters and media type already settled.
pub struct Call {
    /// The service.
    pub service: Arc<Service>,
    /// The head of the request.
    pub parts: Parts,
    /// The query.
    pub query: Query,
    /// The media type of the answer.
    pub media: &'static str,
    /// The whole body, where the route takes one that is not streamed.
    pub body: Bytes,
    /// The body of a streamed route.
    pub stream: Option<body::Incoming>,
    path: Vec<(String, String)>,
}

impl Call {
    /// A parameter of the path.
    pub fn path(&self, name: &str) -> &str {
        self.path.iter().find(|(n, _)| n == name).map_or("", |(_, v)| v)
    }

    /// The deadline of a check in this call.
    pub fn deadline(&self) -> Result<Duration, Problem> {
        let limits = &self.service.limits.service;
        self.query.deadline(limits.deadline(), Duration::from_millis(limits.longest_deadline_ms))
    }
}

/// The template of the address that was matched, for the log.
#[derive(Clone, Copy)]
pub struct Template(pub &'static str);

impl Route {
    /// The route as the router takes it.
    pub fn method_router(&'static self, service: &Arc<Service>) -> MethodRouter {
        let service = Arc::clone(service);
        let handler = move |request: Request| {
            let service = Arc::clone(&service);
            async move {
                let outcome = self.run(service, request).await;
                let mut response = outcome.unwrap_or_else(Problem::into_bare_response);
                response.extensions_mut().insert(Template(self.path));
                response
            }
        };
        match self.method {
            Method::Get => get(handler),
            Method::Post => post(handler),
        }
    }

    async fn run(&'static self, service: Arc<Service>, request: Request) -> Outcome {
        let (mut parts, body) = request.into_parts();
        let media = self.choose_media(&parts)?;
        let query = Query::parse(parts.uri.query().unwrap_or(""), self)?;
        let path = match RawPathParams::from_request_parts(&mut parts, &()).await {
            Ok(found) => found.iter().map(|(n, v)| (n.to_owned(), v.to_owned())).collect(),
            Err(_) => return Err(Problem::new(Code::NotFound, "the address is not percent-encoded UTF-8")),
        };
        let mut call = Call { service, parts, query, media, body: Bytes::new(), stream: None, path };
        if let Some(takes) = &self.takes {
            body::check_media_type(&call.parts, takes.media)?;
            if takes.streamed {
                call.stream = Some(body::Incoming::new(&call.parts, body)?);
            } else {
                let limits = &call.service.limits.service;
                let (cap, time) = (limits.body_bytes, limits.body_timeout());
                call.body = body::read(&call.parts, body, cap, time).await?;
            }
        }
        let mut response = (self.handler)(call).await?;
        let headers = response.headers_mut();
        if !self.gives.is_empty() && !headers.contains_key(CONTENT_TYPE) {
            let value = match media {
                HTML => "text/html; charset=utf-8",
                TEXT => "text/plain; charset=utf-8",
                CSV => "text/csv; charset=utf-8; header=present",
                other => other,
            };
            headers.insert(CONTENT_TYPE, HeaderValue::from_static(value));
        }
        if self.gives.len() > 1 {
            headers.insert(VARY, HeaderValue::from_static("accept"));
        }
        Ok(response)
    }

    fn choose_media(&self, parts: &Parts) -> Result<&'static str, Problem> {
        let mut lines = parts.headers.get_all(ACCEPT).iter().map(|v| String::from_utf8_lossy(v.as_bytes()));
        let accept = lines.next().map(|first| lines.fold(first.into_owned(), |all, line| all + "," + &line));
        let offers: Vec<&'static str> = self.gives.iter().map(|g| g.media).collect();
        if offers.is_empty() {
            return Ok("application/octet-stream");
        }
        negotiate::choose(accept.as_deref(), &offers).ok_or_else(|| {
            Problem::new(Code::NotAcceptable, format!("this address gives {}", offers.join(", ")))
        })
    }
}
