//! How much room letters take, where no font is at hand: generous guesses, so that nothing is cut or overlaps with whichever sans-serif the reader has.

/// Advance of the printable ASCII characters in hundredths of the size: those of a wide sans-serif (DejaVu Sans); the usual ones are narrower.
const ADVANCE: [u8; 95] = [
    32, 40, 46, 84, 64, 95, 78, 27, 39, 39, 50, 84, 32, 36, 32, 34, 64, 64, 64, 64, 64, 64, 64, 64, 64, 64,
    34, 34, 84, 84, 84, 53, 100, 68, 69, 70, 77, 63, 58, 77, 75, 29, 29, 66, 56, 86, 75, 79, 60, 79, 69, 63,
    61, 73, 68, 99, 69, 61, 69, 39, 34, 39, 84, 50, 50, 61, 63, 55, 63, 62, 35, 63, 63, 28, 28, 58, 28, 97,
    63, 61, 63, 63, 41, 52, 39, 63, 59, 82, 59, 59, 52, 64, 34, 64, 84,
];

/// Room for bold letters, over that for plain ones.
const BOLD: f64 = 1.14;

fn advance(c: char) -> f64 {
    let code = u32::from(c);
    match code {
        32..=126 => f64::from(ADVANCE[(code - 32) as usize]) / 100.0,
        // Letters with accents, Greek, Cyrillic, superscripts.
        160..=0x52f | 0x2070..=0x209f => 0.7,
        _ => 1.0,
    }
}

/// The width of `text` at this size, at most.
pub(super) fn width(text: &str, size: f64) -> f64 {
    size * text.chars().map(advance).sum::<f64>()
}

/// The width of `text` in bold.
pub(super) fn bold_width(text: &str, size: f64) -> f64 {
    BOLD * width(text, size)
}

/// Characters that XML 1.0 forbids, and those that turn the direction of a line.
pub(super) fn forbidden(c: char) -> bool {
    let code = u32::from(c);
    (c.is_control() && !matches!(c, '\t' | '\n' | '\r'))
        || matches!(code, 0xfffe | 0xffff | 0x202a..=0x202e | 0x2066..=0x2069 | 0x200e | 0x200f | 0x2028 | 0x2029)
}

/// `text` as one line, cut with an ellipsis where it would be wider than `room`.
pub(super) fn fitted(text: &str, size: f64, room: f64) -> String {
    let line = one_line(text);
    if width(&line, size) <= room {
        return line;
    }
    let mut left = room - size;
    let mut kept = String::new();
    for c in line.chars() {
        left -= size * advance(c);
        if left < 0.0 {
            break;
        }
        kept.push(c);
    }
    format!("{}…", kept.trim_end())
}

/// `text` as at most `most` lines no wider than `room`; the last one is cut with an ellipsis.
pub(super) fn wrapped(text: &str, size: f64, room: f64, most: usize) -> Vec<String> {
    let line = one_line(text);
    let mut lines: Vec<String> = Vec::new();
    let mut rest = line.as_str();
    while !rest.is_empty() {
        if lines.len() + 1 == most || width(rest, size) <= room {
            lines.push(fitted(rest, size, room));
            break;
        }
        let mut left = room;
        let mut end = 0;
        let mut cut = None;
        for (at, c) in rest.char_indices() {
            left -= size * advance(c);
            if left < 0.0 {
                break;
            }
            if c == ' ' {
                cut = Some(at);
            }
            end = at + c.len_utf8();
        }
        // A single word that is too long is broken where the room ends; at least one letter goes on a line.
        let first = rest.chars().next().map_or(1, char::len_utf8);
        let end = cut.unwrap_or(end.max(first));
        lines.push(rest[..end].to_owned());
        rest = rest[end..].trim_start();
    }
    lines
}

fn one_line(text: &str) -> String {
    let mut line = String::with_capacity(text.len().min(1024));
    // Longer than any picture has room for; the rest need not be looked at.
    for word in text.split_whitespace().take(400) {
        if !line.is_empty() {
            line.push(' ');
        }
        line.extend(word.chars().take(400));
    }
    line
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn cut_text_fits() {
        for text in ["short", "a rather long label for one curve of a chart", "ωωωωωωωωωωωωωωω", ""]
        {
            for room in [30.0, 80.0, 500.0] {
                assert!(width(&fitted(text, 12.0, room), 12.0) <= room, "{text} {room}");
            }
        }
        assert_eq!(fitted(" two\n words ", 12.0, 200.0), "two words");
    }

    #[test]
    fn wrapped_text_keeps_every_word_while_there_are_lines() {
        let text = "the liquid runs down the outside of the vessel";
        let lines = wrapped(text, 12.0, 100.0, 20);
        assert!(lines.len() > 2 && lines.iter().all(|line| width(line, 12.0) <= 100.0));
        assert_eq!(lines.join(" "), text);
        let cut = wrapped(text, 12.0, 100.0, 2);
        assert!(cut.len() == 2 && cut[1].ends_with('…'));
        assert_eq!(wrapped(&"x".repeat(50), 12.0, 100.0, 9).concat(), "x".repeat(50));
    }
}
