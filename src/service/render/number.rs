//! Numbers as they are printed in pictures.

/// A number to `digits` significant digits, without trailing zeros: `0.031`, `1.2`, `24 000`, `3.1 × 10⁻⁷`.
pub(in crate::service) fn significant(value: f64, digits: i32) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    if value.is_nan() {
        return "–".to_owned();
    }
    if value.is_infinite() {
        return if value > 0.0 { "∞" } else { "−∞" }.to_owned();
    }
    // Rounding can carry into the next decade, so the exponent is read off the rounded number.
    let places = usize::try_from((digits - 1).max(0)).unwrap_or(0);
    let scientific = format!("{:.places$e}", value.abs());
    let (mantissa, exponent) = scientific.split_once('e').unwrap_or((&scientific, "0"));
    let exponent: i32 = exponent.parse().unwrap_or(0);
    let sign = if value < 0.0 { "−" } else { "" };
    if !(-4..6).contains(&exponent) {
        let mantissa = trimmed(mantissa);
        return if mantissa == "1" {
            format!("{sign}10{}", raised(exponent))
        } else {
            format!("{sign}{mantissa} × 10{}", raised(exponent))
        };
    }
    let decimals = usize::try_from((digits - 1 - exponent).max(0)).unwrap_or(0);
    let rounded: f64 = scientific.parse().unwrap_or(value.abs());
    format!("{sign}{}", grouped(trimmed(&format!("{rounded:.decimals$}"))))
}

/// A number with so many decimals: for ticks, all of one axis alike.
pub(super) fn decimal(value: f64, decimals: usize) -> String {
    let text = format!("{:.decimals$}", value.abs());
    let zero = text.chars().all(|c| matches!(c, '0' | '.'));
    let sign = if value < 0.0 && !zero { "−" } else { "" };
    format!("{sign}{}", grouped(&text))
}

/// A power of ten as superscript digits.
pub(super) fn raised(exponent: i32) -> String {
    exponent
        .to_string()
        .chars()
        .map(|c| match c {
            '-' => '⁻',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            '4' => '⁴',
            '5' => '⁵',
            '6' => '⁶',
            '7' => '⁷',
            '8' => '⁸',
            '9' => '⁹',
            _ => '⁰',
        })
        .collect()
}

/// A number with its unit.
pub(in crate::service) fn with_unit(value: f64, unit: &str) -> String {
    let number = significant(value, 3);
    match unit {
        "" => number,
        "deg" => format!("{number}°"),
        unit => format!("{number} {unit}"),
    }
}

/// A share as a percentage; never a bare 0 % or 100 % for what is neither.
pub(in crate::service) fn percent(share: f64) -> String {
    let hundred = 100.0 * share;
    if hundred > 0.0 && hundred < 0.1 {
        "under 0.1 %".to_owned()
    } else if hundred > 99.9 && hundred < 100.0 {
        "over 99.9 %".to_owned()
    } else if (1.0..=99.0).contains(&hundred) {
        format!("{} %", decimal(hundred, 0))
    } else {
        format!("{} %", trimmed(&decimal(hundred, 1)))
    }
}

fn trimmed(text: &str) -> &str {
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.') } else { text }
}

/// Groups of three digits from 10 000 on, set apart by a no-break space.
fn grouped(text: &str) -> String {
    let (whole, rest) = text.split_at(text.find('.').unwrap_or(text.len()));
    if whole.len() < 5 {
        return text.to_owned();
    }
    let mut out = String::with_capacity(text.len() + 2);
    for (index, digit) in whole.chars().enumerate() {
        if index > 0 && (whole.len() - index).is_multiple_of(3) {
            out.push('\u{a0}');
        }
        out.push(digit);
    }
    out + rest
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn significant_digits() {
        for (value, text) in [
            (0.0, "0"),
            (1.0, "1"),
            (9.996, "10"),
            (0.030_96, "0.031"),
            (1.234_5, "1.23"),
            (-12.34, "−12.3"),
            (24_049.0, "24\u{a0}000"),
            (1234.0, "1230"),
            (999_950.0, "10⁶"),
            (3.14e-7, "3.14 × 10⁻⁷"),
            (1e-9, "10⁻⁹"),
            (f64::NAN, "–"),
            (f64::INFINITY, "∞"),
        ] {
            assert_eq!(significant(value, 3), text, "{value}");
        }
    }

    #[test]
    fn shares_that_are_nearly_nothing_or_all_say_so() {
        for (share, text) in [
            (0.0, "0 %"),
            (1e-6, "under 0.1 %"),
            (0.004, "0.4 %"),
            (0.314, "31 %"),
            (0.9995, "over 99.9 %"),
            (0.993, "99.3 %"),
            (1.0, "100 %"),
        ] {
            assert_eq!(percent(share), text);
        }
    }

    #[test]
    fn ticks_share_their_decimals() {
        assert_eq!(decimal(-0.5, 2), "−0.50");
        assert_eq!(decimal(-1e-18, 1), "0.0");
        assert_eq!(decimal(1_234_567.0, 0), "1\u{a0}234\u{a0}567");
    }
}
