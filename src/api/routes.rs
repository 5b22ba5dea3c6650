//! Every route, in one list. The router and the OpenAPI document are drawn from it.

use std::collections::HashMap;
use std::sync::Arc;

use axum::Router;
use axum::routing::MethodRouter;

use super::problem::Problem;
use super::route::Route;
use super::service::Service;
use super::{batch, catalogue, check, claim, examples, operation, pages, state};
use crate::diagnostic::Code;

/// Every route.
pub const ROUTES: &[Route] = &[
    check::CHECK,
    batch::BATCH,
    state::GET_STATE,
    state::POST_STATE,
    claim::LIST,
    claim::POST_CLAIM,
    claim::GET_CLAIM,
    catalogue::FLUIDS,
    catalogue::RULES,
    catalogue::UNITS,
    catalogue::KINDS,
    catalogue::CODES,
    catalogue::LIMITS,
    examples::LIST,
    examples::ONE,
    operation::LIVE,
    operation::READY,
    operation::OPENAPI,
    pages::LANDING,
    pages::STYLE,
    pages::DOCS,
    pages::DOCS_SLASH,
    pages::DOCS_FILE,
];

/// The router over all of them.
pub fn router(service: &Arc<Service>) -> Router {
    let mut places: HashMap<&'static str, MethodRouter> = HashMap::new();
    for route in ROUTES {
        let earlier = places.remove(route.path).unwrap_or_default();
        places.insert(route.path, earlier.merge(route.method_router(service)));
    }
    places
        .into_iter()
        .fold(Router::new(), |router, (path, methods)| router.route(path, methods))
        .fallback(async || {
            Problem::new(Code::NotFound, "there is nothing at this address; GET / lists what there is")
                .into_bare_response()
        })
        .method_not_allowed_fallback(async || {
            Problem::new(Code::MethodNotAllowed, "this address does not take this method; see Allow")
                .into_bare_response()
        })
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::collections::HashSet;

    #[test]
    fn every_route_is_declared_once_and_documented() {
        let mut places = HashSet::new();
        let mut ids = HashSet::new();
        for route in ROUTES {
            assert!(places.insert((route.path, route.method.key())), "{} twice", route.path);
            if route.tag.is_some() {
                assert!(ids.insert(route.id), "{} twice", route.id);
                for text in [route.id, route.summary, route.description, route.answer] {
                    assert!(!text.is_empty(), "{} lacks documentation", route.path);
                }
                assert!(route.description.ends_with('.'), "{}", route.path);
            }
            let in_path = route.parameters.iter().filter(|p| p.in_path).count();
            assert_eq!(route.path.matches('{').count(), in_path, "{}", route.path);
        }
    }
}
