//! A located fault in what a user handed over: a code that programs can match, the place, the
//! reason in one sentence, and a hint.
//!
//! Codes are declared once, in the table below; the catalogue (`GET /v1/codes`) is drawn from it.

use std::borrow::Cow;
use std::fmt;

macro_rules! codes {
    ($($variant:ident => $text:literal : $doc:literal),+ $(,)?) => {
        /// The identity of a fault. The text form is part of the interface.
        #[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
        pub enum Code { $(#[doc = $doc] $variant,)+ }

        impl Code {
            /// Every code, in the order of its declaration.
            pub const ALL: &'static [Code] = &[$(Code::$variant),+];

            /// The code as it stands in an answer, for instance `unknown-unit`.
            pub const fn text(self) -> &'static str {
                match self { $(Code::$variant => $text,)+ }
            }

            /// What the code means, in one sentence.
            pub const fn meaning(self) -> &'static str {
                match self { $(Code::$variant => $doc,)+ }
            }
        }
    };
}

codes! {
    NotJson => "not-json": "The body is not well-formed JSON.",
    DuplicateKey => "duplicate-key": "An object names the same member twice.",
    TooDeep => "too-deep": "The document is nested deeper than the limit.",
    LimitExceeded => "limit-exceeded": "A published limit on size or number is exceeded.",
    WrongType => "wrong-type": "The value has another JSON type than the field takes.",
    UnknownField => "unknown-field": "The object has a member that its kind does not know.",
    MissingField => "missing-field": "A member that the object needs is absent.",
    UnknownChoice => "unknown-choice": "The text is not one of the words that the field takes.",
    BadName => "bad-name": "A name does not match `^[A-Za-z0-9][A-Za-z0-9_.-]{0,63}$`.",
    BareNumber => "bare-number": "A dimensional quantity was given without a unit.",
    UnknownUnit => "unknown-unit": "The unit is not known.",
    WrongDimension => "wrong-dimension": "The unit measures another quantity than the field takes.",
    BadQuantity => "bad-quantity": "The text or object cannot be read as a quantity.",
    BadNumber => "bad-number": "The number is not finite, or too large or small to be computed with.",
    BadUncertainty => "bad-uncertainty": "The uncertainty cannot be read or does not fit the quantity.",
    BelowAbsoluteZero => "below-absolute-zero": "A temperature at or below 0 K, or a pressure at or below absolute vacuum.",
    OutOfBounds => "out-of-bounds": "The value lies outside what the field can take.",
    DanglingReference => "dangling-reference": "A name refers to something that the description does not contain.",
    CircularReference => "circular-reference": "A chain of references leads back to its start.",
    AmbiguousPort => "ambiguous-port": "The role of a flow at a component cannot be inferred.",
    MissingPort => "missing-port": "A component lacks a flow that its kind needs.",
    TooManyPorts => "too-many-ports": "A component has more flows in a role than its kind takes.",
    NotConnected => "not-connected": "A flow touches no component.",
    Conflict => "conflict": "Two members contradict each other or cannot be used together.",
    UnknownFluid => "unknown-fluid": "The fluid is not known.",
    UnknownSpecies => "unknown-species": "The chemical species is not known.",
    UnsupportedPair => "unsupported-pair": "The fluid cannot be fixed by this combination of properties.",
    OutOfRange => "out-of-range": "The state lies outside the range of the property formulation.",
    NoConvergence => "no-convergence": "The property equation could not be solved for this state.",
    Unsolvable => "unsolvable": "The unknowns cannot be solved from what is given.",
    BadClaim => "bad-claim": "The claim cannot be judged as it is stated.",
    BadParameter => "bad-parameter": "A query parameter cannot be read.",
    BodyTooLarge => "body-too-large": "The body is larger than the limit.",
    UnsupportedMediaType => "unsupported-media-type": "The body's media type or content coding is not taken here.",
    NotAcceptable => "not-acceptable": "None of the accepted media types can be produced here.",
    NotFound => "not-found": "There is nothing at this address.",
    MethodNotAllowed => "method-not-allowed": "The address exists but does not take this method.",
    RequestTimeout => "request-timeout": "The request did not arrive in time.",
    DeadlineExceeded => "deadline-exceeded": "The check did not finish before its deadline.",
    Overloaded => "overloaded": "All workers are busy and the queue is full.",
    Internal => "internal": "The service failed; the fault is ours.",
}

impl fmt::Display for Code {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.text())
    }
}

/// One located fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// What kind of fault.
    pub code: Code,
    /// RFC 6901 JSON Pointer into the body; empty for the whole document.
    pub pointer: String,
    /// What is wrong, in one sentence, with its figures.
    pub message: String,
    /// How to put it right, where that is known.
    pub hint: Option<Cow<'static, str>>,
}

impl Diagnostic {
    /// A fault without a hint.
    pub fn new(code: Code, pointer: impl Into<String>, message: impl Into<String>) -> Self {
        Diagnostic { code, pointer: pointer.into(), message: message.into(), hint: None }
    }

