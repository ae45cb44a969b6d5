//! Axes: from values to places on the sheet, with ticks at round numbers.

use super::{
    number::{decimal, raised, significant},
    text,
};

/// How an axis is divided.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Scale {
    /// Equal steps.
    #[default]
    Linear,
    /// Equal ratios. Values that are not positive have no place on it.
    Log,
}

/// What an axis shows.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Axis<'a> {
    /// Name of the quantity.
    pub name: &'a str,
    /// Its unit; empty for ratios.
    pub unit: &'a str,
    /// How it is divided.
    pub scale: Scale,
}

/// A mark on an axis.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Tick {
    /// Where on the sheet.
    pub place: f64,
    /// What stands there; empty at a minor tick.
    pub label: String,
}

/// An axis laid on the sheet.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Ruler {
    scale: Scale,
    from: f64,
    to: f64,
    start: f64,
    end: f64,
    /// Labels are the values divided by ten to this power.
    factor: i32,
    pub ticks: Vec<Tick>,
}

/// Room for one labelled tick, in units of the sheet.
const TICK_ROOM: f64 = 62.0;

impl Ruler {
    /// An axis over the finite values (on a logarithmic axis: the positive ones) from `start` to `end` on the sheet. `round` widens it to full ticks.
    pub(super) fn over(
        values: impl IntoIterator<Item = f64>,
        scale: Scale,
        [start, end]: [f64; 2],
        round: bool,
    ) -> Self {
        let usable = |v: &f64| v.is_finite() && (scale == Scale::Linear || *v > 0.0);
        let (mut from, mut to) = values
            .into_iter()
            .filter(usable)
            .fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)));
        if from > to {
            (from, to) = if scale == Scale::Log { (0.1, 10.0) } else { (0.0, 1.0) };
        }
        widen(&mut from, &mut to, scale);
        let room = (end - start).abs();
        let mut ruler = Self { scale, from, to, start, end, factor: 0, ticks: Vec::new() };
        let most = (room / TICK_ROOM).max(2.0);
        match scale {
            Scale::Log if libm::log10(to / from) >= 1.0 => ruler.log_ticks(most, round),
            Scale::Linear | Scale::Log => ruler.even_ticks(most, round),
        }
        ruler
    }

    /// Where a value stands; `None` where it has no place. Values beyond the ends are placed beyond the ends.
    pub(super) fn place(&self, value: f64) -> Option<f64> {
        let share = match self.scale {
            Scale::Linear => (value - self.from) / (self.to - self.from),
            Scale::Log if value > 0.0 => libm::log(value / self.from) / libm::log(self.to / self.from),
            Scale::Log => return None,
        };
        share.is_finite().then(|| self.start + share.clamp(-50.0, 50.0) * (self.end - self.start))
    }

    /// Where a value stands, if between the ends.
    pub(super) fn inside(&self, value: f64) -> Option<f64> {
        let slack = 1e-9 * (self.end - self.start).abs();
        let (low, high) = (self.start.min(self.end) - slack, self.start.max(self.end) + slack);
        self.place(value).filter(|place| (low..=high).contains(place))
    }

    pub(super) fn start(&self) -> f64 {
        self.start
    }

    pub(super) fn end(&self) -> f64 {
        self.end
    }

    /// Whether values grow by ratio.
    pub(super) fn is_log(&self) -> bool {
        self.scale == Scale::Log
    }

    /// The first and last value.
    pub(super) fn range(&self) -> [f64; 2] {
        [self.from, self.to]
    }

    /// Name, unit and the power of ten that the labels leave out, no wider than `room`: the name is what is cut.
    pub(super) fn title(&self, axis: &Axis<'_>, size: f64, room: f64) -> String {
        let unit = if axis.unit == "deg" { "°" } else { axis.unit };
        let unit = match (self.factor, unit.is_empty()) {
            (0, true) => String::new(),
            (0, false) => format!(", {unit}"),
            (power, true) => format!(", in 10{}", raised(power)),
            (power, false) => format!(", in 10{} {unit}", raised(power)),
        };
        let unit = text::fitted(&unit, size, 0.5 * room);
        text::fitted(axis.name, size, room - text::width(&unit, size)) + &unit
    }

    fn tick(&mut self, value: f64, label: String) {
        if let Some(place) = self.inside(value) {
            self.ticks.push(Tick { place, label });
        }
    }

    fn even_ticks(&mut self, most: f64, round: bool) {
        let step = round_step((self.to - self.from) / most);
        if round && self.scale == Scale::Linear {
            self.from = step * (self.from / step + 1e-9).floor();
            self.to = step * (self.to / step - 1e-9).ceil();
        }
        let largest = self.from.abs().max(self.to.abs());
        let exponent = decade(largest);
        if !(-3..6).contains(&exponent) {
            self.factor = 3 * exponent.div_euclid(3);
        }
        let unit = libm::exp10(f64::from(self.factor));
        let shown = step / unit * (1.0 + 1e-9);
        let mantissa = shown / power(decade(shown));
        // A step of 2.5 needs one decimal more than its decade says.
        let more = i32::from((mantissa - 2.5).abs() < 1e-6);
        let decimals = usize::try_from(more - decade(shown)).unwrap_or(0).min(12);
        let first = (self.from / step - 1e-9).ceil();
        let count = ((self.to / step + 1e-9).floor() - first).clamp(0.0, 200.0) as usize;
        for index in 0..=count {
            let value = step * (first + index as f64);
            self.tick(value, decimal(value / unit, decimals));
        }
    }

    fn log_ticks(&mut self, most: f64, round: bool) {
        let mut first = decade(self.from);
        let mut last = decade(self.to);
        if round {
            // Up to the next 1, 2 or 5.
            let down =
                |v: f64| [5.0, 2.0, 1.0].into_iter().find(|m| m * power(decade(v)) <= v * (1.0 + 1e-9));
            let up =
                |v: f64| [1.0, 2.0, 5.0, 10.0].into_iter().find(|m| m * power(decade(v)) >= v * (1.0 - 1e-9));
            self.from = down(self.from).unwrap_or(1.0) * power(first);
            self.to = up(self.to).unwrap_or(10.0) * power(last);
            (first, last) = (decade(self.from), decade(self.to));
        }
        let decades = libm::log10(self.to / self.from);
        let room = most / decades;
        let powers = last - first > 6 || first < -4 || last > 5;
        let every = (1.0 / room).ceil().max(1.0) as i32;
        for exponent in first..=last {
            for mantissa in 1..10_u8 {
                let labelled = match mantissa {
                    1 => exponent.rem_euclid(every) == 0,
                    2 | 5 => room >= 2.4,
                    _ => false,
                };
                if mantissa > 1 && decades > 12.0 {
                    continue;
                }
                let value = f64::from(mantissa) * power(exponent);
                let label = match (labelled, powers) {
                    (false, _) => String::new(),
                    (true, true) => format!("10{}", raised(exponent)),
                    (true, false) => significant(value, 3),
                };
                self.tick(value, label);
            }
        }
    }
}

