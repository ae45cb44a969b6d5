//! Cells as JSON text.

use super::Cells;

/// The cells as items of a JSON list, a comma before each but, if `first`, the first. What a row does not have is null.
#[must_use]
pub fn items(cells: Cells<'_>, first: bool) -> Vec<u8> {
    let mut text = Vec::new();
    match cells {
        Cells::Numbers(numbers) => {
            text.reserve(numbers.len() * 20);
            let mut buffer = zmij::Buffer::new();
            for number in numbers {
                text.push(b',');
                if number.is_finite() {
                    text.extend_from_slice(buffer.format_finite(*number).as_bytes());
                } else {
                    text.extend_from_slice(b"null");
                }
            }
        }
        Cells::Nothing(rows) => text = b",null".repeat(rows),
        Cells::Words(words) => {
            text.reserve(words.len() * 12);
            for word in words {
                // The service's own words need no escapes.
                match word {
                    Some(word) => {
                        text.extend_from_slice(b",\"");
                        text.extend_from_slice(word.as_bytes());
                        text.push(b'"');
                    }
                    None => text.extend_from_slice(b",null"),
                }
            }
        }
    }
    if first && !text.is_empty() {
        text.remove(0);
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pieces_join_into_one_list() {
        let text = [
            items(Cells::Numbers(&[1.0, f64::NAN]), true),
            items(Cells::Numbers(&[-0.25]), false),
            items(Cells::Words(&[Some("clean"), None]), false),
        ];
        let text = format!("[{}]", String::from_utf8(text.concat()).unwrap());
        let read: serde_json::Value = serde_json::from_str(&text).unwrap();
        assert_eq!(read, serde_json::json!([1.0, null, -0.25, "clean", null]));
    }
}
