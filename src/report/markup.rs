//! Writing HTML and SVG: everything that is not ours is escaped.

use super::prose;
use std::fmt::Write;

/// Text for element content or a quoted attribute, in HTML and in XML.
pub(super) fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in prose::clean(text).chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            // Not characters of XML 1.0.
            '\u{fffe}' | '\u{ffff}' => out.push('\u{fffd}'),
            c => out.push(c),
        }
    }
    out
}

/// At most so many characters, with an ellipsis where it was longer.
pub(super) fn shortened(text: &str, most: usize) -> String {
    if text.chars().count() <= most {
        return text.to_owned();
    }
    text.chars().take(most.saturating_sub(1)).chain(['…']).collect()
}

/// A coordinate: finite, one decimal.
pub(super) fn at(x: f64) -> String {
    let text = format!("{:.1}", if x.is_finite() { x } else { 0.0 });
    text.strip_suffix(".0").map_or(text.clone(), str::to_owned)
}

/// A drawing under construction. Colours come from classes, so that they follow the page.
pub(super) struct Drawing {
    body: String,
    id: String,
    title: String,
    description: String,
}

impl Drawing {
    /// A drawing with its accessible title and description. The id is ours and unique on the page.
    pub fn new(id: &str, title: &str, description: &str) -> Drawing {
        Drawing {
            body: String::new(),
            id: id.to_owned(),
            title: escaped(title),
            description: escaped(description),
        }
    }

    /// Text; `anchor` is `start`, `middle` or `end`.
    pub fn text(&mut self, (x, y): (f64, f64), class: &str, anchor: &str, text: &str) {
        // Writing to a String cannot fail.
        let _ = write!(
            self.body,
            "<text x=\"{}\" y=\"{}\" class=\"{class}\" text-anchor=\"{anchor}\">{}</text>",
            at(x),
            at(y),
            escaped(text)
        );
    }

    /// A rectangle; a negative extent draws nothing.
    pub fn rectangle(&mut self, (x, y): (f64, f64), (width, height): (f64, f64), round: f64, class: &str) {
        let _ = write!(
            self.body,
            "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" rx=\"{}\" class=\"{class}\"/>",
            at(x),
            at(y),
            at(width.max(0.0)),
            at(height.max(0.0)),
            at(round)
        );
    }

    /// A straight line.
    pub fn line(&mut self, (x1, y1): (f64, f64), (x2, y2): (f64, f64), class: &str) {
        let _ = write!(
            self.body,
            "<line x1=\"{}\" y1=\"{}\" x2=\"{}\" y2=\"{}\" class=\"{class}\"/>",
            at(x1),
            at(y1),
            at(x2),
            at(y2)
        );
    }

    /// A circle.
    pub fn circle(&mut self, (x, y): (f64, f64), radius: f64, class: &str) {
        let _ = write!(
            self.body,
            "<circle cx=\"{}\" cy=\"{}\" r=\"{}\" class=\"{class}\"/>",
            at(x),
            at(y),
            at(radius)
        );
    }

    /// A path from its data, which is made of [`at`] and letters.
    pub fn path(&mut self, data: &str, class: &str) {
        let _ = write!(self.body, "<path d=\"{data}\" class=\"{class}\"/>");
    }

    /// Opens a group with a title of its own, shown when pointed at.
    pub fn open(&mut self, class: &str, title: &str) {
        let _ = write!(self.body, "<g class=\"{class}\"><title>{}</title>", escaped(title));
    }

    /// Closes the group.
    pub fn close(&mut self) {
        self.body.push_str("</g>");
    }

    /// The finished element.
    pub fn finish(self, (width, height): (f64, f64)) -> String {
        let Drawing { body, id, title, description } = self;
        let (w, h) = (at(width), at(height));
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {w} {h}\" width=\"{w}\" height=\"{h}\" \
             role=\"img\" aria-labelledby=\"{id}-t {id}-d\"><title id=\"{id}-t\">{title}</title>\
             <desc id=\"{id}-d\">{description}</desc>{body}</svg>"
        )
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hostile_text_is_escaped() {
        assert_eq!(
            escaped("<a href='x' id=\"y\">&\u{0}\u{202e}"),
            "&lt;a href=&#39;x&#39; id=&quot;y&quot;&gt;&amp;\u{fffd}\u{fffd}"
        );
    }

    #[test]
    fn coordinates_are_finite_and_short() {
        assert_eq!((at(f64::NAN).as_str(), at(2.0).as_str(), at(-0.26).as_str()), ("0", "2", "-0.3"));
    }
}
