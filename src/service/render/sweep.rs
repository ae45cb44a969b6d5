//! A sweep's table as a picture: one axis makes a curve, two make a map, and where one of two has few values, a curve for each of them.

use super::{
    axis::{Axis, Scale},
    curve::{Curve, CurveChart, CurvePoint, Mark, curve},
    map::{Boundary, Dark, MOST_MAP_POINTS, MapChart, map, round_levels},
    number::{percent, with_unit},
    page::Heading,
};
use crate::{
    analysis::{decision::Verdict, sweep::PictureTable},
    physics::{numerics::normal_quantile, separation::numbers::FREE_SHEET_WEBER},
};

/// A table to be drawn. All columns have one row for each combination of the axes, the first axis slowest.
#[derive(Debug, Clone, Copy)]
pub struct SweepTable<'a> {
    /// The words below the title: conditions, and the model in the note. The title is made here when it is empty.
    pub heading: Heading<'a>,
    /// One or two axes.
    pub axes: &'a [SweepAxis<'a>],
    /// What is drawn.
    pub quantity: Drawn,
    /// Safety factor; not finite at a point without an answer.
    pub safety_factor: &'a [f64],
    /// Lower end of its interval.
    pub low: &'a [f64],
    /// Upper end of its interval.
    pub high: &'a [f64],
    /// Dribble probability.
    pub dribble_probability: &'a [f64],
    /// Weber number, where the caller has it: the map then shows where no free sheet can leave. May be empty.
    pub weber: &'a [f64],
    /// Verdicts; none at a point without an answer.
    pub verdicts: &'a [Option<Verdict>],
    /// Confidence of the verdicts and intervals.
    pub confidence: f64,
    /// The base request's values of the axes, and its safety factor or probability: marked where it lies within the axes.
    pub asked: Option<Asked<'a>>,
}

/// An axis with its values.
#[derive(Debug, Clone, Copy)]
pub struct SweepAxis<'a> {
    /// What it is and how it is divided.
    pub axis: Axis<'a>,
    /// Its values, in the order of the table.
    pub values: &'a [f64],
}

/// What a sweep's picture shows.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Drawn {
    /// The safety factor.
    #[default]
    SafetyFactor,
    /// The dribble probability.
    DribbleProbability,
}

/// The point that the base request stands for.
#[derive(Debug, Clone, Copy)]
pub struct Asked<'a> {
    /// Its values of the axes, in their order.
    pub at: &'a [f64],
    /// Its safety factor.
    pub safety_factor: f64,
    /// Its dribble probability.
    pub dribble_probability: f64,
}

/// Why a table cannot be drawn.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum NotDrawable {
    /// Neither one axis nor two.
    #[error("a picture has one or two axes, not {0}")]
    Axes(usize),
    /// More points than anyone can see.
    #[error("a picture has at most {MOST_MAP_POINTS} points, not {0}")]
    Points(usize),
    /// A column is not as long as the axes say.
    #[error("a column does not fit the axes")]
    Columns,
}

/// Whether a sweep over so many axes with so many points can be drawn: to be asked before it is computed.
///
/// # Errors
/// When it has no axes or more than two, or too many points.
pub const fn drawable(axes: usize, points: usize) -> Result<(), NotDrawable> {
    match axes {
        1 | 2 if points > MOST_MAP_POINTS => Err(NotDrawable::Points(points)),
        1 | 2 => Ok(()),
        _ => Err(NotDrawable::Axes(axes)),
    }
}

/// Draws what [`Sweep::picture_table`](crate::analysis::sweep::Sweep::picture_table) gives.
///
/// # Errors
/// As [`sweep`].
pub fn sweep_picture(
    table: &PictureTable,
    quantity: Drawn,
    heading: Heading<'_>,
) -> Result<String, NotDrawable> {
    let axes: Vec<SweepAxis<'_>> = table
        .axes
        .iter()
        .map(|axis| {
            let named = axis.field.quantity();
            // Negative values can be spaced by ratio too, but have no place on a logarithmic axis.
            let log = axis.is_logarithmic && axis.values.iter().all(|v| *v > 0.0);
            let scale = if log { Scale::Log } else { Scale::Linear };
            SweepAxis { axis: Axis { name: named.name, unit: named.unit, scale }, values: &axis.values }
        })
        .collect();
    sweep(&SweepTable {
        heading,
        axes: &axes,
        quantity,
        safety_factor: &table.safety_factor,
        low: &table.low,
        high: &table.high,
        dribble_probability: &table.dribble_probability,
        weber: &[],
        verdicts: &table.verdicts,
        confidence: table.confidence,
        asked: table.asked.as_ref().map(|point| Asked {
            at: &point.at,
            safety_factor: point.decision.safety_factor(),
            dribble_probability: point.decision.dribble_probability,
        }),
    })
}

