//! Many points side by side: the last step of a decision in vector instructions.
//!
//! The step itself is [`judge`], the same for one point and for many; here it only gets its numbers from columns, so that the compiler turns the loop
//! into vector instructions, compiled once for each set of them. The arithmetic is the same in all (no fused multiply-add, no reordering), so results
//! do not depend on the machine.

use crate::analysis::{
    decision::{Approaching, judge},
    doubt::{Doubt, EdgeDoubt, StreamDoubt},
};
use crate::physics::separation::closed_form::{CoefficientSet, Edge, FilmTerms, RimTerms};

use super::layers::{Rounded, Streaming, Turned};

/// Points side by side.
pub(super) const LANES: usize = 64;

/// A number of each of the points.
pub(super) type Lane = [f64; LANES];

/// Something that a judgement looks at, as numbers.
pub(super) trait Numbers<const K: usize> {
    /// The numbers.
    fn numbers(&self) -> [f64; K];
}

impl Numbers<14> for Streaming {
    fn numbers(&self) -> [f64; 14] {
        let [a, b, c, d, e, f, g] = self.approach.terms.to_array();
        let [i, j, k, l, m] = self.doubt.to_array();
        [a, b, c, d, e, f, g, self.approach.ln_weber, self.approach.numbers.weber, i, j, k, l, m]
    }
}

impl Numbers<7> for Turned {
    fn numbers(&self) -> [f64; 7] {
        let [a, b, c, d, e, f] = self.edge.to_array();
        [a, b, c, d, e, f, self.doubt]
    }
}

impl Numbers<4> for Rounded {
    fn numbers(&self) -> [f64; 4] {
        let [a, b, c] = self.rim.to_array();
        [a, b, c, self.doubt]
    }
}

/// The numbers of every entry of a layer, column by column; none where an entry is at fault or the layer is not tabulated.
pub(super) type Columns<const K: usize> = Option<[Vec<f64>; K]>;

/// The columns of a layer's entries.
pub(super) fn columns<const K: usize, T: Numbers<K>>(
    entries: impl Iterator<Item = Option<T>> + Clone,
) -> Columns<K> {
    let mut columns: [Vec<f64>; K] = std::array::from_fn(|_| Vec::new());
    let mut count = 0;
    for entry in entries {
        for (column, number) in columns.iter_mut().zip(entry?.numbers()) {
            column.push(number);
        }
        count += 1;
    }
    (count > 0).then_some(columns)
}

/// Puts the same numbers, or `run` neighbouring ones of the columns, into the lanes.
pub(super) fn fill<const K: usize>(
    lanes: &mut [Lane; K],
    columns: &Columns<K>,
    (key, stride, run): (usize, usize, usize),
    known: Option<[f64; K]>,
) -> Option<()> {
    if stride == 0 {
        for (lane, number) in lanes.iter_mut().zip(known?) {
            lane.fill(number);
        }
    } else {
        for (lane, column) in lanes.iter_mut().zip(columns.as_ref()?) {
            lane.get_mut(..run)?.copy_from_slice(column.get(key..key + run)?);
        }
    }
    Some(())
}

/// What the points are judged by.
pub(super) struct Given {
    pub(super) stream: [Lane; 14],
    pub(super) edge: [Lane; 7],
    pub(super) rim: [Lane; 4],
}

impl Given {
    /// Weber numbers of the points.
    pub(super) const fn weber(&self) -> &Lane {
        &self.stream[8]
    }
}

impl Default for Given {
    /// Ordinary numbers: lanes without a point are computed too, and are of no use.
    fn default() -> Self {
        Self { stream: [[1.0; LANES]; 14], edge: [[1.0; LANES]; 7], rim: [[1.0; LANES]; 4] }
    }
}

/// What is found.
pub(super) struct Judged {
    pub(super) critical_weber: Lane,
    pub(super) margin: Lane,
    pub(super) standard_uncertainty: Lane,
    pub(super) dribble_probability: Lane,
}

impl Default for Judged {
    fn default() -> Self {
        let lane = [0.0; LANES];
        Self { critical_weber: lane, margin: lane, standard_uncertainty: lane, dribble_probability: lane }
    }
}

/// The step, as the vector dispatcher takes it. Without a calibration: its logarithms are calls, and points with one are judged one by one.
pub(super) struct Step<'a> {
    pub(super) set: &'a CoefficientSet,
    pub(super) confidence: f64,
    pub(super) doubt: Doubt,
    pub(super) given: &'a Given,
    pub(super) judged: &'a mut Judged,
}

impl pulp::NullaryFnOnce for Step<'_> {
    type Output = ();

    #[inline(always)]
    fn call(self) {
        let Self { set, confidence, doubt, given, judged } = self;
        // Copies, so that the compiler sees that nothing in the loop changes them.
        let (set, doubt) = (*set, doubt);
        for i in 0..LANES {
            let s: [f64; 14] = std::array::from_fn(
                #[inline(always)]
                |k| given.stream[k][i],
            );
            let e: [f64; 7] = std::array::from_fn(
                #[inline(always)]
                |k| given.edge[k][i],
            );
            let r: [f64; 4] = std::array::from_fn(
                #[inline(always)]
                |k| given.rim[k][i],
            );
            let approaching = Approaching {
                terms: FilmTerms::from_array([s[0], s[1], s[2], s[3], s[4], s[5], s[6]]),
                ln_weber: s[7],
                weber: s[8],
            };
            let edge = Edge::from_array([e[0], e[1], e[2], e[3], e[4], e[5]]);
            let rim = RimTerms::from_array([r[0], r[1], r[2]]);
            let stream_doubt = StreamDoubt::from_array([s[9], s[10], s[11], s[12], s[13]]);
            let edge_doubt = EdgeDoubt { turn: e[6], radius: r[3] };
            let found = judge(
                &set,
                None,
                confidence,
                &approaching,
                (&edge, &rim),
                (&doubt, edge_doubt, &stream_doubt),
            );
            judged.critical_weber[i] = found.threshold.critical_weber;
            judged.margin[i] = found.margin;
            judged.standard_uncertainty[i] = found.standard_uncertainty;
            judged.dribble_probability[i] = found.dribble_probability;
        }
    }
}
