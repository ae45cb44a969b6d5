//! The arithmetic of one row of cells: stream, then collide.
//!
//! Both lattices are kept as moments, not populations: with a regularised collision the nine populations of a cell after
//! collision are fixed by six moments (velocity lattice) and three (phase lattice), so nothing is lost and half the memory traffic is saved.
//!
//! Velocity lattice (p = P/(ρ c_s²), c_s² = 1/3, unit cell and time step), after collision:
//! g_k = w_k [p + 3 c_k·m + (9/2)(c_k c_k − I/3) : S], m = u + F/(2ρ), S = u u + (1 − 1/(τ + ½)) S_neq, τ = 3ν.
//! Phase lattice: h_k = w_k [φ + 3 c_k·q], q = (1 − ω) J + ω φ u + (1 − ω/2) n 4φ(1 − φ)/(3 ξ), ω = 1/(3M + ½).
//!
//! The force is F = μ ∇φ − (p/3) ∇ρ + ν (∇u + ∇uᵀ)·∇ρ + (ρ − ρ_gas) G, chemical potential
//! μ = 4β φ (φ − 1)(φ − ½) − κ ∇²φ with β = 12 σ/ξ, κ = (3/2) σ ξ.
//! Scheme: Fakhari, Mitchell, Leonardi & Bolster 2017, Phys. Rev. E 96, 053301 (velocity-based, conservative Allen–Cahn; doi 10.1103/PhysRevE.96.053301);
//! regularised collision: Latt & Chopard 2006, Math. Comput. Simul. 72, 165 (doi 10.1016/j.matcom.2006.05.017). Both cited from memory.

use super::layout::{
    FIELDS, FLUX_X, FLUX_Y, LANES, MOVE_X, MOVE_Y, PHASE, REST, STRESS_XX, STRESS_XY, STRESS_YY, run,
};
use super::real::Real;

/// What the collision needs to know of the two fluids, in lattice units (liquid density 1).
#[derive(Debug, Clone, Copy)]
pub(super) struct Media<T> {
    /// 4β = 48 σ/ξ.
    pub four_beta: T,
    /// κ = 3σξ/2.
    pub kappa: T,
    /// 4/ξ.
    pub sharpening: T,
    /// Kinematic viscosity of the gas.
    pub nu_gas: T,
    /// Kinematic viscosity of the liquid less that of the gas.
    pub nu_step: T,
    /// Density of the gas.
    pub rho_gas: T,
    /// Density of the liquid less that of the gas.
    pub rho_step: T,
    /// Gravity along x.
    pub gravity_x: T,
    /// Gravity along y.
    pub gravity_y: T,
    /// Relaxation rate of the phase flux.
    pub omega: T,
}

/// Moments that stream into the cells of a row: p, jx, jy, Pxx, Pyy, Pxy, Jx, Jy, each as long as a row.
pub(super) const STREAMED: usize = 8;