/// An axis of up to so many values makes one curve each instead of a map (own judgement: the most that can be told apart at a glance).
pub const FEW: usize = 5;

const SAFETY: Axis<'_> = Axis { name: "safety factor", unit: "", scale: Scale::Log };
const CHANCE: Axis<'_> = Axis { name: "dribble probability", unit: "", scale: Scale::Linear };

/// Draws a sweep's table.
///
/// # Errors
/// When it has no axes or more than two, too many points, or columns that do not fit.
pub fn sweep(table: &SweepTable<'_>) -> Result<String, NotDrawable> {
    let count = table.axes.iter().map(|a| a.values.len()).fold(1, usize::saturating_mul);
    drawable(table.axes.len(), count)?;
    let numbers = [table.safety_factor, table.low, table.high, table.dribble_probability];
    let weber_fits = table.weber.is_empty() || table.weber.len() == count;
    if numbers.iter().any(|column| column.len() != count) || table.verdicts.len() != count || !weber_fits {
        return Err(NotDrawable::Columns);
    }
    match table.axes {
        [x] => Ok(curves(table, x, None)),
        [a, b] if a.values.len() <= FEW && b.values.len() > a.values.len() => Ok(curves(table, b, Some(a))),
        [a, b] if b.values.len() <= FEW => Ok(curves(table, a, Some(b))),
        [a, b] => Ok(field_map(table, a, b)),
        axes => Err(NotDrawable::Axes(axes.len())),
    }
}

/// The order in which values ascend.
fn ascending(values: &[f64]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..values.len()).collect();
    order.sort_by(|a, b| values[*a].total_cmp(&values[*b]));
    order
}

/// The row of the table at these places of its first and second axis.
fn row(table: &SweepTable<'_>, first: usize, second: usize) -> usize {
    first * table.axes.get(1).map_or(1, |axis| axis.values.len()) + second
}

fn title(table: &SweepTable<'_>, over: &str) -> String {
    if table.heading.title.is_empty() {
        let what = match table.quantity {
            Drawn::SafetyFactor => "Safety factor",
            Drawn::DribbleProbability => "Dribble probability",
        };
        format!("{what} {over}")
    } else {
        table.heading.title.to_owned()
    }
}

/// One curve, or one for each value of `family`.
fn curves(table: &SweepTable<'_>, x: &SweepAxis<'_>, family: Option<&SweepAxis<'_>>) -> String {
    let order = ascending(x.values);
    let x_is_first = core::ptr::eq(x, &raw const table.axes[0]);
    let members = family.map_or(1, |f| f.values.len());
    let labels: Vec<String> = family.map_or_else(
        || vec![String::new()],
        |f| f.values.iter().map(|v| with_unit(*v, f.axis.unit)).collect(),
    );
    let points: Vec<Vec<CurvePoint>> = (0..members)
        .map(|member| {
            let at =
                |place: usize| if x_is_first { row(table, place, member) } else { row(table, member, place) };
            order.iter().map(|place| point(table, x.values[*place], at(*place))).collect()
        })
        .collect();
    let curves: Vec<Curve<'_>> =
        labels.iter().zip(&points).map(|(label, points)| Curve { label, points }).collect();
    let over = match family {
        Some(f) => format!("against {}, by {}", x.axis.name, f.axis.name),
        None => format!("against {}", x.axis.name),
    };
    let title = title(table, &over);
    let (y, levels) = match table.quantity {
        Drawn::SafetyFactor => {
            (SAFETY, vec![Mark { at: 1.0, label: "threshold: the stream leaves above, clings below" }])
        }
        Drawn::DribbleProbability => (
            CHANCE,
            vec![
                Mark { at: table.confidence, label: "dribbles above" },
                Mark { at: 1.0 - table.confidence, label: "clean below" },
            ],
        ),
    };
    let place = usize::from(!x_is_first);
    let asked = table.asked.as_ref().and_then(|asked| {
        let value = match table.quantity {
            Drawn::SafetyFactor => asked.safety_factor,
            Drawn::DribbleProbability => asked.dribble_probability,
        };
        within(*asked.at.get(place)?, x.values).map(|at| [at, value])
    });
    curve(&CurveChart {
        heading: Heading { title: &title, ..table.heading },
        x: x.axis,
        y,
        curves: &curves,
        levels: &levels,
        limits: &[],
        asked,
    })
}

