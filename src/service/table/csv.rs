//! Comma-separated values (RFC 4180): a line of names, which carry the units, then a line for each row. What a row does not have is left empty.

use super::{Cells, Head};

/// What is said of it on its way out (RFC 4180, 3).
pub const CONTENT_TYPE: &str = "text/csv; charset=utf-8; header=present";

/// The line of names.
#[must_use]
pub fn header(heads: &[Head]) -> Vec<u8> {
    let names: Vec<&str> = heads.iter().map(|head| head.name).collect();
    (names.join(",") + "\r\n").into_bytes()
}

/// The lines of `rows` rows. Words are the service's own and hold neither commas nor quotes; numbers are the shortest that read back the same.
#[must_use]
pub fn lines(columns: &[Cells<'_>], rows: usize) -> Vec<u8> {
    let mut text = Vec::with_capacity(rows * columns.len() * 20);
    let mut buffer = zmij::Buffer::new();
    for row in 0..rows {
        for (i, column) in columns.iter().enumerate() {
            if i > 0 {
                text.push(b',');
            }
            match column {
                Cells::Numbers(numbers) => {
                    if let Some(number) = numbers.get(row).filter(|number| number.is_finite()) {
                        text.extend_from_slice(buffer.format_finite(*number).as_bytes());
                    }
                }
                Cells::Nothing(_) => {}
                Cells::Words(words) => {
                    text.extend_from_slice(words.get(row).copied().flatten().unwrap_or_default().as_bytes());
                }
            }
        }
        text.extend_from_slice(b"\r\n");
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn empty_cells_stay_empty() {
        let columns = [Cells::Numbers(&[0.5, f64::NAN, 1e-7]), Cells::Words(&[None, Some("freezes"), None])];
        let text = String::from_utf8(lines(&columns, 3)).unwrap();
        assert_eq!(text, "0.5,\r\n,freezes\r\n1e-7,\r\n");
    }
}
