//! Names that refer to components and flows.

use crate::diagnostic::{Code, Diagnostic, nearest};
use crate::document::{Faults, Node};

/// The fault of a name that refers to nothing: `what` is a component or a flow.
pub(super) fn dangling<'a>(
    node: Node<'_>,
    what: &str,
    name: &str,
    known: impl IntoIterator<Item = &'a str>,
) -> Diagnostic {
    let fault = node.fault(Code::DanglingReference, format!("there is no {what} \"{name}\""));
    fault.suggest(&nearest(name, known), "")
}

/// The fault of a fluid that is not known; `near` are the nearest listed names.
pub(super) fn unknown_fluid(root: Node<'_>, node: Node<'_>, text: &str, mut near: Vec<String>) -> Diagnostic {
    if let Some(fluids) = root.get("fluids") {
        let own = nearest(text, fluids.members().map(|(name, _)| name));
        near.splice(0..0, own.into_iter().map(str::to_owned));
    }
    if ["propylene glycol", "ethylene glycol"].contains(&text) {
        return node.fault(Code::UnknownFluid, format!("\"{text}\" needs the share of the glycol")).hint(format!(
            "a glycol comes with its share: {{\"kind\": \"solution\", \"name\": \"{text}\", \"mass_fraction\": 0.4}} in \"fluids\""
        ));
    }
    let otherwise = "GET /v1/fluids lists the fluids; own ones go into \"fluids\"";
    node.fault(Code::UnknownFluid, format!("there is no fluid \"{text}\"")).suggest(&near, otherwise)
}

/// The references that can be told to dangle from the text alone. A description with other faults of
/// form is not read further, so that these would otherwise only show once those are mended.
pub(super) fn check(root: Node<'_>, faults: &mut Faults) {
    let names = |member: &str| -> Vec<&str> {
        root.get(member).into_iter().flat_map(|map| map.members().map(|(name, _)| name)).collect()
    };
    let (components, flows) = (names("components"), names("flows"));
    let mut refer = |node: Option<Node<'_>>, what: &str, known: &[&str]| {
        if let Some(node) = node
            && let Some(name) = node.text()
            && !known.contains(&name)
        {
            faults.push(dangling(node, what, name, known.iter().copied()));
        }
    };
    for (_, flow) in root.get("flows").into_iter().flat_map(Node::members) {
        refer(flow.get("from"), "component", &components);
        refer(flow.get("to"), "component", &components);
        refer(flow.get("same_state_as"), "flow", &flows);
    }
    for (_, group) in root.get("groups").into_iter().flat_map(Node::members) {
        group.items().for_each(|item| refer(Some(item), "component", &components));
    }
    let own: Vec<&str> =
        root.get("fluids").into_iter().flat_map(|map| map.members().map(|(name, _)| name)).collect();
    for (_, flow) in root.get("flows").into_iter().flat_map(Node::members) {
        if let Some(node) = flow.get("fluid")
            && let Some(text) = node.text()
            && !own.contains(&text)
            && let Err(near) = crate::fluid::by_name(text)
        {
            faults.push(unknown_fluid(root, node, text, near));
        }
    }
}
