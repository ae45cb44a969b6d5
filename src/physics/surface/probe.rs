//! Probe liquids for surface energies, at 20 °C.

use super::{AcidBase, Components};

/// A probe liquid with its components.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProbeLiquid {
    /// Identifier, kebab-case.
    pub id: &'static str,
    /// Name in the field's words.
    pub name: &'static str,
    /// Dispersive and polar components, N/m.
    pub components: Components,
    /// Where the components come from.
    pub components_source: &'static str,
    /// Acid–base components, N/m, where they are known.
    pub acid_base: Option<AcidBase>,
    /// Where the acid–base components come from.
    pub acid_base_source: &'static str,
}

const OWENS_WENDT: &str = "Owens & Wendt 1969, doi:10.1002/app.1969.070130815, from memory";
const VAN_OSS: &str = "van Oss, Chaudhury & Good 1988, doi:10.1021/cr00088a006, from memory";
const STROEM: &str = "Ström, Fredriksson & Stenius 1987, J. Colloid Interface Sci. 119, 352, from memory";
const MEMORY: &str = "from memory";

const fn components(dispersive: f64, polar: f64) -> Components {
    Components { dispersive: dispersive * 1e-3, polar: polar * 1e-3 }
}

const fn acid_base(lifshitz: f64, plus: f64, minus: f64) -> Option<AcidBase> {
    Some(AcidBase { lifshitz: lifshitz * 1e-3, plus: plus * 1e-3, minus: minus * 1e-3 })
}

static PROBES: [ProbeLiquid; 8] = [
    ProbeLiquid {
        id: "water",
        name: "Water",
        components: components(21.8, 51.0),
        components_source: OWENS_WENDT,
        acid_base: acid_base(21.8, 25.5, 25.5),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "diiodomethane",
        name: "Diiodomethane",
        components: components(49.5, 1.3),
        components_source: OWENS_WENDT,
        acid_base: acid_base(50.8, 0.0, 0.0),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "formamide",
        name: "Formamide",
        components: components(39.0, 19.0),
        components_source: MEMORY,
        acid_base: acid_base(39.0, 2.28, 39.6),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "ethylene-glycol",
        name: "Ethylene glycol",
        components: components(30.9, 16.8),
        components_source: STROEM,
        acid_base: acid_base(29.0, 1.92, 47.0),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "glycerol",
        name: "Glycerol",
        components: components(37.0, 26.4),
        components_source: STROEM,
        acid_base: acid_base(34.0, 3.92, 57.4),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "dimethyl-sulfoxide",
        name: "Dimethyl sulfoxide",
        components: components(36.0, 8.0),
        components_source: MEMORY,
        acid_base: acid_base(36.0, 0.5, 32.0),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "bromonaphthalene",
        name: "1-Bromonaphthalene",
        components: components(44.4, 0.0),
        components_source: MEMORY,
        acid_base: acid_base(44.4, 0.0, 0.0),
        acid_base_source: VAN_OSS,
    },
    ProbeLiquid {
        id: "hexadecane",
        name: "n-Hexadecane",
        components: components(27.5, 0.0),
        components_source: MEMORY,
        acid_base: acid_base(27.5, 0.0, 0.0),
        acid_base_source: MEMORY,
    },
];

/// The probe liquids that are known, at 20 °C.
#[must_use]
pub fn probe_liquids() -> &'static [ProbeLiquid] {
    &PROBES
}

/// The probe liquid with this identifier.
#[must_use]
pub fn find_probe(id: &str) -> Option<&'static ProbeLiquid> {
    PROBES.iter().find(|p| p.id == id)
}

#[cfg(test)]
mod tests {
    use super::probe_liquids;

    /// Both splits add up to the same surface tension, within what authors differ by (0.7 mN/m).
    #[test]
    fn both_splits_add_up_alike() {
        for probe in probe_liquids() {
            let difference = probe.components.total() - probe.acid_base.unwrap().total();
            assert!(difference.abs() < 0.7e-3, "{}: {difference}", probe.id);
        }
    }
}
