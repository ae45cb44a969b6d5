//! Histograms, bars, probabilities, panels, vessels.

use dribble_risk::service::render::{
    Axis, Bar, BarChart, CurvePoint, Heading, Histogram, Limit, Mark, Panel, Panels, ProbabilityChart, Scale,
    Seen, Side, Span, VesselMoment, VesselPicture, VesselStream, bars, histogram, panels, probability,
    vessel,
};

use crate::Picture;

const fn heading(title: &str) -> Heading<'_> {
    Heading {
        title,
        subtitle: "An invented 1.2 L jug; water at 20 °C",
        note: "dribble-risk 0.1.0, set-1, fingerprint 0123456789abcdef",
    }
}

const fn linear<'a>(name: &'a str, unit: &'a str) -> Axis<'a> {
    Axis { name, unit, scale: Scale::Linear }
}

fn bell(count: usize, low: f64, high: f64) -> (Vec<f64>, Vec<f64>) {
    let edges: Vec<f64> = (0..=count).map(|i| low + (high - low) * i as f64 / count as f64).collect();
    let counts = (0..count)
        .map(|i| {
            let z = 6.0 * (i as f64 + 0.5) / count as f64 - 3.2;
            (4000.0 * (-0.5 * z * z).exp()).round()
        })
        .collect();
    (edges, counts)
}

fn histograms() -> Vec<(&'static str, String)> {
    let (edges, counts) = bell(40, -0.6, 2.4);
    let margin = |limit, marks: &[Mark<'_>]| {
        histogram(&Histogram {
            heading: heading("Margin over 100 000 trials"),
            axis: linear("margin, ln(safety factor)", ""),
            edges: &edges,
            counts: &counts,
            count_name: "trials",
            limit,
            marks,
        })
    };
    let (widths, parts) = bell(14, 0.44, 0.56);
    let radii = |limit| {
        histogram(&Histogram {
            heading: heading("Edge radius of 120 parts"),
            axis: linear("edge radius", "mm"),
            edges: &widths,
            counts: &parts,
            count_name: "parts",
            limit,
            marks: &[Mark { at: 0.497, label: "mean" }, Mark { at: 0.499, label: "median" }],
        })
    };
    let zero = Limit { at: 0.0, good: Side::Above, label: "dribbles below", guarded: None };
    let upper = Limit { at: 0.54, good: Side::Below, label: "limit", guarded: Some(0.532) };
    let far =
        Limit { at: 40.0, good: Side::Below, label: &"a limit far away ".repeat(9), guarded: Some(39.0) };
    vec![
        ("histogram-margin", margin(Some(zero), &[Mark { at: 0.9, label: "median" }])),
        ("histogram-limit", radii(Some(upper))),
        ("histogram-far-limit", radii(Some(far))),
        (
            "histogram-one",
            histogram(&Histogram {
                heading: heading("One part"),
                axis: linear("edge radius", "mm"),
                edges: &[0.5, 0.5],
                counts: &[1.0],
                count_name: "parts",
                limit: None,
                marks: &[],
            }),
        ),
        (
            "histogram-empty",
            histogram(&Histogram {
                heading: heading("Nothing counted"),
                axis: linear(&"a long name ".repeat(30), "mm"),
                edges: &[],
                counts: &[],
                count_name: &"many words ".repeat(30),
                limit: Some(upper),
                marks: &[],
            }),
        ),
    ]
}

