//! How the fields lie in memory, and the lattice they live on.
//!
//! A row of cells is stored field by field, so that a kernel reads runs of neighbours; a band of rows is one vector.

/// Cells handled together by a kernel: one 512-bit register of single precision, two of 256 bits.
pub(super) const LANES: usize = 16;

/// Fields per cell (all after collision): see the constants below.
pub(super) const FIELDS: usize = 9;
/// p − (3/2)(Sxx + Syy): what the resting population carries, before its weight.
pub(super) const REST: usize = 0;
/// 3 × first moment along x.
pub(super) const MOVE_X: usize = 1;
/// 3 × first moment along y.
pub(super) const MOVE_Y: usize = 2;
/// 9/2 Sxx.
pub(super) const STRESS_XX: usize = 3;
/// 9/2 Syy.
pub(super) const STRESS_YY: usize = 4;
/// 9 Sxy.
pub(super) const STRESS_XY: usize = 5;
/// Phase φ: 1 in the liquid, 0 in the gas.
pub(super) const PHASE: usize = 6;
/// 3 × flux of φ along x.
pub(super) const FLUX_X: usize = 7;
/// 3 × flux of φ along y.
pub(super) const FLUX_Y: usize = 8;

/// Rows kept beyond a band's own on either side, so that one exchange per step suffices: one for the populations, and
/// those that the wall's contact-angle stencil reaches (see [`super::wall`]).
pub(super) const HALO: usize = 8;

/// Lattice directions of D2Q9 (rest, axes, diagonals).
pub(super) const CX: [i32; 9] = [0, 1, 0, -1, 0, 1, -1, -1, 1];
/// See [`CX`].
pub(super) const CY: [i32; 9] = [0, 0, 1, 0, -1, 1, 1, -1, -1];
/// Lattice weights of D2Q9.
pub(super) const WEIGHT: [f64; 9] =
    [4.0 / 9.0, 1.0 / 9.0, 1.0 / 9.0, 1.0 / 9.0, 1.0 / 9.0, 1.0 / 36.0, 1.0 / 36.0, 1.0 / 36.0, 1.0 / 36.0];

/// The run of cells that starts at `at`.
#[inline(always)]
pub(super) fn run<T>(cells: &[T], at: usize) -> &[T; LANES] {
    &cells[at..at + LANES].as_chunks().0[0]
}