    /// The same fault with a hint.
    #[must_use]
    pub fn hint(mut self, hint: impl Into<Cow<'static, str>>) -> Self {
        self.hint = Some(hint.into());
        self
    }

    /// The same fault with the names that were perhaps meant, as a hint; without any, `otherwise`
    /// unless that is empty.
    #[must_use]
    pub fn suggest<S: AsRef<str>>(self, near: &[S], otherwise: &str) -> Self {
        match did_you_mean(near) {
            Some(hint) => self.hint(hint),
            None if otherwise.is_empty() => self,
            None => self.hint(otherwise.to_owned()),
        }
    }
}

/// `did you mean "a" or "b"?`; `None` without names.
pub fn did_you_mean<S: AsRef<str>>(near: &[S]) -> Option<String> {
    let quoted: Vec<String> = near.iter().map(|name| format!("\"{}\"", name.as_ref())).collect();
    (!quoted.is_empty()).then(|| format!("did you mean {}?", quoted.join(" or ")))
}

impl fmt::Display for Diagnostic {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let place = if self.pointer.is_empty() { "(document)" } else { &self.pointer };
        write!(f, "{place}: {} [{}]", self.message, self.code)?;
        if let Some(hint) = &self.hint {
            write!(f, "; {hint}")?;
        }
        Ok(())
    }
}

impl std::error::Error for Diagnostic {}

/// Appends one reference token to a JSON Pointer, escaped as RFC 6901 asks.
pub fn push_token(pointer: &mut String, token: &str) {
    pointer.push('/');
    if !token.bytes().any(|b| matches!(b, b'~' | b'/')) {
        pointer.push_str(token);
        return;
    }
    for c in token.chars() {
        match c {
            '~' => pointer.push_str("~0"),
            '/' => pointer.push_str("~1"),
            c => pointer.push(c),
        }
    }
}

/// Symbols that an analysis of a fuel may be written with.
const ELEMENTS: [(&str, &str); 5] =
    [("C", "carbon"), ("H", "hydrogen"), ("O", "oxygen"), ("N", "nitrogen"), ("S", "sulphur")];

/// The candidates nearest to `word` by edit distance, best first; at most three, and only such
/// as a slip of the fingers or another spelling would explain.
pub fn nearest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Vec<&'a str> {
    fn fold(s: &str) -> Vec<char> {
        s.chars().filter(|c| c.is_alphanumeric()).flat_map(char::to_lowercase).take(64).collect()
    }
    fn distance(a: &[char], b: &[char]) -> usize {
        let mut row: Vec<usize> = (0..=b.len()).collect();
        for (i, ca) in a.iter().enumerate() {
            let mut diagonal = row[0];
            row[0] = i + 1;
            for (j, cb) in b.iter().enumerate() {
                let substituted = diagonal + usize::from(ca != cb);
                diagonal = row[j + 1];
                row[j + 1] = substituted.min(row[j] + 1).min(diagonal + 1);
            }
        }
        row[b.len()]
    }
    let folded = fold(word);
    if folded.is_empty() {
        return Vec::new();
    }
    let symbol = ELEMENTS.iter().find(|(symbol, _)| *symbol == word).map(|e| e.1);
    let candidates: Vec<&str> = candidates.into_iter().collect();
    if let Some(element) = symbol.filter(|element| candidates.contains(element)) {
        return vec![element];
    }
    let mut scored: Vec<(usize, &str)> = candidates
        .into_iter()
        .filter_map(|c| {
            let other = fold(c);
            let d = distance(&folded, &other);
            let prefix = other.starts_with(&folded) || folded.starts_with(&other);
            let allowed = 1 + folded.len().max(other.len()) / 4;
            if d <= allowed {
                Some((d, c))
            } else if prefix && folded.len() >= 3 && other.len() >= 3 {
                Some((allowed + 1, c))
            } else {
                None
            }
        })
        .collect();
    scored.sort();
    scored.dedup();
    scored.into_iter().map(|(_, c)| c).take(3).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn codes_are_unique_and_kebab_case() {
        let mut seen = std::collections::BTreeSet::new();
        for code in Code::ALL {
            assert!(seen.insert(code.text()), "{code} twice");
            assert!(code.text().chars().all(|c| c.is_ascii_lowercase() || c == '-'));
            assert!(code.meaning().ends_with('.'));
        }
    }

    #[test]
    fn a_symbol_stands_for_its_element() {
        assert_eq!(nearest("S", ["carbon", "sulphur"]), ["sulphur"]);
        assert_eq!(nearest("C", ["cop", "carbon"]), ["carbon"]);
        assert!(nearest("C", ["temperature"]).is_empty());
    }

    #[test]
    fn nearest_offers_what_was_meant() {
        let known = ["temperature", "pressure", "R134a", "water"];
        assert_eq!(nearest("temprature", known), ["temperature"]);
        assert_eq!(nearest("R-134a", known), ["R134a"]);
        assert!(nearest("zzz", known).is_empty());
    }

    #[test]
    fn pointer_tokens_are_escaped() {
        let mut p = String::new();
        push_token(&mut p, "a/b~c");
        assert_eq!(p, "/a~1b~0c");
    }
}
