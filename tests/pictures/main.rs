//! Every kind of picture, at ordinary and at extreme inputs: well-formed, described, nothing of it outside the sheet, the same bytes each time.
//!
//! To look at them: `DRIBBLE_RISK_GALLERY=<folder> cargo test --test pictures` writes them there.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic, clippy::disallowed_methods)]

mod curves;
mod lips;
mod maps;
mod others;
mod sweeps;

use roxmltree::{Document, Node};

/// A name for the file, and the picture.
pub type Picture = (String, String);

fn gallery() -> Vec<Picture> {
    [curves::all(), lips::all(), maps::all(), others::all(), sweeps::all()].concat()
}

#[test]
fn pictures_are_sound() {
    let pictures = gallery();
    if let Some(folder) = std::env::var_os("DRIBBLE_RISK_GALLERY") {
        std::fs::create_dir_all(&folder).unwrap();
        for (name, svg) in &pictures {
            std::fs::write(std::path::Path::new(&folder).join(format!("{name}.svg")), svg).unwrap();
        }
    }
    for (name, svg) in &pictures {
        sound(name, svg);
    }
    let again = gallery();
    for ((name, first), (_, second)) in pictures.iter().zip(&again) {
        assert_eq!(first, second, "{name} differs from one time to the next");
    }
}

fn sound(name: &str, svg: &str) {
    let document = Document::parse(svg).unwrap_or_else(|e| panic!("{name}: {e}"));
    let root = document.root_element();
    assert_eq!((root.tag_name().name(), root.attribute("role")), ("svg", Some("img")), "{name}");
    let size: Vec<f64> = root.attribute("viewBox").unwrap().split(' ').map(|n| n.parse().unwrap()).collect();
    assert_eq!(root.attribute("width").unwrap().parse::<f64>().unwrap(), size[2], "{name}");
    assert_eq!(root.attribute("height").unwrap().parse::<f64>().unwrap(), size[3], "{name}");
    let children: Vec<_> = root.children().map(|n| n.tag_name().name()).collect();
    assert_eq!(children[..2], ["title", "desc"], "{name}");
    for described in root.children().take(2) {
        assert!(!described.text().unwrap_or_default().is_empty(), "{name}: {described:?}");
    }
    for node in document.descendants().filter(Node::is_element) {
        element(name, node, size[2], size[3]);
    }
    assert!(svg.len() < 3_000_000, "{name} is {} bytes", svg.len());
}

fn element(name: &str, node: Node<'_, '_>, width: f64, height: f64) {
    let tag = node.tag_name().name();
    let known = ["svg", "title", "desc", "defs", "pattern", "rect", "path", "line", "circle", "text", "g"];
    assert!(known.contains(&tag), "{name}: <{tag}>");
    for attribute in node.attributes() {
        assert!(!attribute.name().starts_with("on") && attribute.name() != "href", "{name}: {attribute:?}");
        assert!(
            !attribute.value().contains("NaN") && !attribute.value().contains("inf"),
            "{name}: {attribute:?}"
        );
    }
    // What is not cut off by a nested picture must stand on the sheet.
    let nested =
        node.ancestors().skip(1).any(|a| a.tag_name().name() == "svg" && a.parent_element().is_some());
    let inside = |x: f64, y: f64| {
        assert!(
            nested || ((-1.0..=width + 1.0).contains(&x) && (-1.0..=height + 1.0).contains(&y)),
            "{name}: <{tag}> at {x} {y} stands outside {width} {height}: {:?}",
            node.text()
        );
    };
    let get = |key: &str| node.attribute(key).map_or(0.0, |v| v.parse::<f64>().unwrap());
    match tag {
        "line" => {
            inside(get("x1"), get("y1"));
            inside(get("x2"), get("y2"));
        }
        "circle" => inside(get("cx"), get("cy")),
        "text" => {
            let letters = node.text().unwrap_or_default().chars().count() as f64;
            let (x, y, size) = (get("x"), get("y"), get("font-size"));
            // Half an em a letter: what a usual sans-serif takes.
            let long = 0.5 * size * letters;
            let (before, after) = match node.attribute("text-anchor") {
                Some("middle") => (0.5 * long, 0.5 * long),
                Some("end") => (long, 0.0),
                _ => (0.0, long),
            };
            if node.attribute("transform").is_some() {
                inside(x, y + before);
                inside(x, y - after);
            } else {
                inside(x - before, y);
                inside(x + after, y);
            }
        }
        "path" if node.parent_element().is_none_or(|p| p.tag_name().name() != "pattern") => {
            let numbers: Vec<f64> = node
                .attribute("d")
                .unwrap()
                .split(|c: char| !(c.is_ascii_digit() || c == '.' || c == '-'))
                .filter(|n| !n.is_empty())
                .map(|n| n.parse().unwrap())
                .collect();
            numbers.chunks(2).for_each(|p| inside(p[0], p[1]));
        }
        _ => {}
    }
}
