//! Values in two units in one list.

/// Some values look as if given in another unit than the rest.
#[derive(Debug, Clone, PartialEq)]
pub struct MixedUnits {
    /// Places of the fewer values.
    pub places: Vec<usize>,
    /// How many times the others they are, about.
    pub factor: f64,
}

/// Factors between units of length in use, and a slipped decimal point (own judgement).
const FACTORS: [f64; 5] = [10.0, 25.4, 39.37, 1000.0, 25_400.0];

/// How near to such a factor the medians of two groups are when units are mixed, as a share (own judgement).
const NEAR: f64 = 0.25;

/// Looks for two groups of values a familiar factor apart, with nothing between them: positive values only, four at least.
#[must_use]
pub fn mixed_units(values: &[f64]) -> Option<MixedUnits> {
    if values.len() < 4 || values.iter().any(|x| *x <= 0.0 || x.is_nan()) {
        return None;
    }
    let mut order: Vec<usize> = (0..values.len()).collect();
    order.sort_by(|a, b| values[*a].total_cmp(&values[*b]));
    let gap = |i: &usize| values[order[*i]] / values[order[*i - 1]];
    let split = (1..order.len()).max_by(|a, b| gap(a).total_cmp(&gap(b)))?;
    let (low, high) = order.split_at(split);
    let middle = |group: &[usize]| values[group[group.len() / 2]];
    let ratio = middle(high) / middle(low);
    // Within a group a process does not spread over factors: the gap must be most of the ratio.
    let apart = gap(&split) > ratio.sqrt();
    let known = FACTORS.iter().any(|f| (ratio / f - 1.0).abs() < NEAR);
    let (fewer, factor) = if high.len() <= low.len() { (high, ratio) } else { (low, 1.0 / ratio) };
    let mut places = fewer.to_vec();
    places.sort_unstable();
    (apart && known).then_some(MixedUnits { places, factor })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn inches_among_millimetres_are_seen() {
        let found = mixed_units(&[0.42, 0.44, 0.0165, 0.43, 0.41, 0.0169]).unwrap();
        assert_eq!(found.places, [2, 5]);
        assert!((found.factor - 0.0393).abs() < 0.003, "{found:?}");
        assert_eq!(mixed_units(&[0.42, 430.0, 0.44, 0.41]).unwrap().places, [1]);
    }

    #[test]
    fn a_wide_but_single_lot_is_not() {
        assert_eq!(mixed_units(&[0.1, 0.2, 0.4, 0.8, 1.6]), None);
        assert_eq!(mixed_units(&[0.42, 0.44, 0.41, 0.9]), None);
        assert_eq!(mixed_units(&[0.0, 0.44, 0.41, 25.0]), None);
        assert_eq!(mixed_units(&[1.0, 25.4]), None);
    }
}
