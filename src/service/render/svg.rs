//! Writing SVG: elements, escaped text, and the few fills and strokes that the pictures share.
//!
//! Everything is chosen to be told apart in grey: fills differ in lightness or hatching, lines in dash and weight. Nothing is fetched, nothing runs:
//! a generic font family, no script, no style sheet, no link.

use std::fmt::Write as _;

use super::text;

/// Colour of lines and letters.
pub(super) const INK: &str = "#1a1a1a";
/// Colour of what stands back: grid, guides, notes. Dark enough to be read as small letters on white (contrast 5.7 : 1).
pub(super) const QUIET: &str = "#636363";
/// Grid lines.
pub(super) const GRID: &str = "#dcdcdc";
/// Outline of liquid.
pub(super) const LIQUID_EDGE: &str = "#1d5c85";
/// The asked point: reddish, dark, and always of its own shape.
pub(super) const ASKED: &str = "#b3261e";

/// How an area is filled.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Fill {
    /// Not at all.
    None,
    /// White.
    White,
    /// A plain colour.
    Colour(&'static str),
    /// A grey of this lightness, 0 (black) to 255 (white).
    Grey(u8),
    /// Liquid: pale blue, light grey in grey print.
    Liquid,
    /// Uncertainty bands: seen through, so that bands may cross.
    Band,
    /// Wide, light slanting lines: neither can be said.
    Marginal,
    /// Close, dark slanting lines the other way: the liquid runs down.
    Dribbles,
    /// Section-lining of cut solid.
    Solid,
    /// Crossed lines: nothing is known here.
    Missing,
}

impl Fill {
    fn write(self, out: &mut String) {
        let _ = match self {
            Self::None => write!(out, " fill=\"none\""),
            Self::White => write!(out, " fill=\"#fff\""),
            Self::Colour(colour) => write!(out, " fill=\"{colour}\""),
            Self::Grey(level) => write!(out, " fill=\"#{level:02x}{level:02x}{level:02x}\""),
            Self::Liquid => write!(out, " fill=\"#bcdcf0\""),
            Self::Band => write!(out, " fill=\"#555\" fill-opacity=\"0.16\""),
            Self::Marginal => write!(out, " fill=\"url(#lines-wide)\""),
            Self::Dribbles => write!(out, " fill=\"url(#lines-close)\""),
            Self::Solid => write!(out, " fill=\"url(#lines-solid)\""),
            Self::Missing => write!(out, " fill=\"url(#lines-crossed)\""),
        };
    }

    /// The pattern it needs: name, tile size, background, strokes.
    fn pattern(self) -> Option<&'static str> {
        match self {
            Self::Marginal => Some(
                r##"<pattern id="lines-wide" width="9" height="9" patternUnits="userSpaceOnUse"><path d="M-1 1L1 -1M0 9L9 0M8 10L10 8" stroke="#a8a8a8" stroke-width="0.8"/></pattern>"##,
            ),
            Self::Dribbles => Some(
                r##"<pattern id="lines-close" width="5" height="5" patternUnits="userSpaceOnUse"><rect width="5" height="5" fill="#e2e2e2"/><path d="M-1 4L1 6M0 0L5 5M4 -1L6 1" stroke="#6e6e6e" stroke-width="1"/></pattern>"##,
            ),
            Self::Solid => Some(
                r##"<pattern id="lines-solid" width="8" height="8" patternUnits="userSpaceOnUse"><rect width="8" height="8" fill="#f4f2ee"/><path d="M-1 1L1 -1M0 8L8 0M7 9L9 7" stroke="#4a4a4a" stroke-width="0.7"/></pattern>"##,
            ),
            Self::Missing => Some(
                r##"<pattern id="lines-crossed" width="8" height="8" patternUnits="userSpaceOnUse"><rect width="8" height="8" fill="#fff"/><path d="M0 0L8 8M0 8L8 0" stroke="#777" stroke-width="0.7"/></pattern>"##,
            ),
            Self::None | Self::White | Self::Colour(_) | Self::Grey(_) | Self::Liquid | Self::Band => None,
        }
    }
}

/// How a line is drawn.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Stroke {
    pub colour: &'static str,
    pub width: f64,
    /// Dash pattern in widths of the picture's unit; empty: unbroken.
    pub dash: &'static str,
}

impl Stroke {
    pub(super) const fn new(colour: &'static str, width: f64) -> Self {
        Self { colour, width, dash: "" }
    }

    pub(super) const fn dashed(self, dash: &'static str) -> Self {
        Self { dash, ..self }
    }

    fn write(&self, out: &mut String) {
        let _ = write!(out, " stroke=\"{}\" stroke-width=\"{}\"", self.colour, number(self.width));
        if !self.dash.is_empty() {
            let _ = write!(out, " stroke-dasharray=\"{}\"", self.dash);
        }
    }
}

