//! Lip materials and finishes, and how liquids wet them.
//!
//! Angles are measured through the liquid, in radians; surface energies are in N/m (J/m²).
//!
//! A lip needs an advancing angle (a dry outer face is wetted at it) and a receding one (a wet face holds on at it).
//! Measured angles ([`from_measured`]) are the best source, the [`catalogue`] the next, and the models of one equilibrium
//! angle ([`from_energy`], and the files of this module one by one) the last resort, with a wide band.

mod angle;
mod catalogue;
mod energy;
mod fault;
mod material;
mod measured;
mod neumann;
mod owens_wendt;
mod probe;
mod texture;
mod transfer;
mod van_oss;
mod young;

pub use angle::{AngleEstimate, ModelAngle, Wettability, WettingAngles, wettability};
pub use catalogue::{catalogue, find};
pub use energy::{Components, from_energy};
pub use fault::SurfaceFault;
pub use material::{AngleBand, Confidence, Finish, Material, State, States, SurfaceEnergy, SurfaceKind};
pub use measured::{Assumed, MeasuredAngles, MeasuredUncertainty, from_measured};
pub use neumann::{neumann, neumann_inverse};
pub use owens_wendt::{ComponentProbe, owens_wendt, owens_wendt_inverse};
pub use probe::{ProbeLiquid, find_probe, probe_liquids};
pub use texture::{cassie_baxter, crossover_angle, wenzel};
pub use transfer::{WATER, WettingLiquid};
pub use van_oss::{AcidBase, AcidBaseProbe, van_oss, van_oss_inverse};
pub use young::young;