fn point(table: &SweepTable<'_>, x: f64, row: usize) -> CurvePoint {
    let (y, low, high) = match table.quantity {
        Drawn::SafetyFactor => (table.safety_factor[row], table.low[row], table.high[row]),
        // A probability is itself the statement of doubt: it has no band.
        Drawn::DribbleProbability => (table.dribble_probability[row], f64::NAN, f64::NAN),
    };
    CurvePoint { x, y, low, high, verdict: table.verdicts[row] }
}

fn within(value: f64, values: &[f64]) -> Option<f64> {
    let low = values.iter().copied().fold(f64::INFINITY, f64::min);
    let high = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    (low..=high).contains(&value).then_some(value)
}

fn field_map(table: &SweepTable<'_>, x: &SweepAxis<'_>, y: &SweepAxis<'_>) -> String {
    let (across, up) = (ascending(x.values), ascending(y.values));
    let rows: Vec<usize> =
        up.iter().flat_map(|second| across.iter().map(move |first| row(table, *first, *second))).collect();
    let of = |column: &[f64]| rows.iter().map(|row| column[*row]).collect::<Vec<f64>>();
    let sorted =
        |axis: &SweepAxis<'_>, order: &[usize]| order.iter().map(|i| axis.values[*i]).collect::<Vec<f64>>();
    let verdicts: Vec<Option<Verdict>> = rows.iter().map(|row| table.verdicts[*row]).collect();
    let chances = of(table.dribble_probability);
    // Probits are straighter between the points than probabilities. Without the Weber number, what is not clean for want of a free sheet is kept on that
    // side of the line; with it, it has a line of its own.
    let weber = if table.weber.is_empty() { Vec::new() } else { of(table.weber) };
    let limit = normal_quantile(table.confidence);
    let probit = |p: f64| if p.is_finite() { normal_quantile(p.clamp(1e-12, 1.0 - 1e-12)) } else { f64::NAN };
    let probits: Vec<f64> = chances
        .iter()
        .zip(&verdicts)
        .map(|(p, verdict)| match verdict {
            Some(Verdict::Marginal) if weber.is_empty() => probit(*p).clamp(-limit + 1e-3, limit - 1e-3),
            _ => probit(*p),
        })
        .collect();
    let (quantity, values, levels, dark) = match table.quantity {
        Drawn::SafetyFactor => {
            let values = of(table.safety_factor);
            let levels = round_levels(&values, Scale::Log, 9);
            (SAFETY, values, levels, Dark::Low)
        }
        Drawn::DribbleProbability => {
            (CHANCE, chances, vec![0.01, 0.05, 0.2, 0.5, 0.8, 0.95, 0.99], Dark::High)
        }
    };
    let title = title(table, &format!("over {} and {}", x.axis.name, y.axis.name));
    let dribbles = format!("dribbles beyond (probability {})", percent(table.confidence));
    let clean = format!("clean beyond (probability {})", percent(1.0 - table.confidence));
    let mut boundaries = vec![
        Boundary { label: &dribbles, values: &probits, level: limit },
        Boundary { label: &clean, values: &probits, level: -limit },
    ];
    if weber.iter().any(|we| *we < FREE_SHEET_WEBER) {
        let label = "no free sheet beyond (Weber number 2): not clean";
        boundaries.push(Boundary { label, values: &weber, level: FREE_SHEET_WEBER });
    }
    let asked = table.asked.as_ref().and_then(|asked| match asked.at {
        [first, second] => Some([within(*first, x.values)?, within(*second, y.values)?]),
        _ => None,
    });
    map(&MapChart {
        heading: Heading { title: &title, ..table.heading },
        x: x.axis,
        y: y.axis,
        xs: &sorted(x, &across),
        ys: &sorted(y, &up),
        quantity,
        values: &values,
        levels: &levels,
        dark,
        boundaries: &boundaries,
        verdicts: &verdicts,
        asked,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    const RADIUS: Axis<'_> = Axis { name: "edge radius", unit: "mm", scale: Scale::Log };
    const FLOW: Axis<'_> = Axis { name: "pour rate", unit: "mL/s", scale: Scale::Log };

    /// Draws a table over these axes; its safety factor is flow over radius.
    fn drawn(radii: &[f64], flows: &[f64]) -> Result<String, NotDrawable> {
        let mut axes = vec![SweepAxis { axis: RADIUS, values: radii }];
        if !flows.is_empty() {
            axes.push(SweepAxis { axis: FLOW, values: flows });
        }
        let one = [20.0];
        let flows = if flows.is_empty() { &one } else { flows };
        let factor: Vec<f64> =
            radii.iter().flat_map(|r| flows.iter().map(|f| f / r / 20.0).collect::<Vec<_>>()).collect();
        let column = |by: f64| factor.iter().map(|f| f * by).collect::<Vec<f64>>();
        let verdicts: Vec<_> =
            factor.iter().map(|f| Some(if *f > 1.0 { Verdict::Clean } else { Verdict::Dribbles })).collect();
        let chances: Vec<f64> = factor.iter().map(|f| 1.0 / (1.0 + f * f * f)).collect();
        sweep(&SweepTable {
            heading: Heading::default(),
            axes: &axes,
            quantity: Drawn::SafetyFactor,
            safety_factor: &factor,
            low: &column(0.5),
            high: &column(2.0),
            dribble_probability: &chances,
            weber: &[],
            verdicts: &verdicts,
            confidence: 0.95,
            asked: Some(Asked {
                at: &[0.8, 20.0][..axes.len()],
                safety_factor: 1.25,
                dribble_probability: 0.34,
            }),
        })
    }

    #[test]
    fn the_number_of_axes_and_values_decides_the_kind() {
        let many: Vec<f64> = (1..30).map(f64::from).collect();
        assert!(drawn(&many, &[]).unwrap().contains("Safety factor against edge radius<"));
        let map = drawn(&many, &many).unwrap();
        assert!(map.contains("Safety factor over edge radius and pour rate<"), "{map}");
        // Either way round, one curve for each flow.
        let by_flow = drawn(&many, &[30.0, 10.0]).unwrap();
        assert!(by_flow.contains("against edge radius, by pour rate<") && by_flow.contains(">10 mL/s<"));
        // At r = 1 mm and the flows 30 and 10 mL/s: 1.5 and 0.5.
        assert!(
            by_flow.contains("30 mL/s: from 1.5 (") && by_flow.contains("10 mL/s: from 0.5 ("),
            "{by_flow}"
        );
        let by_radius = drawn(&[1.0, 3.0], &many).unwrap();
        assert!(
            by_radius.contains("1 mm: from 0.05 (") && by_radius.contains("3 mm: from 0.0167 ("),
            "{by_radius}"
        );
    }

    #[test]
    fn what_cannot_be_drawn_is_said() {
        let huge = vec![1.0; MOST_MAP_POINTS + 1];
        assert_eq!(drawn(&huge, &[]), Err(NotDrawable::Points(MOST_MAP_POINTS + 1)));
        let axes = [SweepAxis { axis: RADIUS, values: &[1.0] }; 3];
        let one = [1.0];
        let table = SweepTable {
            heading: Heading::default(),
            axes: &axes,
            quantity: Drawn::SafetyFactor,
            safety_factor: &one,
            low: &one,
            high: &one,
            dribble_probability: &one,
            weber: &[],
            verdicts: &[None],
            confidence: 0.95,
            asked: None,
        };
        assert_eq!(sweep(&table), Err(NotDrawable::Axes(3)));
        assert_eq!(sweep(&SweepTable { axes: &axes[..1], low: &[], ..table }), Err(NotDrawable::Columns));
    }
}
