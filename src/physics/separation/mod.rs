//! Does the stream leave, or does it cling?
//!
//! A stream that reaches the edge of a lip leaves when its inertia outweighs what holds it to the wall. The measure of inertia is the
//! Weber number of the approach film, the threshold is the critical Weber number, and the verdict goes by their ratio.
//!
//! # The sharp-edge balance
//!
//! Own derivation. Take the sheet that has just turned parallel to the outer wall of an ideally sharp edge, and write momentum along
//! that wall, neglecting wall shear and the suction on the floor. The film brings β ρU²h per width along the floor, of which
//! cos α points along the wall; it leaves along the wall with β ρU²h; so turning it takes β ρU²h (1 − cos α). What pulls: at the contact line the wall
//! (γ_SV − γ_SL = γ cos θ by Young) and, on the two surfaces of the sheet, 2γ less the γ cos α that the upstream surface takes back. At the threshold
//!
//! β ρU²h (1 − cos α) + γ cos α = 2γ + γ cos θ,   so   **β We_c = 1 + E/(1 − cos α)**,  E = 1 + cos θ.
//!
//! It says why an undercut (a larger turn α) helps and a shallow turn hurts. [`closed_form`] keeps this limit's shape and adds the radius, viscosity and
//! gravity.
//!
//! # Scales
//!
//! Everywhere h and U are thickness and mean speed of the approach film: on the floor a few thicknesses before the edge, before the brink draws the film
//! down. See [`numbers::Numbers`].

pub mod adhesion;
pub mod closed_form;
pub mod deflection;
pub mod free_surface;
pub mod numbers;
pub mod pinning;