/// Phase φ of a row after streaming, for columns 1..nx − 1.
#[inline(always)]
pub(super) fn stream_phase<T: Real>(below: &[T], here: &[T], above: &[T], out: &mut [T], nx: usize) {
    let (w0, w1, w2) = (T::of(4.0 / 9.0), T::of(1.0 / 9.0), T::of(1.0 / 36.0));
    for start in (1..nx - 1).step_by(LANES) {
        let at = |row, field: usize, col: usize| run(row, field * nx + col);
        let (l, r) = (start - 1, start + 1);
        let rest = at(here, PHASE, start);
        let (we, wx) = (at(here, PHASE, l), at(here, FLUX_X, l));
        let (ee, ex) = (at(here, PHASE, r), at(here, FLUX_X, r));
        let (se, sy) = (at(below, PHASE, start), at(below, FLUX_Y, start));
        let (ne, ny) = (at(above, PHASE, start), at(above, FLUX_Y, start));
        let (sw, swx, swy) = (at(below, PHASE, l), at(below, FLUX_X, l), at(below, FLUX_Y, l));
        let (so, sox, soy) = (at(below, PHASE, r), at(below, FLUX_X, r), at(below, FLUX_Y, r));
        let (nw, nwx, nwy) = (at(above, PHASE, l), at(above, FLUX_X, l), at(above, FLUX_Y, l));
        let (no, nox, noy) = (at(above, PHASE, r), at(above, FLUX_X, r), at(above, FLUX_Y, r));
        let mut phase = [T::default(); LANES];
        for i in 0..LANES {
            let axes = ((we[i] + wx[i]) + (ee[i] - ex[i])) + ((se[i] + sy[i]) + (ne[i] - ny[i]));
            let diagonals = ((sw[i] + (swx[i] + swy[i])) + (so[i] + (soy[i] - sox[i])))
                + ((nw[i] + (nwx[i] - nwy[i])) + (no[i] - (nox[i] + noy[i])));
            phase[i] = w0 * rest[i] + (w1 * axes + w2 * diagonals);
        }
        out[start..start + LANES].copy_from_slice(&phase);
    }
}

/// The other moments of a row after streaming, for columns 1..nx − 1; `out` holds [`STREAMED`] rows.
#[inline(always)]
pub(super) fn stream_moments<T: Real>(below: &[T], here: &[T], above: &[T], out: &mut [T], nx: usize) {
    let (w0, w1, w2) = (T::of(4.0 / 9.0), T::of(1.0 / 9.0), T::of(1.0 / 36.0));
    for start in (1..nx - 1).step_by(LANES) {
        let at = |row, field: usize, col: usize| run(row, field * nx + col);
        let (l, r) = (start - 1, start + 1);
        let rest = at(here, REST, start);
        let w = [at(here, REST, l), at(here, MOVE_X, l), at(here, STRESS_XX, l)];
        let e = [at(here, REST, r), at(here, MOVE_X, r), at(here, STRESS_XX, r)];
        let s = [at(below, REST, start), at(below, MOVE_Y, start), at(below, STRESS_YY, start)];
        let n = [at(above, REST, start), at(above, MOVE_Y, start), at(above, STRESS_YY, start)];
        let corner = |row, col| {
            [
                at(row, REST, col),
                at(row, MOVE_X, col),
                at(row, MOVE_Y, col),
                at(row, STRESS_XX, col),
                at(row, STRESS_YY, col),
                at(row, STRESS_XY, col),
            ]
        };
        let sw = corner(below, l);
        let se = corner(below, r);
        let nw = corner(above, l);
        let ne = corner(above, r);
        let mut sums = [[T::default(); LANES]; 6];
        for i in 0..LANES {
            // Populations that arrive, named by where they come from.
            let from_w = w1 * ((w[0][i] + w[1][i]) + w[2][i]);
            let from_e = w1 * ((e[0][i] - e[1][i]) + e[2][i]);
            let from_s = w1 * ((s[0][i] + s[1][i]) + s[2][i]);
            let from_n = w1 * ((n[0][i] - n[1][i]) + n[2][i]);
            let even = |c: &[&[T; LANES]; 6]| c[0][i] + (c[3][i] + c[4][i]);
            let from_sw = w2 * (even(&sw) + ((sw[1][i] + sw[2][i]) + sw[5][i]));
            let from_se = w2 * (even(&se) + ((se[2][i] - se[1][i]) - se[5][i]));
            let from_nw = w2 * (even(&nw) + ((nw[1][i] - nw[2][i]) - nw[5][i]));
            let from_ne = w2 * (even(&ne) + (ne[5][i] - (ne[1][i] + ne[2][i])));
            let (we, sn) = (from_w + from_e, from_s + from_n);
            let (up, down) = (from_sw + from_se, from_nw + from_ne);
            let diagonals = up + down;
            sums[0][i] = w0 * rest[i] + ((we + sn) + diagonals);
            sums[1][i] = (from_w - from_e) + ((from_sw + from_nw) - (from_se + from_ne));
            sums[2][i] = (from_s - from_n) + (up - down);
            sums[3][i] = we + diagonals;
            sums[4][i] = sn + diagonals;
            sums[5][i] = (from_sw + from_ne) - (from_se + from_nw);
        }
        for (k, sum) in sums.iter().enumerate() {
            out[k * nx + start..k * nx + start + LANES].copy_from_slice(sum);
        }
        stream_flux([below, here, above], out, nx, start);
    }
}

