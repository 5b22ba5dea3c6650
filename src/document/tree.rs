//! From bytes to an ordered tree.
//!
//! `serde_json` decides what is JSON and where it is not, without recursion. What it accepted is
//! then split into a tree that borrows from the body: numbers keep their text, and each value
//! knows the bytes it came from, so that its JSON Pointer can be found when it is asked for.

use std::borrow::Cow;
use std::collections::HashSet;

use serde::de::IgnoredAny;

use super::faults::Faults;
use super::node::Node;
use crate::diagnostic::{Code, Diagnostic, push_token};

/// What a document may not exceed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Limits {
    /// Containers within each other; never more than 128 are taken, whatever is set here.
    pub depth: usize,
    /// Bytes of a member's name.
    pub key_bytes: usize,
    /// Bytes of a text.
    pub string_bytes: usize,
    /// Members of the outermost object whose own members have names of free text: tags.
    pub free_keys: &'static [&'static str],
    /// Characters of such a name.
    pub free_key_chars: usize,
}

/// The tree is built and dropped by recursion; this depth is safe on any stack.
const MAX_DEPTH: usize = 128;

impl Default for Limits {
    fn default() -> Self {
        Limits {
            depth: 32,
            key_bytes: 64,
            string_bytes: 1024,
            free_keys: &["tags", "readings"],
            free_key_chars: 128,
        }
    }
}

/// An ordered JSON document that borrows from its body.
#[derive(Debug)]
pub struct Tree<'a> {
    root: Value<'a>,
    text: &'a str,
}

/// A value with the bytes it came from.
#[derive(Debug)]
pub(super) struct Value<'a> {
    pub(super) start: u32,
    pub(super) end: u32,
    pub(super) data: Data<'a>,
}