fn all_bars() -> Vec<(&'static str, String)> {
    let values = [
        [[0.41, 0.39, 0.43], [0.44, 0.42, 0.46]],
        [[0.35, 0.33, 0.37], [0.36, 0.34, 0.38]],
        [[0.12, 0.10, 0.14], [0.15, 0.13, 0.17]],
        [[0.004, -0.01, 0.02], [0.01, 0.0, 0.02]],
    ];
    let names = [
        "/surface/measured/advancing_deg",
        "/pour/flow_ml_s",
        "/lip/edge/rounded/radius_mm",
        "/lip/edge/rounded/turn_deg",
    ];
    let drivers: Vec<Bar<'_>> =
        names.iter().zip(&values).map(|(label, values)| Bar { label, values }).collect();
    let signed = [[[-0.8, f64::NAN, f64::NAN]], [[0.31, f64::NAN, f64::NAN]], [[-0.02, f64::NAN, f64::NAN]]];
    let signed: Vec<Bar<'_>> =
        names.iter().zip(&signed).map(|(label, values)| Bar { label, values }).collect();
    let one = [[1e-9, f64::NAN, f64::NAN]];
    let long = "/a/pointer/that/goes/on/<and>/on".repeat(8);
    let many = vec![Bar { label: &long, values: &one }; 40];
    let draw = |title, series: &[&str], bars_of: &[Bar<'_>]| {
        bars(&BarChart {
            heading: heading(title),
            axis: linear("share of the variance", ""),
            series,
            bars: bars_of,
        })
    };
    vec![
        ("bars-drivers", draw("What drives the margin", &["first order", "total"], &drivers)),
        ("bars-signed", draw("Sensitivities", &["per standard uncertainty"], &signed)),
        ("bars-many", draw("Many inputs", &[], &many)),
        ("bars-none", draw("No inputs", &["first order", "total"], &[])),
    ]
}

fn probabilities() -> Vec<(&'static str, String)> {
    let characteristic: Vec<[f64; 4]> = (0..80)
        .map(|i| {
            let p = f64::from(i) / 79.0 * 0.2;
            [p, 1.0 / (1.0 + ((p - 0.055) / 0.012).exp()), f64::NAN, f64::NAN]
        })
        .collect();
    let clean: Vec<[f64; 4]> = (0..60)
        .map(|i| {
            let x = 0.5 + f64::from(i) * 0.06;
            let p = |shift: f64| 1.0 / (1.0 + (-(x - 2.2 + shift) / 0.25).exp());
            [x, p(0.0), p(-0.3), p(0.3)]
        })
        .collect();
    let mut seen = vec![
        Seen::Onset { at: 2.3, standard_uncertainty: 0.1 },
        Seen::Bracket { dribbled: 2.0, clean: 2.4 },
        Seen::Bracket { dribbled: 1.7, clean: 2.6 },
    ];
    for i in 0..24 {
        let x = 0.8 + f64::from(i) * 0.13;
        seen.push(if x > 2.3 { Seen::Clean(x) } else { Seen::Dribbled(x) });
    }
    let draw =
        |title, points: &[[f64; 4]], marked: &[(f64, f64, &str)], limits: &[Mark<'_>], seen: &[Seen], x| {
            probability(&ProbabilityChart {
                heading: heading(title),
                x,
                of: "probability",
                points,
                marked,
                limits,
                seen,
            })
        };
    let fraction = linear("fraction nonconforming", "");
    let weber = linear("ln of the Weber number", "");
    vec![
        (
            "probability-characteristic",
            draw(
                "Operating characteristic of the plan",
                &characteristic,
                &[(0.01, 0.95, "producer"), (0.06, 0.1, "consumer")],
                &[],
                &[],
                fraction,
            ),
        ),
        (
            "probability-clean",
            draw(
                "Probability of a clean pour, with what the bench saw",
                &clean,
                &[],
                &[Mark { at: 2.2, label: "threshold" }],
                &seen,
                weber,
            ),
        ),
        ("probability-all-clean", draw("All clean", &clean[50..], &[], &[], &[Seen::Clean(3.6); 3], weber)),
        ("probability-nothing", draw("Nothing", &[], &[], &[], &[], fraction)),
        (
            "probability-edge",
            draw(
                "Marks at the edges",
                &[[0.0, 1.0, f64::NAN, f64::NAN]],
                &[(0.2, 0.0, &"a long meaning ".repeat(20)), (0.0, 1.0, "at once")],
                &[Mark { at: 0.1, label: &"long ".repeat(90) }],
                &[],
                fraction,
            ),
        ),
    ]
}

