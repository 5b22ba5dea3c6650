//! Pages for people: a landing page that shows a first call, and the interactive documentation.
//! Neither loads anything from elsewhere.

use std::fmt::Write;
use std::sync::{Arc, OnceLock};

use axum::body::Body;
use axum::http::header::{
    CACHE_CONTROL, CONTENT_ENCODING, CONTENT_SECURITY_POLICY, CONTENT_TYPE, HOST, LOCATION,
};
use axum::http::{HeaderMap, HeaderValue, Response, StatusCode};
use utoipa_swagger_ui::Config;

use super::examples::EXAMPLES;
use super::problem::Problem;
use super::route::{BASE, Call, Gives, HTML, Method, Outcome, Parameter, Route};
use super::routes::ROUTES;
use crate::diagnostic::Code;

/// The landing page has no script and one style sheet.
const LANDING_POLICY: &str =
    "default-src 'none'; style-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";
/// The documentation runs its own scripts, styles its own elements, and calls this service.
const DOCS_POLICY: &str = "default-src 'none'; script-src 'self'; style-src 'self' 'unsafe-inline'; \
    img-src 'self' data:; connect-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

/// `GET /`.
pub const LANDING: Route = Route {
    path: "/",
    gives: &[Gives { media: HTML, schema: None }],
    handler: |call| Box::pin(landing(call)),
    ..BASE
};

/// `GET /style.css`.
pub const STYLE: Route = Route {
    path: "/style.css",
    gives: &[Gives { media: "text/css", schema: None }],
    handler: |_| Box::pin(async { Ok(Response::new(Body::from(include_str!("style.css")))) }),
    ..BASE
};

/// `GET /docs`.
pub const DOCS: Route = Route { path: "/docs", handler: |_| Box::pin(redirect()), ..BASE };

/// `GET /docs/`.
pub const DOCS_SLASH: Route = Route { path: "/docs/", handler: |call| Box::pin(docs(call)), ..BASE };

/// `GET /docs/{file}`.
pub const DOCS_FILE: Route = Route {
    path: "/docs/{file}",
    parameters: &[Parameter {
        name: "file",
        in_path: true,
        required: true,
        choices: &[],
        pattern: None,
        description: "A file of the documentation.",
        example: "index.html",
    }],
    handler: |call| Box::pin(docs(call)),
    ..BASE
};

/// The address that the landing page is written with.
const ADDRESS: &str = "127.0.0.1:8298";

/// The host that a call names, if it is one that can stand in a page and on a command line.
fn host(headers: &HeaderMap) -> Option<&str> {
    let plain = |c: char| c.is_ascii_alphanumeric() || matches!(c, '.' | ':' | '-' | '[' | ']');
    let host = headers.get(HOST)?.to_str().ok()?;
    (!host.is_empty() && host.len() < 256 && host.chars().all(plain)).then_some(host)
}

async fn landing(call: Call) -> Outcome {
    static PAGE: OnceLock<String> = OnceLock::new();
    let page = PAGE.get_or_init(landing_page);
    let page = page.replace(ADDRESS, host(&call.parts.headers).unwrap_or(ADDRESS));
    let mut response = Response::new(Body::from(page));
    response.headers_mut().insert(CONTENT_SECURITY_POLICY, HeaderValue::from_static(LANDING_POLICY));
    Ok(response)
}

async fn redirect() -> Outcome {
    let mut response = Response::new(Body::empty());
    *response.status_mut() = StatusCode::PERMANENT_REDIRECT;
    response.headers_mut().insert(LOCATION, HeaderValue::from_static("/docs/"));
    Ok(response)
}

async fn docs(call: Call) -> Outcome {
    static CONFIG: OnceLock<Arc<Config<'static>>> = OnceLock::new();
    let config = CONFIG.get_or_init(|| Arc::new(Config::from("/openapi.json").validator_url("none")));
    let found = utoipa_swagger_ui::serve(call.path("file"), Arc::clone(config));
    let Ok(Some(file)) = found else {
        return Err(Problem::new(Code::NotFound, "the documentation has no such file"));
    };
    let mut response = Response::new(Body::from(file.bytes.into_owned()));
    let headers = response.headers_mut();
    if let Ok(value) = HeaderValue::from_str(&file.content_type) {
        headers.insert(CONTENT_TYPE, value);
    }
    if file.gzpipped {
        headers.insert(CONTENT_ENCODING, HeaderValue::from_static("gzip"));
    }
    headers.insert(CACHE_CONTROL, HeaderValue::from_static("public, max-age=3600"));
    headers.insert(CONTENT_SECURITY_POLICY, HeaderValue::from_static(DOCS_POLICY));
    Ok(response)
}

/// Text as it can stand in a page.
fn escape(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}

fn landing_page() -> String {
    let mut routes = String::new();
    for route in ROUTES.iter().filter(|route| route.tag.is_some()) {
        let address =
            if route.method == Method::Get && !route.path.contains('{') && route.parameters.is_empty() {
                format!("<a href=\"{0}\"><code>{0}</code></a>", route.path)
            } else {
                format!("<code>{}</code>", escape(route.path))
            };
        let method = route.method.key().to_ascii_uppercase();
        // Writing to a string cannot fail.
        let _ = writeln!(
            routes,
            "<tr><td>{method}</td><td>{address}</td><td>{}</td></tr>",
            escape(route.summary)
        );
    }
    let mut examples = String::new();
    for example in EXAMPLES {
        let _ = writeln!(
            examples,
            "<li><a href=\"/v1/examples/{0}\">{0}</a>: {1}</li>",
            example.name,
            escape(example.summary)
        );
    }
    let (name, text) = EXAMPLES.first().map_or(("", ""), |example| (example.name, example.text));
    format!(
        include_str!("landing.html"),
        version = env!("CARGO_PKG_VERSION"),
        name = name,
        example = escape(text.trim_end()),
        examples = examples,
        routes = routes
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_a_plain_host_stands_in_the_page() {
        let of = |text: &'static str| {
            let headers = HeaderMap::from_iter([(HOST, HeaderValue::from_static(text))]);
            host(&headers).map(str::to_owned)
        };
        assert_eq!(of("plant.example:8300").as_deref(), Some("plant.example:8300"));
        assert_eq!(of("[::1]:80").as_deref(), Some("[::1]:80"));
        assert_eq!(of("a;rm -rf"), None);
        assert_eq!(of("<b>"), None);
        assert!(landing_page().contains(ADDRESS));
    }

    #[test]
    fn the_landing_page_loads_nothing_from_elsewhere_and_runs_nothing() {
        let page = landing_page();
        assert!(!page.contains("http://") || page.contains("curl"));
        for outside in ["https://", "src=", "<script", "style=", "@import"] {
            assert!(!page.contains(outside), "{outside}");
        }
        assert!(page.contains("/v1/checks") && page.contains("&quot;flows&quot;"));
    }
}
