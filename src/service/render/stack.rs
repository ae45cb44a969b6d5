//! Several pictures one below the other, as one.

use std::fmt::Write as _;

/// The pictures, each as this module's siblings write it, one below the other.
#[must_use]
pub fn stack(pictures: &[String]) -> String {
    let sizes: Vec<[f64; 2]> =
        pictures.iter().map(|p| [size(p, " width=\""), size(p, " height=\"")]).collect();
    let width = sizes.iter().map(|s| s[0]).fold(0.0, f64::max);
    let height: f64 = sizes.iter().map(|s| s[1]).sum();
    let mut out = String::with_capacity(pictures.iter().map(String::len).sum::<usize>() + 512);
    let _ = write!(
        out,
        "<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\"><rect width=\"{width}\" height=\"{height}\" fill=\"#fff\"/>"
    );
    let mut top = 0.0;
    for (i, (picture, [_, height])) in pictures.iter().zip(&sizes).enumerate() {
        // Names of patterns must differ between the pictures of one document.
        let own = picture
            .replace("id=\"lines-", &format!("id=\"p{i}-lines-"))
            .replace("url(#lines-", &format!("url(#p{i}-lines-"));
        out.push_str(&own.replacen("<svg ", &format!("<svg y=\"{top}\" "), 1));
        top += height;
    }
    out.push_str("</svg>\n");
    out
}

/// A number of the picture's own head.
fn size(picture: &str, name: &str) -> f64 {
    let after = picture.split_once(name).map_or("", |(_, rest)| rest);
    after.split('"').next().and_then(|text| text.parse().ok()).unwrap_or(0.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pictures_stand_below_one_another_under_names_of_their_own() {
        let picture = |w: u32, h: u32| {
            format!(
                "<svg xmlns=\"x\" role=\"img\" width=\"{w}\" height=\"{h}\"><pattern id=\"lines-wide\"/><rect fill=\"url(#lines-wide)\"/></svg>\n"
            )
        };
        let whole = stack(&[picture(100, 40), picture(80, 50)]);
        assert!(
            whole.starts_with("<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"100\" height=\"90\""),
            "{whole}"
        );
        assert!(whole.contains("<svg y=\"40\" xmlns=\"x\""));
        assert!(whole.contains("id=\"p1-lines-wide\"") && whole.contains("url(#p1-lines-wide)"));
        assert!(!whole.contains("id=\"lines-wide\""));
    }
}