fn all_panels() -> Vec<(&'static str, String)> {
    let row = |of: &dyn Fn(f64) -> f64, spread: f64| -> Vec<CurvePoint> {
        (0..200)
            .map(|i| {
                let x = f64::from(i) * 0.05;
                let y = of(x);
                CurvePoint { x, y, low: y / spread, high: y * spread, verdict: None }
            })
            .collect()
    };
    let pour = |t: f64| if (1.5..8.5).contains(&t) { 40.0 * (1.0 - ((t - 5.0) / 3.5).powi(2)) } else { 0.0 };
    let tilt = row(&|t| (t * 20.0).min(72.0).min((10.0 - t) * 45.0), 1.0);
    let flow = row(&pour, 1.0);
    let factor = row(&|t| if pour(t) > 0.2 { (pour(t) / 18.0).powi(2) } else { f64::NAN }, 1.6);
    let time = linear("time", "s");
    let sheet = |list: &[Panel<'_>], spans: &[Span<'_>], moments: &[Mark<'_>]| {
        panels(&Panels { heading: heading("One pour"), x: time, panels: list, spans, moments })
    };
    let three = [
        Panel { axis: linear("tilt", "deg"), points: &tilt, level: None },
        Panel {
            axis: linear("flow", "mL/s"),
            points: &flow,
            level: Some(Mark { at: 18.0, label: "onset of dribbling" }),
        },
        Panel {
            axis: Axis { name: "safety factor", unit: "", scale: Scale::Log },
            points: &factor,
            level: Some(Mark { at: 1.0, label: "threshold" }),
        },
    ];
    let spans =
        [Span { from: 1.5, to: 2.45, label: "dribbles" }, Span { from: 7.55, to: 8.5, label: "dribbles" }];
    let long = "a long word ".repeat(20);
    let nothing = [Panel { axis: linear(&long, &long), points: &[], level: None }; 3];
    vec![
        (
            "panels-pour",
            sheet(
                &three,
                &spans,
                &[Mark { at: 5.0, label: "peak" }, Mark { at: 8.4, label: "last drop hangs" }],
            ),
        ),
        ("panels-clean", sheet(&three, &[], &[])),
        (
            "panels-nothing",
            sheet(
                &nothing,
                &[Span { from: -5.0, to: 50.0, label: &long }],
                &[Mark { at: 0.5, label: &long }],
            ),
        ),
    ]
}

fn vessels() -> Vec<(&'static str, String)> {
    let upright = [[-45.0, 150.0], [-45.0, 0.0], [45.0, 0.0], [45.0, 135.0], [58.0, 150.0]];
    let turned = |degrees: f64| {
        let (sine, cosine) = degrees.to_radians().sin_cos();
        upright.map(|[x, y]: [f64; 2]| [x * cosine + y * sine, -x * sine + y * cosine])
    };
    let walls = [0.0, 30.0, 55.0, 80.0].map(turned);
    let captions = ["0 s, upright", "2 s, 30°", "4.5 s, 55°: clean", "8.2 s, 80°: runs down the outside"];
    let streams = [VesselStream::None, VesselStream::None, VesselStream::Leaves, VesselStream::Dribbles];
    let moments: Vec<VesselMoment<'_>> = (0..4)
        .map(|i| {
            let lip = walls[i][4];
            let level = if i == 0 { 110.0 } else { lip[1] + [0.0, -12.0, 4.0, 1.0][i] };
            VesselMoment {
                caption: captions[i],
                wall: &walls[i],
                level: Some(level),
                lip: Some(lip),
                stream: streams[i],
            }
        })
        .collect();
    let draw = |moments: &[VesselMoment<'_>]| {
        vessel(&VesselPicture { heading: heading("The jug as it is tilted"), moments })
    };
    let many: Vec<_> = (0..15).map(|i| moments[i % 4]).collect();
    let long = "caption ".repeat(40);
    let odd = [
        VesselMoment {
            caption: &long,
            wall: &[],
            level: Some(3.0),
            lip: None,
            stream: VesselStream::Dribbles,
        },
        VesselMoment {
            caption: "a line",
            wall: &[[0.0, 0.0], [1e-3, 0.0]],
            level: None,
            lip: Some([0.0, 0.0]),
            stream: VesselStream::Dribbles,
        },
    ];
    vec![
        ("vessel-four", draw(&moments)),
        ("vessel-one", draw(&moments[3..])),
        ("vessel-many", draw(&many)),
        ("vessel-odd", draw(&odd)),
        ("vessel-none", draw(&[])),
    ]
}

pub fn all() -> Vec<Picture> {
    let all = [histograms(), all_bars(), probabilities(), all_panels(), vessels()].concat();
    all.into_iter().map(|(name, svg)| (name.to_owned(), svg)).collect()
}