/// Where a text stands about its point.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Anchor {
    Start,
    Middle,
    End,
}

/// How a text is set.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Letters {
    pub size: f64,
    pub anchor: Anchor,
    pub bold: bool,
    pub colour: &'static str,
    /// White round the letters, so that they can be read on lines and greys.
    pub halo: bool,
    /// Turned a quarter to the left: reads upwards.
    pub upwards: bool,
}

impl Letters {
    pub(super) const fn new(size: f64) -> Self {
        Self { size, anchor: Anchor::Start, bold: false, colour: INK, halo: false, upwards: false }
    }
    pub(super) const fn middle(self) -> Self {
        Self { anchor: Anchor::Middle, ..self }
    }
    pub(super) const fn end(self) -> Self {
        Self { anchor: Anchor::End, ..self }
    }
    pub(super) const fn bold(self) -> Self {
        Self { bold: true, ..self }
    }
    pub(super) const fn colour(self, colour: &'static str) -> Self {
        Self { colour, ..self }
    }
    pub(super) const fn halo(self) -> Self {
        Self { halo: true, ..self }
    }
    pub(super) const fn upwards(self) -> Self {
        Self { upwards: true, ..self }
    }
}

/// A picture being written.
#[derive(Debug)]
pub(super) struct Svg {
    width: f64,
    height: f64,
    body: String,
    patterns: Vec<&'static str>,
}

impl Svg {
    pub(super) fn new(width: f64, height: f64) -> Self {
        Self { width, height, body: String::with_capacity(16 * 1024), patterns: Vec::new() }
    }

    /// The whole document, with its title and description for those who cannot see it.
    pub(super) fn finish(self, title: &str, description: &str) -> String {
        let (width, height) = (number(self.width), number(self.height));
        let mut out = String::with_capacity(self.body.len() + 2048);
        let _ = write!(
            out,
            "<svg xmlns=\"http://www.w3.org/2000/svg\" role=\"img\" width=\"{width}\" height=\"{height}\" viewBox=\"0 0 {width} {height}\" font-family=\"sans-serif\">"
        );
        let _ = write!(out, "<title>{}</title><desc>{}</desc>", escaped(title), escaped(description));
        if !self.patterns.is_empty() {
            out.push_str("<defs>");
            self.patterns.iter().for_each(|pattern| out.push_str(pattern));
            out.push_str("</defs>");
        }
        let _ = write!(out, "<rect width=\"{width}\" height=\"{height}\" fill=\"#fff\"/>");
        out.push_str(&self.body);
        out.push_str("</svg>\n");
        out
    }

    fn paint(&mut self, fill: Fill, stroke: Option<Stroke>) {
        if let Some(pattern) = fill.pattern()
            && !self.patterns.contains(&pattern)
        {
            self.patterns.push(pattern);
        }
        fill.write(&mut self.body);
        if let Some(stroke) = stroke {
            stroke.write(&mut self.body);
        }
        self.body.push_str("/>");
    }

    pub(super) fn line(&mut self, from: [f64; 2], to: [f64; 2], stroke: Stroke) {
        let [x1, y1, x2, y2] = [from[0], from[1], to[0], to[1]].map(number);
        let _ = write!(self.body, "<line x1=\"{x1}\" y1=\"{y1}\" x2=\"{x2}\" y2=\"{y2}\"");
        stroke.write(&mut self.body);
        self.body.push_str("/>");
    }

    pub(super) fn polyline(&mut self, points: &[[f64; 2]], stroke: Stroke) {
        if points.len() < 2 {
            return;
        }
        self.body.push_str("<path stroke-linejoin=\"round\" d=\"");
        trace(&mut self.body, points);
        self.body.push('"');
        self.paint(Fill::None, Some(stroke));
    }

    pub(super) fn polygon(&mut self, points: &[[f64; 2]], fill: Fill, stroke: Option<Stroke>) {
        self.polygons(&[points.to_vec()], fill, stroke);
    }

    /// Several polygons as one shape, so that no seams show between neighbours.
    pub(super) fn polygons(&mut self, polygons: &[Vec<[f64; 2]>], fill: Fill, stroke: Option<Stroke>) {
        if polygons.iter().all(|points| points.len() < 3) {
            return;
        }
        self.body.push_str("<path stroke-linejoin=\"round\" d=\"");
        for points in polygons.iter().filter(|points| points.len() > 2) {
            trace(&mut self.body, points);
            self.body.push('Z');
        }
        self.body.push('"');
        self.paint(fill, stroke);
    }

    pub(super) fn rect(&mut self, corner: [f64; 2], size: [f64; 2], fill: Fill, stroke: Option<Stroke>) {
        let [x, y, width, height] = [corner[0], corner[1], size[0].max(0.0), size[1].max(0.0)].map(number);
        let _ = write!(self.body, "<rect x=\"{x}\" y=\"{y}\" width=\"{width}\" height=\"{height}\"");
        self.paint(fill, stroke);
    }

