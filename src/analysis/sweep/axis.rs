//! The axes of a sweep: which field, at which values.

use crate::analysis::field::Field;

/// The most axes of a sweep.
pub const MOST_AXES: usize = 4;

/// Values up to this many are kept; those of longer axes are computed anew each time.
const KEPT: usize = 1 << 16;

/// How the values of an axis lie.
#[derive(Debug, Clone, PartialEq)]
pub enum Values {
    /// Evenly between two ends, both included.
    Linear {
        /// First value.
        from: f64,
        /// Last value.
        to: f64,
        /// How many.
        count: usize,
    },
    /// Evenly in their logarithm between two ends of one sign, both included.
    Logarithmic {
        /// First value.
        from: f64,
        /// Last value.
        to: f64,
        /// How many.
        count: usize,
    },
    /// As listed.
    Listed(Vec<f64>),
}

impl Values {
    fn len(&self) -> usize {
        match self {
            Self::Linear { count, .. } | Self::Logarithmic { count, .. } => *count,
            Self::Listed(values) => values.len(),
        }
    }

    fn at(&self, index: usize) -> f64 {
        match self {
            Self::Listed(values) => values.get(index).copied().unwrap_or(f64::NAN),
            Self::Linear { from, to, count } => between(*from, *to, index, *count, |share| {
                // Written so that an end at zero and round steps stay exact as far as doubles go.
                from * (1.0 - share) + to * share
            }),
            Self::Logarithmic { from, to, count } => {
                between(*from, *to, index, *count, |share| from * libm::pow(to / from, share))
            }
        }
    }
}

/// The ends exactly, and what lies between them by its share of the way.
fn between(from: f64, to: f64, index: usize, count: usize, inside: impl Fn(f64) -> f64) -> f64 {
    let last = count.saturating_sub(1);
    match index {
        0 => from,
        i if i >= last => to,
        i => inside(i as f64 / last as f64).clamp(from.min(to), from.max(to)),
    }
}

/// One axis: a field and its values, in the field's unit.
#[derive(Debug, Clone)]
pub struct Axis {
    field: Field,
    values: Values,
    kept: Vec<f64>,
}

impl Axis {
    /// The axis of this field at these values.
    #[must_use]
    pub fn new(field: Field, values: Values) -> Self {
        let kept =
            if values.len() <= KEPT { (0..values.len()).map(|i| values.at(i)).collect() } else { Vec::new() };
        Self { field, values, kept }
    }

    /// The field.
    #[must_use]
    pub const fn field(&self) -> Field {
        self.field
    }

    /// How many values there are.
    #[must_use]
    #[expect(clippy::len_without_is_empty, reason = "an axis has a value at least")]
    pub fn len(&self) -> usize {
        self.values.len()
    }

    /// Whether the values lie evenly in their logarithm.
    #[must_use]
    pub const fn is_logarithmic(&self) -> bool {
        matches!(self.values, Values::Logarithmic { .. })
    }

    /// The value at this place.
    #[must_use]
    pub fn at(&self, index: usize) -> f64 {
        self.kept.get(index).copied().unwrap_or_else(|| self.values.at(index))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ends_are_exact_and_steps_even() {
        let linear = Axis::new(Field::Flow, Values::Linear { from: 0.1, to: 0.7, count: 7 });
        assert_eq!((linear.at(0), linear.at(6), linear.len()), (0.1, 0.7, 7));
        assert!((linear.at(2) - 0.3).abs() < 1e-15);
        let log = Axis::new(Field::Flow, Values::Logarithmic { from: 100.0, to: 0.01, count: 5 });
        for (i, expected) in [100.0, 10.0, 1.0, 0.1, 0.01].into_iter().enumerate() {
            assert!((log.at(i) / expected - 1.0).abs() < 1e-14, "{i} {}", log.at(i));
        }
        let down = Axis::new(Field::Slope, Values::Linear { from: 20.0, to: -20.0, count: 3 });
        assert_eq!(down.at(1), 0.0);
        assert_eq!(Axis::new(Field::Flow, Values::Listed(vec![3.0, 1.0])).at(1), 1.0);
    }

    #[test]
    fn a_long_axis_gives_the_same_values_without_keeping_them() {
        let values = Values::Linear { from: 0.0, to: 1.0, count: KEPT + 1 };
        let long = Axis::new(Field::EdgeRadius, values);
        assert!(long.kept.is_empty());
        assert_eq!((long.at(0), long.at(KEPT / 2), long.at(KEPT)), (0.0, 0.5, 1.0));
    }
}