/// A range that is nothing but a point becomes one round it.
fn widen(from: &mut f64, to: &mut f64, scale: Scale) {
    let size = from.abs().max(to.abs());
    if scale == Scale::Log {
        if *to / *from < 1.02 {
            (*from, *to) = (*from / 1.25, *to * 1.25);
        }
    } else if *to - *from <= 1e-9 * size || *to == *from {
        let half = if size > 0.0 { 0.1 * size } else { 1.0 };
        (*from, *to) = (*from - half, *to + half);
    }
}

fn power(exponent: i32) -> f64 {
    libm::exp10(f64::from(exponent))
}

/// The power of ten at or below a positive value.
fn decade(value: f64) -> i32 {
    (libm::log10(value) + 1e-9).floor().clamp(-300.0, 300.0) as i32
}

/// The next 1, 2, 2.5 or 5 times a power of ten.
fn round_step(raw: f64) -> f64 {
    let unit = power(decade(raw));
    [1.0, 2.0, 2.5, 5.0].into_iter().find(|m| m * unit >= raw * (1.0 - 1e-9)).unwrap_or(10.0) * unit
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(values: [f64; 2], scale: Scale, room: f64) -> String {
        let ruler = Ruler::over(values, scale, [0.0, room], false);
        let labels: Vec<_> = ruler.ticks.into_iter().map(|t| t.label).filter(|l| !l.is_empty()).collect();
        labels.join(" ")
    }

    #[test]
    fn ticks_are_round_numbers() {
        for (values, scale, room, expected) in [
            ([0.0, 1.0], Scale::Linear, 400.0, "0.0 0.2 0.4 0.6 0.8 1.0"),
            ([0.0, 10.0], Scale::Linear, 300.0, "0.0 2.5 5.0 7.5 10.0"),
            ([0.0, 100.0], Scale::Linear, 300.0, "0 25 50 75 100"),
            ([-3.0, 3.0], Scale::Linear, 400.0, "−3 −2 −1 0 1 2 3"),
            ([0.1, 10.0], Scale::Log, 500.0, "0.1 0.2 0.5 1 2 5 10"),
            ([1e-3, 1e3], Scale::Log, 500.0, "0.001 0.01 0.1 1 10 100 1000"),
            ([2.0, 8.0], Scale::Log, 300.0, "2 4 6 8"),
            ([998.2, 998.21], Scale::Linear, 200.0, "998.200 998.205 998.210"),
        ] {
            assert_eq!(labels(values, scale, room), expected, "{values:?}");
        }
    }

    #[test]
    fn large_and_small_values_leave_a_power_to_the_title() {
        let ruler = Ruler::over([0.0, 3e-7], Scale::Linear, [0.0, 300.0], false);
        let axis = Axis { name: "film", unit: "m", scale: Scale::Linear };
        assert_eq!(ruler.title(&axis, 12.0, 300.0), "film, in 10⁻⁹ m");
        assert_eq!(ruler.ticks.last().unwrap().label, "300");
    }

    #[test]
    fn odd_ranges_still_make_an_axis() {
        for values in [
            [0.0, 0.0],
            [5.0, 5.0],
            [f64::NAN, f64::NAN],
            [-1.0, f64::INFINITY],
            [1e300, 1.1e300],
            [1e-300, 1e-299],
        ] {
            for scale in [Scale::Linear, Scale::Log] {
                for round in [false, true] {
                    let ruler = Ruler::over(values, scale, [10.0, 400.0], round);
                    assert!(ruler.ticks.len() > 1, "{values:?} {scale:?} {ruler:?}");
                    assert!(ruler.ticks.iter().all(|t| t.place.is_finite()), "{values:?}");
                }
            }
        }
    }
}