#[derive(Debug)]
pub(super) enum Data<'a> {
    Null,
    Bool(bool),
    /// The number's text.
    Number(&'a str),
    Text(Cow<'a, str>),
    List(Vec<Value<'a>>),
    Object(Vec<Member<'a>>),
    /// A value that was refused, with a fault, and is not looked at again.
    Refused,
}

#[derive(Debug)]
pub(super) struct Member<'a> {
    pub(super) key: Cow<'a, str>,
    pub(super) value: Value<'a>,
}

impl<'a> Tree<'a> {
    /// Reads a body. `None` where it is not JSON; any other fault is recorded and the rest is read,
    /// so that a walk can go on to find more.
    pub fn read(body: &'a [u8], limits: &Limits, faults: &mut Faults) -> Option<Tree<'a>> {
        let text = match std::str::from_utf8(body) {
            Ok(text) => text,
            Err(error) => {
                let before = body.get(..error.valid_up_to()).unwrap_or_default();
                let line = before.iter().filter(|b| **b == b'\n').count() + 1;
                let column = before.iter().rev().take_while(|b| **b != b'\n').count() + 1;
                faults.push(
                    Diagnostic::new(
                        Code::NotJson,
                        "",
                        format!("the body is not UTF-8 at line {line} column {column}"),
                    )
                    .hint("send JSON as UTF-8"),
                );
                return None;
            }
        };
        if u32::try_from(text.len()).is_err() {
            faults.push(Diagnostic::new(Code::LimitExceeded, "", "the body is larger than 4 GiB"));
            return None;
        }
        if let Err(error) = serde_json::from_str::<IgnoredAny>(text) {
            let fault = if text.trim().is_empty() {
                Diagnostic::new(Code::NotJson, "", "the body is empty")
            } else {
                Diagnostic::new(Code::NotJson, "", error.to_string())
            };
            faults.push(fault);
            return None;
        }
        let mut builder = Builder { text, at: 0, limits, faults, path: Vec::new() };
        let root = builder.value();
        Some(Tree { root, text })
    }

    /// The outermost value.
    pub fn root(&self) -> Node<'_> {
        Node { tree: self, value: &self.root }
    }

    /// The document as it was sent.
    pub fn text(&self) -> &'a str {
        self.text
    }

    /// The JSON Pointer of the value that came from the bytes `start..end`.
    pub(super) fn pointer(&self, start: u32, end: u32) -> String {
        // Most are shorter than this.
        let mut pointer = String::with_capacity(48);
        let mut value = &self.root;
        while (value.start, value.end) != (start, end) {
            let holds = |v: &Value<'_>| v.start <= start && end <= v.end;
            let child = match &value.data {
                Data::List(items) => {
                    let i = items.partition_point(|v| v.end < end);
                    items.get(i).filter(|v| holds(v)).inspect(|_| push_token(&mut pointer, &i.to_string()))
                }
                Data::Object(members) => members
                    .get(members.partition_point(|m| m.value.end < end))
                    .filter(|m| holds(&m.value))
                    .map(|m| {
                        push_token(&mut pointer, &m.key);
                        &m.value
                    }),
                _ => None,
            };
            match child {
                Some(child) => value = child,
                None => break,
            }
        }
        pointer
    }
}

/// Splits a text that is known to be well-formed JSON.
struct Builder<'a, 'f> {
    text: &'a str,
    at: usize,
    limits: &'f Limits,
    faults: &'f mut Faults,
    path: Vec<Step<'a>>,
}

enum Step<'a> {
    Key(Cow<'a, str>),
    Index(usize),
}

impl<'a> Builder<'a, '_> {
    fn peek(&self) -> u8 {
        self.text.as_bytes().get(self.at).copied().unwrap_or(0)
    }

    fn skip_space(&mut self) {
        while matches!(self.peek(), b' ' | b'\t' | b'\n' | b'\r') {
            self.at += 1;
        }
    }

    fn slice(&self, from: usize, to: usize) -> &'a str {
        self.text.get(from..to).unwrap_or_default()
    }

    fn fault(&mut self, code: Code, message: String) {
        if self.faults.is_full() {
            self.faults.push(Diagnostic::new(code, "", message));
            return;
        }
        let mut pointer = String::new();
        for step in &self.path {
            match step {
                Step::Key(key) => push_token(&mut pointer, key),
                Step::Index(i) => push_token(&mut pointer, &i.to_string()),
            }
        }
        self.faults.push(Diagnostic::new(code, pointer, message));
    }

    fn value(&mut self) -> Value<'a> {
        self.skip_space();
        let start = self.at;
        let data = match self.peek() {
            b'{' | b'[' if self.path.len() >= self.limits.depth.min(MAX_DEPTH) => {
                let limit = self.limits.depth.min(MAX_DEPTH);
                self.fault(Code::TooDeep, format!("the document is nested deeper than {limit}"));
                self.skip_container();
                Data::Refused
            }
            b'{' => self.object(),
            b'[' => self.list(),
            b'"' => self.string_value(),
            b't' => {
                self.at += 4;
                Data::Bool(true)
            }
            b'f' => {
                self.at += 5;
                Data::Bool(false)
            }
            b'n' => {
                self.at += 4;
                Data::Null
            }
            _ => {
                while matches!(self.peek(), b'0'..=b'9' | b'+' | b'-' | b'.' | b'e' | b'E') {
                    self.at += 1;
                }
                // Well-formed text always has a number here; moving on keeps the loops finite.
                self.at = self.at.max(start + 1);
                Data::Number(self.slice(start, self.at))
            }
        };
        // The length of the whole was found to fit before.
        Value { start: start as u32, end: self.at as u32, data }
    }

    fn string_value(&mut self) -> Data<'a> {
        let Some(text) = self.string() else {
            self.fault(Code::NotJson, "the text has an unpaired surrogate escape".to_owned());
            return Data::Refused;
        };
        let limit = self.limits.string_bytes;
        if text.len() > limit {
            let message = format!("the text has {} bytes; at most {limit} are taken", text.len());
            self.fault(Code::LimitExceeded, message);
            return Data::Refused;
        }
        Data::Text(text)
    }

    /// Reads a string; `None` where its escapes are no Unicode text.
    fn string(&mut self) -> Option<Cow<'a, str>> {
        let start = self.at;
        self.at += 1;
        let mut escaped = false;
        while let Some(rest) = self.text.as_bytes().get(self.at..) {
            let Some(plain) = rest.iter().position(|b| matches!(b, b'"' | b'\\')) else { break };
            self.at += plain;
            if self.peek() == b'"' {
                break;
            }
            escaped = true;
            self.at += 2;
        }
        self.at += 1;
        if escaped {
            serde_json::from_str::<String>(self.slice(start, self.at)).ok().map(Cow::Owned)
        } else {
            Some(Cow::Borrowed(self.slice(start + 1, self.at - 1)))
        }
    }

    fn list(&mut self) -> Data<'a> {
        let mut items = Vec::new();
        self.at += 1;
        loop {
            self.skip_space();
            match self.peek() {
                b',' => self.at += 1,
                b']' | 0 => break,
                _ => {
                    self.path.push(Step::Index(items.len()));
                    items.push(self.value());
                    self.path.pop();
                }
            }
        }
        self.at += 1;
        Data::List(items)
    }

    fn object(&mut self) -> Data<'a> {
        let free = match self.path.as_slice() {
            [Step::Key(key)] => self.limits.free_keys.contains(&key.as_ref()),
            _ => false,
        };
        let mut members: Vec<Member<'a>> = Vec::new();
        // Few members are compared one by one; many are looked up.
        let mut seen: Option<HashSet<Cow<'a, str>>> = None;
        self.at += 1;
        loop {
            self.skip_space();
            match self.peek() {
                b',' => {
                    self.at += 1;
                    continue;
                }
                b'}' | 0 => break,
                _ => {}
            }
            let Some(key) = self.string() else {
                self.fault(Code::NotJson, "a member's name has an unpaired surrogate escape".to_owned());
                self.skip_to_value();
                self.value();
                continue;
            };
            self.skip_to_value();
            if let Some(message) = self.key_fault(&key, free) {
                self.fault(Code::LimitExceeded, message);
                self.path.push(Step::Key(Cow::Owned(key.chars().take(64).collect())));
                self.value();
                self.path.pop();
                continue;
            }
            let again = match &seen {
                Some(seen) => seen.contains(&key),
                None => members.iter().any(|m| m.key == key),
            };
            self.path.push(Step::Key(key.clone()));
            if again {
                self.fault(Code::DuplicateKey, format!("the member \"{key}\" is given twice"));
            }
            let value = self.value();
            self.path.pop();
            if !again {
                if members.len() == 16 {
                    seen = Some(members.iter().map(|m| m.key.clone()).collect());
                }
                if let Some(seen) = &mut seen {
                    seen.insert(key.clone());
                }
                members.push(Member { key, value });
            }
        }
        self.at += 1;
        Data::Object(members)
    }

    fn key_fault(&self, key: &str, free: bool) -> Option<String> {
        let (size, limit, what) = if free {
            (key.chars().count(), self.limits.free_key_chars, "characters")
        } else {
            (key.len(), self.limits.key_bytes, "bytes")
        };
        (size > limit).then(|| {
            let start: String = key.chars().take(24).collect();
            format!("the name \"{start}…\" has {size} {what}; at most {limit} are taken")
        })
    }

    /// From behind a member's name to its value.
    fn skip_to_value(&mut self) {
        self.skip_space();
        if self.peek() == b':' {
            self.at += 1;
        }
    }

    /// Passes over a container without recursion.
    fn skip_container(&mut self) {
        let mut open = 0_usize;
        while self.at < self.text.len() {
            match self.peek() {
                b'"' => {
                    self.at += 1;
                    while self.at < self.text.len() && self.peek() != b'"' {
                        self.at += if self.peek() == b'\\' { 2 } else { 1 };
                    }
                }
                b'{' | b'[' => open += 1,
                b'}' | b']' => open -= 1,
                _ => {}
            }
            self.at += 1;
            if open == 0 {
                break;
            }
        }
    }
}