/// First moment of the phase lattice after streaming, for the run at `start`.
#[inline(always)]
fn stream_flux<T: Real>([below, here, above]: [&[T]; 3], out: &mut [T], nx: usize, start: usize) {
    let (w1, w2) = (T::of(1.0 / 9.0), T::of(1.0 / 36.0));
    let at = |row, field: usize, col: usize| run(row, field * nx + col);
    let (l, r) = (start - 1, start + 1);
    let (w, wx) = (at(here, PHASE, l), at(here, FLUX_X, l));
    let (e, ex) = (at(here, PHASE, r), at(here, FLUX_X, r));
    let (s, sy) = (at(below, PHASE, start), at(below, FLUX_Y, start));
    let (n, ny) = (at(above, PHASE, start), at(above, FLUX_Y, start));
    let (sw, swx, swy) = (at(below, PHASE, l), at(below, FLUX_X, l), at(below, FLUX_Y, l));
    let (se, sex, sey) = (at(below, PHASE, r), at(below, FLUX_X, r), at(below, FLUX_Y, r));
    let (nw, nwx, nwy) = (at(above, PHASE, l), at(above, FLUX_X, l), at(above, FLUX_Y, l));
    let (ne, nex, ney) = (at(above, PHASE, r), at(above, FLUX_X, r), at(above, FLUX_Y, r));
    let mut flux = [[T::default(); LANES]; 2];
    for i in 0..LANES {
        let from_sw = sw[i] + (swx[i] + swy[i]);
        let from_se = se[i] + (sey[i] - sex[i]);
        let from_nw = nw[i] + (nwx[i] - nwy[i]);
        let from_ne = ne[i] - (nex[i] + ney[i]);
        flux[0][i] =
            w1 * ((w[i] + wx[i]) - (e[i] - ex[i])) + w2 * ((from_sw + from_nw) - (from_se + from_ne));
        flux[1][i] =
            w1 * ((s[i] + sy[i]) - (n[i] - ny[i])) + w2 * ((from_sw + from_se) - (from_nw + from_ne));
    }
    for (k, sum) in flux.iter().enumerate() {
        out[(6 + k) * nx + start..(6 + k) * nx + start + LANES].copy_from_slice(sum);
    }
}

/// Rows that the collision of one row reads.
#[derive(Debug, Clone, Copy)]
pub(super) struct Row<'a, T> {
    /// φ below, here, above.
    pub phase: [&'a [T]; 3],
    /// [`STREAMED`] rows of moments.
    pub streamed: &'a [T],
    /// 1 where there is fluid, 0 in walls.
    pub fluid: &'a [T],
    /// Viscosity added near open sides.
    pub sponge: &'a [T],
}

