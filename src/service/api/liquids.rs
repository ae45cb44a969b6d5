//! `GET /v1/liquids` and `GET /v1/liquids/{id}`: what the catalogue knows of liquids.

use crate::physics::liquid::{Conditions, Entry};

/// What the correlations of an entry give across its region: for the catalogue's digest.
#[must_use]
pub fn samples(entry: &Entry) -> Vec<[f64; 3]> {
    let steps = [0.05, 0.3, 0.6, 0.95];
    let mut found = Vec::new();
    for share in steps {
        let mut conditions = Conditions::at(20.0);
        for parameter in entry.parameters {
            conditions.set(
                parameter.component,
                parameter.minimum + share * (parameter.maximum - parameter.minimum),
            );
        }
        let Some((low, high)) = entry.temperatures_c(&conditions) else { continue };
        for t in steps {
            conditions.temperature_c = low + t * (high - low);
            if let Ok(p) = entry.properties(&conditions) {
                found.push([p.density.value, p.viscosity.value, p.surface_tension.value]);
            }
        }
    }
    found
}
