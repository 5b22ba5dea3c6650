//! `POST /v1/checks`: one description in, one report out.

use axum::body::Body;
use axum::http::header::CONTENT_SECURITY_POLICY;
use axum::http::{HeaderName, HeaderValue, Response};

use super::route::{
    BASE, CSV, Call, Gives, HTML, JSON, Method, Outcome, Parameter, Route, TEXT, Takes, optional,
};
use crate::quantity::UnitSystem;
use crate::report::Report;

/// The verdict beside the body, for users who read headers only.
const VERDICT: HeaderName = HeaderName::from_static("verdict");

/// A report as a page needs its own style and nothing else.
const PAGE_POLICY: &str = "default-src 'none'; style-src 'unsafe-inline'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

/// `?units=`.
pub const UNITS: Parameter = Parameter {
    name: "units",
    in_path: false,
    required: false,
    choices: &[UnitSystem::Metric.text(), UnitSystem::Si.text(), UnitSystem::Us.text()],
    pattern: None,
    description: "The units of the answer: metric (degC, bar, kW, kJ/kg; the default), si, or us.",
    example: "metric",
};

/// `?deadline=`. The pattern is for the default of the longest deadline, 30 s.
pub const DEADLINE: Parameter = Parameter {
    pattern: Some("^(([1-9]|[12][0-9]|30)s?|([1-9][0-9]{0,3}|[12][0-9]{4}|30000)ms)$"),
    ..optional(
        "deadline",
        "How long the check may take, in whole seconds (5 or 5s) or milliseconds (500ms), up to the longest that \
         `/v1/limits` grants. A check that does not finish is answered with 503 `deadline-exceeded`; a report is never \
         cut short.",
        "5",
    )
};

/// The route.
pub const CHECK: Route = Route {
    method: Method::Post,
    path: "/v1/checks",
    id: "check",
    tag: Some("checks"),
    summary: "Check one process description",
    description: "Checks a description of a process against the balances of mass, elements and energy and against the \
                  second law, and gives a report. The answer is 200 whatever the verdict; the header `Verdict` repeats it. \
                  A description that cannot be read as one is answered with 422 and every fault located.",
    parameters: &[UNITS, DEADLINE],
    takes: Some(Takes {
        media: &[JSON],
        schema: "Description",
        description: "The description of the process.",
        examples: true,
        streamed: false,
    }),
    gives: &[
        Gives { media: JSON, schema: Some("Report") },
        Gives { media: HTML, schema: None },
        Gives { media: CSV, schema: None },
        Gives { media: TEXT, schema: None },
    ],
    answer: "The report.",
    refuses: &[406, 408, 413, 415, 422, 503],
    handler: |call| Box::pin(check(call)),
    ..BASE
};

/// A report in one of the media types of [`CHECK`].
pub fn render(report: &Report, media: &str) -> Vec<u8> {
    match media {
        TEXT => report.to_text().into_bytes(),
        CSV => report.to_csv().into_bytes(),
        HTML => report.to_html().into_bytes(),
        _ => report.to_json(),
    }
}

async fn check(call: Call) -> Outcome {
    let (deadline, units, media, body) = (call.deadline()?, call.query.units(), call.media, call.body);
    let work = call.service.run(deadline, move |engine, limits, cancel| {
        let report = engine.check(&body, limits, units, cancel)?;
        Ok((report.verdict, render(&report, media)))
    });
    let (verdict, bytes) = work.await?;
    let mut response = Response::new(Body::from(bytes));
    response.headers_mut().insert(VERDICT, HeaderValue::from_static(verdict));
    if media == HTML {
        response.headers_mut().insert(CONTENT_SECURITY_POLICY, HeaderValue::from_static(PAGE_POLICY));
    }
    Ok(response)
}