/// Collides a row; writes all fields of columns 1..nx − 1, zero in walls.
#[inline(always)]
pub(super) fn collide<T: Real>(row: Row<'_, T>, media: &Media<T>, out: &mut [T], nx: usize) {
    let zero = T::default();
    let one = T::of(1.0);
    let half = T::of(0.5);
    let third = T::of(1.0 / 3.0);
    let three = T::of(3.0);
    let (g1, g2) = (third, T::of(1.0 / 12.0));
    let (l1, l2, l0) = (T::of(2.0 / 3.0), T::of(1.0 / 6.0), T::of(10.0 / 3.0));
    let tiny = T::of(1e-14);
    let m = *media;
    let keep_flux = one - m.omega;
    let sharpen = one - half * m.omega;
    for start in (1..nx - 1).step_by(LANES) {
        let (l, r) = (start - 1, start + 1);
        let [below, here, above] = row.phase;
        let (sw, s, se) = (run(below, l), run(below, start), run(below, r));
        let (w, o, e) = (run(here, l), run(here, start), run(here, r));
        let (nw, n, ne) = (run(above, l), run(above, start), run(above, r));
        let st = |k: usize| run(row.streamed, k * nx + start);
        let (p, jx, jy, pxx, pyy, pxy, fx0, fy0) = (st(0), st(1), st(2), st(3), st(4), st(5), st(6), st(7));
        let (fluid, sponge) = (run(row.fluid, start), run(row.sponge, start));
        let mut post = [[zero; LANES]; FIELDS];
        for i in 0..LANES {
            let phi = o[i];
            let gx = g1 * (e[i] - w[i]) + g2 * ((ne[i] - nw[i]) + (se[i] - sw[i]));
            let gy = g1 * (n[i] - s[i]) + g2 * ((ne[i] - se[i]) + (nw[i] - sw[i]));
            let lap =
                l1 * ((e[i] + w[i]) + (n[i] + s[i])) + l2 * ((ne[i] + nw[i]) + (se[i] + sw[i])) - l0 * phi;
            let low = if phi < zero { zero } else { phi };
            let held = if low > one { one } else { low };
            let rho = m.rho_gas + held * m.rho_step;
            let nu = m.nu_gas + held * m.nu_step + sponge[i];
            let well = phi * (phi - one);
            let mu = m.four_beta * well * (phi - half) - m.kappa * lap;
            let (drx, dry) = (m.rho_step * gx, m.rho_step * gy);
            let rate = one / (three * nu + half);
            let drag = -(three * nu * rate);
            let half_volume = half / rho;
            let pressure = third * p[i];
            let weight = held * m.rho_step;
            let fixed_x = mu * gx - pressure * drx + weight * m.gravity_x;
            let fixed_y = mu * gy - pressure * dry + weight * m.gravity_y;
            let (mxx, myy, mxy) = (pxx[i] - pressure, pyy[i] - pressure, pxy[i]);
            let force = |u: T, v: T| {
                let (sxx, syy, sxy) = (mxx - u * u, myy - v * v, mxy - u * v);
                (fixed_x + drag * (sxx * drx + sxy * dry), fixed_y + drag * (sxy * drx + syy * dry))
            };
            let (ax, ay) = force(jx[i], jy[i]);
            let (fx, fy) = force(jx[i] + half_volume * ax, jy[i] + half_volume * ay);
            let (u, v) = (jx[i] + half_volume * fx, jy[i] + half_volume * fy);
            let keep = one - rate;
            let (uu, vv, uv) = (u * u, v * v, u * v);
            let sxx = uu + keep * (mxx - uu);
            let syy = vv + keep * (myy - vv);
            let sxy = uv + keep * (mxy - uv);
            let steep = (gx * gx + gy * gy).root() + tiny;
            let pull = -(sharpen * m.sharpening * well) / steep;
            let carried = three * m.omega * phi;
            let values = [
                p[i] - T::of(1.5) * (sxx + syy),
                three * (u + half_volume * fx),
                three * (v + half_volume * fy),
                T::of(4.5) * sxx,
                T::of(4.5) * syy,
                T::of(9.0) * sxy,
                phi,
                three * keep_flux * fx0[i] + carried * u + pull * gx,
                three * keep_flux * fy0[i] + carried * v + pull * gy,
            ];
            let open = fluid[i] > half;
            for (field, value) in post.iter_mut().zip(values) {
                field[i] = if open { value } else { zero };
            }
        }
        for (k, field) in post.iter().enumerate() {
            out[k * nx + start..k * nx + start + LANES].copy_from_slice(field);
        }
    }
}
