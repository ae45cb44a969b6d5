//! Walls on the lattice: halfway bounce-back links, and the cells behind the wall that carry the contact angle.
//!
//! # Contact angle
//!
//! At equilibrium the phase along the normal n of a wall (into the fluid) obeys dφ/dn = −(4/ξ) cos θ φ(1 − φ), whose solution is logistic:
//! φ/(1 − φ) falls by the factor e^(4 cos θ L/ξ) over a length L. So a cell a distance L behind a fluid point where the phase is φ_f takes
//! φ = φ_f e/(1 + φ_f (e − 1)), e = exp(4 L cos θ/ξ): exact for a straight interface, and bounded in 0..1 whatever the angle.
//!
//! Hysteresis: the line is held by a spring that yields (elastic, ideally plastic: Prandtl's friction element). The logarithm of the factor moves against the
//! interface as that moves along the wall, and stays between the values of the advancing and the receding angle; over the whole span the line shifts by
//! about a quarter of the interface's width. Own construction.

use super::contact::ContactAngle;
use super::layout::{CX, CY, HALO};
use super::real::Real;

/// What a cell is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Cell {
    Fluid,
    Wall,
    Imposed,
}

/// A fluid cell beside a wall.
#[derive(Debug, Clone, Copy)]
pub(super) struct Link {
    pub column: u32,
    /// Bit k: what would arrive along direction k comes from a wall.
    pub directions: u16,
}

/// Bilinear weights of four cells.
#[derive(Debug, Clone, Copy)]
pub(super) struct Stencil<T> {
    /// Index in a plane that has [`HALO`] rows before row 0.
    pub cells: [u32; 4],
    pub weights: [T; 4],
}

impl<T: Real> Stencil<T> {
    #[inline]
    fn read(&self, plane: &[T], shift: usize) -> T {
        let mut sum = T::default();
        for (&cell, &weight) in self.cells.iter().zip(&self.weights) {
            sum += weight * plane[cell as usize - shift];
        }
        let one = T::of(1.0);
        let low = if sum < T::default() { T::default() } else { sum };
        if low > one { one } else { low }
    }
}

/// A wall cell that carries the contact angle.
#[derive(Debug, Clone, Copy)]
pub(super) struct Ghost<T> {
    cell: u32,
    near: Stencil<T>,
    far: Stencil<T>,
    advancing: T,
    receding: T,
    /// Twice ln(receding/advancing): how fast the factor moves with the logit of the phase.
    stiffness: T,
}

/// Where the spring of a ghost stands.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Pin<T> {
    factor: T,
    phase: T,
    set: bool,
}

impl<T: Real> Ghost<T> {
    /// Writes the phase of this cell into `plane`, whose first cell has index `shift`.
    #[inline]
    pub(super) fn write(&self, plane: &mut [T], shift: usize, pin: &mut Pin<T>) {
        let one = T::of(1.0);
        let phase = self.near.read(plane, shift);
        let factor = if self.advancing < self.receding {
            let factor = if pin.set { self.pulled(phase, pin) } else { self.found(phase, plane, shift) };
            *pin = Pin { factor, phase, set: true };
            factor
        } else {
            self.advancing
        };
        plane[self.cell as usize - shift] = phase * factor / (one + phase * (factor - one));
    }

    /// The factor that the fluid itself shows at the start.
    fn found(&self, phase: T, plane: &[T], shift: usize) -> T {
        let one = T::of(1.0);
        let far = self.far.read(plane, shift);
        // near/(1 − near) over far/(1 − far), compared without dividing.
        let (up, down) = (phase * (one - far), far * (one - phase));
        if down <= T::default() || up > self.receding * down {
            self.receding
        } else if up < self.advancing * down {
            self.advancing
        } else {
            up / down
        }
    }

    /// The factor after the phase has moved: falls as the liquid advances.
    fn pulled(&self, phase: T, pin: &Pin<T>) -> T {
        let (one, half, floor) = (T::of(1.0), T::of(0.5), T::of(1e-3));
        let middle = half * (phase + pin.phase);
        let moved = self.stiffness * (phase - pin.phase) / (middle * (one - middle) + floor);
        let change = if moved > half {
            half
        } else if moved < -half {
            -half
        } else {
            moved
        };
        let factor = pin.factor * (one - change);
        if factor < self.advancing {
            self.advancing
        } else if factor > self.receding {
            self.receding
        } else {
            factor
        }
    }
}

/// Links and ghosts of a lattice, by rows.
#[derive(Debug)]
pub(super) struct Walls<T> {
    pub links: Vec<Link>,
    /// First link of each row; one more entry than rows.
    pub link_rows: Vec<usize>,
    pub ghosts: Vec<Ghost<T>>,
    /// First ghost of each row; one more entry than rows.
    pub ghost_rows: Vec<usize>,
}

