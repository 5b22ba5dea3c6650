//! Choosing an answer's media type from `Accept` (RFC 9110, section 12.5.1).

/// The first of `offers` with the highest weight that `accept` gives; `None` if it excludes all.
/// An absent or empty header accepts everything. Entries that cannot be read are passed over.
pub fn choose(accept: Option<&str>, offers: &[&'static str]) -> Option<&'static str> {
    let Some(accept) = accept.filter(|a| !a.trim().is_empty()) else {
        return offers.first().copied();
    };
    let mut best: Option<(&'static str, u16)> = None;
    for offer in offers {
        let weight = weight(accept, offer);
        if weight > best.map_or(0, |(_, w)| w) {
            best = Some((offer, weight));
        }
    }
    best.map(|(offer, _)| offer)
}

/// The weight in thousandths that the most specific matching range gives to `offer`.
fn weight(accept: &str, offer: &str) -> u16 {
    let (kind, subtype) = offer.split_once('/').unwrap_or((offer, ""));
    let mut found: Option<(u8, u16)> = None;
    for range in accept.split(',') {
        let mut parts = range.split(';').map(str::trim);
        let Some((range_kind, range_subtype)) = parts.next().and_then(|r| r.split_once('/')) else {
            continue;
        };
        let specificity = match (range_kind, range_subtype) {
            ("*", "*") => 1,
            (k, "*") if k.eq_ignore_ascii_case(kind) => 2,
            (k, s) if k.eq_ignore_ascii_case(kind) && s.eq_ignore_ascii_case(subtype) => 3,
            _ => continue,
        };
        let quality = parts
            .find_map(|p| p.strip_prefix("q=").or_else(|| p.strip_prefix("Q=")))
            .map_or(1.0, |q| q.parse::<f64>().unwrap_or(0.0));
        // Between equally specific ranges the first stands.
        if found.is_none_or(|(s, _)| specificity > s) {
            found = Some((specificity, (quality.clamp(0.0, 1.0) * 1000.0) as u16));
        }
    }
    found.map_or(0, |(_, w)| w)
}

/// A media type without its parameters, in lower case.
pub fn essence(content_type: &str) -> String {
    content_type.split(';').next().unwrap_or("").trim().to_ascii_lowercase()
}

#[cfg(test)]
mod tests {
    use super::*;

    const OFFERS: &[&str] = &["application/json", "text/html", "text/csv"];

    #[test]
    fn json_comes_first_unless_something_else_is_preferred() {
        for (accept, expected) in [
            (None, Some("application/json")),
            (Some(""), Some("application/json")),
            (Some("*/*"), Some("application/json")),
            (Some("text/html,application/xhtml+xml,*/*;q=0.8"), Some("text/html")),
            (Some("text/*"), Some("text/html")),
            (Some("text/*;q=0.5, text/csv"), Some("text/csv")),
            (Some("application/json;q=0, */*"), Some("text/html")),
            (Some("Text/CSV;q=0.2"), Some("text/csv")),
            (Some("text/csv;q=0"), None),
            (Some("image/png"), None),
            (Some("nonsense"), None),
        ] {
            assert_eq!(choose(accept, OFFERS), expected, "{accept:?}");
        }
    }
}