    pub(super) fn circle(&mut self, centre: [f64; 2], radius: f64, fill: Fill, stroke: Option<Stroke>) {
        let [x, y, r] = [centre[0], centre[1], radius].map(number);
        let _ = write!(self.body, "<circle cx=\"{x}\" cy=\"{y}\" r=\"{r}\"");
        self.paint(fill, stroke);
    }

    pub(super) fn text(&mut self, at: [f64; 2], text: &str, letters: Letters) {
        if text.is_empty() {
            return;
        }
        let [x, y, size] = [at[0], at[1], letters.size].map(number);
        let _ =
            write!(self.body, "<text x=\"{x}\" y=\"{y}\" font-size=\"{size}\" fill=\"{}\"", letters.colour);
        match letters.anchor {
            Anchor::Start => {}
            Anchor::Middle => self.body.push_str(" text-anchor=\"middle\""),
            Anchor::End => self.body.push_str(" text-anchor=\"end\""),
        }
        if letters.bold {
            self.body.push_str(" font-weight=\"bold\"");
        }
        if letters.halo {
            self.body.push_str(
                " paint-order=\"stroke\" stroke=\"#fff\" stroke-width=\"3.5\" stroke-linejoin=\"round\"",
            );
        }
        if letters.upwards {
            let _ = write!(self.body, " transform=\"rotate(-90 {x} {y})\"");
        }
        let _ = write!(self.body, ">{}</text>", escaped(text));
    }

    /// Draws what `inside` draws, cut off at this box. (A nested picture needs no identifier, so that several pictures can stand in one page.)
    pub(super) fn clipped(&mut self, corner: [f64; 2], size: [f64; 2], inside: impl FnOnce(&mut Self)) {
        let [x, y, width, height] = [corner[0], corner[1], size[0], size[1]].map(number);
        let _ = write!(
            self.body,
            "<svg x=\"{x}\" y=\"{y}\" width=\"{width}\" height=\"{height}\" viewBox=\"{x} {y} {width} {height}\" overflow=\"hidden\">"
        );
        inside(self);
        self.body.push_str("</svg>");
    }

    /// A straight arrow with its head at `to`.
    pub(super) fn arrow(&mut self, from: [f64; 2], to: [f64; 2], stroke: Stroke) {
        let (dx, dy) = (to[0] - from[0], to[1] - from[1]);
        let length = (dx * dx + dy * dy).sqrt();
        if length < 1.0 {
            return;
        }
        let (ux, uy) = (dx / length, dy / length);
        let back = [to[0] - 7.0 * ux, to[1] - 7.0 * uy];
        self.line(from, back, stroke);
        let side = |s: f64| [back[0] - s * uy, back[1] + s * ux];
        self.polygon(&[to, side(2.6), side(-2.6)], Fill::Colour(stroke.colour), None);
    }
}

fn trace(out: &mut String, points: &[[f64; 2]]) {
    for (index, [x, y]) in points.iter().enumerate() {
        let _ = write!(out, "{}{} {}", if index == 0 { 'M' } else { 'L' }, number(*x), number(*y));
    }
}

/// A coordinate, to a hundredth. What is not finite cannot be drawn and is put far outside.
pub(super) fn number(value: f64) -> String {
    let value = if value.is_finite() { value.clamp(-1e5, 1e5) } else { -1e5 };
    let text = format!("{value:.2}");
    let text = text.trim_end_matches('0').trim_end_matches('.');
    if text == "-0" { "0".to_owned() } else { text.to_owned() }
}

/// Text with XML's own characters escaped, and what XML forbids or what reorders a line shown as a replacement character.
pub(super) fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len() + 8);
    for c in text.chars() {
        match c {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\'' => out.push_str("&#39;"),
            c if text::forbidden(c) => out.push('\u{fffd}'),
            c => out.push(c),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn text_cannot_leave_its_element() {
        let text = "a</title><script>x()</script> & \"q\" 'r' ]]> \u{0} \u{1b} \u{202e} \u{ffff}";
        assert_eq!(
            escaped(text),
            "a&lt;/title&gt;&lt;script&gt;x()&lt;/script&gt; &amp; &quot;q&quot; &#39;r&#39; ]]&gt; \u{fffd} \u{fffd} \u{fffd} \u{fffd}"
        );
    }

    #[test]
    fn coordinates_are_short_and_finite() {
        for (value, text) in [
            (1.0, "1"),
            (-0.001, "0"),
            (2.345678, "2.35"),
            (10.0, "10"),
            (1e300, "100000"),
            (f64::NAN, "-100000"),
            (f64::INFINITY, "-100000"),
        ] {
            assert_eq!(number(value), text);
        }
    }
}