/// The lattice as the walls see it.
pub(super) struct Ground<'a> {
    pub columns: usize,
    pub rows: usize,
    pub cells: &'a [Cell],
    pub distance: &'a dyn Fn(f64, f64) -> f64,
    pub periodic: bool,
}

impl Ground<'_> {
    fn at(&self, i: i64, j: i64) -> Option<Cell> {
        let (nx, ny) = (self.columns as i64, self.rows as i64);
        let i = if self.periodic { (i - 1).rem_euclid(nx - 2) + 1 } else { i };
        (0..nx)
            .contains(&i)
            .then_some(())
            .filter(|()| (0..ny).contains(&j))
            .map(|()| self.cells[(j * nx + i) as usize])
    }

    /// Bilinear stencil at (x, y) over cells that are not wall; `None` if less than half of the weight is.
    fn stencil<T: Real>(&self, x: f64, y: f64) -> Option<Stencil<T>> {
        let nx = self.columns as f64;
        let x = if self.periodic { (x - 1.0).rem_euclid(nx - 2.0) + 1.0 } else { x.clamp(0.0, nx - 1.001) };
        let y = y.clamp(0.0, self.rows as f64 - 1.001);
        let (i, j) = (x.floor(), y.floor());
        let (a, b) = (x - i, y - j);
        let mut cells = [0; 4];
        let mut weights = [0.0; 4];
        let corners =
            [(0, 0, (1.0 - a) * (1.0 - b)), (1, 0, a * (1.0 - b)), (0, 1, (1.0 - a) * b), (1, 1, a * b)];
        for (k, (di, dj, weight)) in corners.into_iter().enumerate() {
            let (ci, cj) = (i as i64 + di, j as i64 + dj);
            cells[k] = (((cj + HALO as i64) * self.columns as i64) + ci) as u32;
            if self.at(ci, cj).is_some_and(|cell| cell != Cell::Wall) {
                weights[k] = weight;
            }
        }
        let total: f64 = weights.iter().sum();
        (total >= 0.5).then(|| Stencil { cells, weights: weights.map(|w| T::of(w / total)) })
    }
}

impl<T: Real> Walls<T> {
    pub(super) fn of(ground: &Ground<'_>, contact: ContactAngle, interface: f64) -> Self {
        let mut walls = Self { links: vec![], link_rows: vec![0], ghosts: vec![], ghost_rows: vec![0] };
        let (nx, ny) = (ground.columns as i64, ground.rows as i64);
        for j in 0..ny {
            for i in 0..nx {
                match ground.at(i, j).filter(|_| !ground.periodic || (1..nx - 1).contains(&i)) {
                    Some(Cell::Fluid) if (1..nx - 1).contains(&i) => walls.add_links(ground, i, j),
                    Some(Cell::Wall) => walls.add_ghost(ground, i, j, contact, interface),
                    _ => {}
                }
            }
            walls.link_rows.push(walls.links.len());
            walls.ghost_rows.push(walls.ghosts.len());
        }
        walls
    }

    fn add_links(&mut self, ground: &Ground<'_>, i: i64, j: i64) {
        let mut directions = 0;
        for k in 1..9 {
            if ground.at(i - i64::from(CX[k]), j - i64::from(CY[k])) == Some(Cell::Wall) {
                directions |= 1 << k;
            }
        }
        if directions != 0 {
            self.links.push(Link { column: i as u32, directions });
        }
    }

    fn add_ghost(&mut self, ground: &Ground<'_>, i: i64, j: i64, contact: ContactAngle, interface: f64) {
        let beside = (1..9).any(|k| {
            ground.at(i + i64::from(CX[k]), j + i64::from(CY[k])).is_some_and(|cell| cell == Cell::Fluid)
        });
        if !beside {
            return;
        }
        let (x, y) = (i as f64, j as f64);
        let d = ground.distance;
        let slope = [(d(x + 0.5, y) - d(x - 0.5, y)), (d(x, y + 0.5) - d(x, y - 0.5))];
        let steep = (slope[0] * slope[0] + slope[1] * slope[1]).sqrt().max(1e-12);
        let normal = [slope[0] / steep, slope[1] / steep];
        let mut length = (-2.0 * d(x, y)).max(1.2);
        while length < 3.0 {
            let point = |l: f64| (x + l * normal[0], y + l * normal[1]);
            let (near, far) = (point(length), point(2.0 * length));
            if let (Some(near), Some(far)) = (ground.stencil(near.0, near.1), ground.stencil(far.0, far.1)) {
                let factor = |angle: f64| T::of(libm::exp(4.0 * length * libm::cos(angle) / interface));
                self.ghosts.push(Ghost {
                    cell: ((j + HALO as i64) * ground.columns as i64 + i) as u32,
                    near,
                    far,
                    advancing: factor(contact.advancing()),
                    receding: factor(contact.receding()),
                    stiffness: T::of(
                        8.0 * length * (libm::cos(contact.receding()) - libm::cos(contact.advancing()))
                            / interface,
                    ),
                });
                return;
            }
            length += 0.1;
        }
    }
}
