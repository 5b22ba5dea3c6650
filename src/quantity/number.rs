//! Decimal numbers as they are written.

use crate::diagnostic::{Code, Diagnostic};

use super::unit::shown;

/// A decimal number with the resolution of its printed digits.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Decimal<'a> {
    /// The digits as written.
    pub text: &'a str,
    /// The number.
    pub value: f64,
    /// Half a unit of the last written digit: 0.5 for `530`, 0.05 for `530.0`, 5 for `1.20e3`.
    pub half_digit: f64,
}

/// Splits `text` into a leading decimal number and the rest, which is trimmed.
///
/// The number is in plain decimal or exponent notation with a decimal point; the minus sign may be
/// typographic.
///
/// # Errors
/// [`Code::BadQuantity`] for what does not begin with a number, for decimal commas and thousands
/// separators; [`Code::BadNumber`] for what is not finite or cannot be represented.
pub fn split(text: &str) -> Result<(Decimal<'_>, &str), Diagnostic> {
    let text = text.trim();
    let bytes = text.as_bytes();
    let digits =
        |from: usize| bytes[from.min(bytes.len())..].iter().take_while(|b| b.is_ascii_digit()).count();

    let sign = match bytes.first() {
        Some(b'+' | b'-') => 1,
        _ if text.starts_with('−') => '−'.len_utf8(),
        _ => 0,
    };
    let whole = digits(sign);
    let mut end = sign + whole;
    let mut decimals = 0;
    if bytes.get(end) == Some(&b'.') {
        decimals = digits(end + 1);
        if decimals > 0 {
            end += 1 + decimals;
        } else if whole > 0 && !matches!(bytes.get(end + 1), Some(b'e' | b'E')) {
            end += 1;
        }
    }
    if whole + decimals == 0 {
        return Err(not_a_number(text));
    }
    let mantissa_end = end;
    let mut exponent = 0_i64;
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let signed = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        let count = digits(end + 1 + signed);
        if count > 0 {
            let written = text.get(end + 1..end + 1 + signed + count).unwrap_or_default();
            // More digits than an i64 holds: certainly out of range, and reported so below.
            exponent =
                written.parse().unwrap_or(if written.starts_with('-') { i64::MIN / 2 } else { i64::MAX / 2 });
            end += 1 + signed + count;
        }
    }
    let written = text.get(..end).unwrap_or_default();
    let rest = text.get(end..).unwrap_or_default();
    refuse_separators(written, rest)?;

    let parsed =
        if sign > 1 { format!("-{}", &written[sign..]).parse::<f64>() } else { written.parse::<f64>() };
    let value = parsed.unwrap_or(f64::NAN);
    if !value.is_finite() {
        return Err(Diagnostic::new(
            Code::BadNumber,
            "",
            format!("{} is too large to be represented", shown(written)),
        ));
    }
    if value == 0.0 && bytes.iter().take(mantissa_end).any(|b| matches!(b, b'1'..=b'9')) {
        return Err(Diagnostic::new(
            Code::BadNumber,
            "",
            format!("{} is too small to be represented", shown(written)),
        ));
    }
    let last = exponent.saturating_sub(i64::try_from(decimals).unwrap_or(i64::MAX));
    let half_digit = half_of_power(last);
    if !half_digit.is_finite() {
        return Err(Diagnostic::new(
            Code::BadNumber,
            "",
            format!("{} is too large to be represented", shown(written)),
        ));
    }
    Ok((Decimal { text: written, value, half_digit }, rest.trim_start()))
}

/// 0.5 × 10^n, zero where that is below the smallest number.
fn half_of_power(n: i64) -> f64 {
    match i32::try_from(n) {
        // Below 1 the division keeps powers of ten exactly rounded, which powi(-n) does not.
        Ok(n @ -300..0) => 0.5 / 10_f64.powi(-n),
        Ok(n) => 0.5 * 10_f64.powi(n),
        Err(_) => {
            if n > 0 {
                f64::INFINITY
            } else {
                0.0
            }
        }
    }
}

fn not_a_number(text: &str) -> Diagnostic {
    let word: String =
        text.trim_start_matches(['+', '-', '−']).chars().take_while(|c| c.is_alphabetic()).collect();
    if ["nan", "inf", "infinity", "infinite"].contains(&word.to_lowercase().as_str()) {
        return Diagnostic::new(Code::BadNumber, "", format!("\"{}\" is not a finite number", shown(text)))
            .hint("leave an unknown value out, and it is solved for where the balances allow");
    }
    if text.is_empty() {
        return Diagnostic::new(
            Code::BadQuantity,
            "",
            "the text is empty; a number and its unit are expected",
        );
    }
    let fault =
        Diagnostic::new(Code::BadQuantity, "", format!("\"{}\" does not begin with a number", shown(text)));
    if text.starts_with('±') || text.starts_with("+/-") {
        fault.hint("± belongs into \"uncertainty\"")
    } else {
        fault.hint("write a number with a decimal point, then the unit")
    }
}

/// What separates digits somewhere in the world, other than the decimal point.
const SEPARATORS: &[char] = &[',', '\'', '’', '_', '.', ' ', '\u{a0}', '\u{202f}', '\u{2009}'];

/// Refuses `1,5`, `1,000`, `1 000`, `1'000`, `1_000` and `1.000.000`, which are read differently
/// in different countries.
fn refuse_separators(written: &str, rest: &str) -> Result<(), Diagnostic> {
    // Nearly always a space and the unit.
    if let [b' ', letter, ..] = rest.as_bytes()
        && letter.is_ascii_alphabetic()
    {
        return Ok(());
    }
    let separator = rest.chars().next();
    if !separator.is_some_and(|c| SEPARATORS.contains(&c)) {
        return Ok(());
    }
    let then_digit = rest.trim_start_matches(SEPARATORS).starts_with(|c: char| c.is_ascii_digit());
    let (what, hint) = match separator {
        Some(',') if then_digit => {
            ("a comma", "write a decimal point: 1.5, not 1,5; and no thousands separators: 1000, not 1,000")
        }
        // A lone 1 is the unit of pure numbers: "0.7 1".
        Some(' ' | '\u{a0}' | '\u{202f}' | '\u{2009}') if then_digit && rest.trim() != "1" => {
            ("a space", "write the digits of a number together: 1000, not 1 000")
        }
        Some('\'' | '’' | '_' | '.') if then_digit => {
            ("a separator", "write the digits of a number together: 1000000, not 1'000'000 or 1.000.000")
        }
        _ => return Ok(()),
    };
    let whole = format!("{written}{rest}");
    Err(Diagnostic::new(Code::BadQuantity, "", format!("\"{}\" has {what} within its number", shown(&whole)))
        .hint(hint))
}
