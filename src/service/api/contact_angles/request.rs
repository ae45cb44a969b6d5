//! The contact-angle request. Members stand in alphabetical order, so that what serde writes is already in RFC 8785 order.

use std::{borrow::Cow, sync::OnceLock};

use serde::{Deserialize, Deserializer, Serialize, Serializer, de};
use utoipa::{
    PartialSchema, ToSchema,
    openapi::{ObjectBuilder, RefOr, Type, schema::Schema},
};

use super::solid::{Known, Solid};
use crate::{
    analysis::{
        fault::Fault,
        field::Field,
        resolve::resolve_liquid,
        spec::LiquidSpec,
        uncertainty::{DefaultRule, default_rule},
    },
    physics::{
        liquid::Properties,
        quantity::{self, DEGREE},
        separation::closed_form::{CoefficientSet, DEFAULT_SET, SETS},
        surface::{ProbeLiquid, find_probe, probe_liquids},
    },
    service::{
        api::{
            liquid::LiquidRequest,
            quantity::{ContactAngle, RoughnessRatio, SolidFraction, SurfaceEnergy, given},
        },
        explain::{Contract, Request},
        nearest::quoted,
    },
};

/// Which contact angle do published models predict from surface energies, roughness or texture?
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
#[schema(examples(example))]
pub struct ContactAnglesRequest {
    /// Coefficient set, by name; default the newest. No model of this resource uses one: the name is kept for the record.
    #[serde(default = "default_coefficients")]
    #[schema(example = "set-1")]
    pub coefficients: String,
    /// The liquid whose contact angle is asked for.
    pub liquid: LiquidRequest,
    /// What is known of the solid.
    pub solid: SolidRequest,
    /// Roughness or texture of the face; default smooth.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub texture: Option<TextureRequest>,
}

/// What is known of the solid: exactly one member names the way it is known.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SolidRequest {
    /// Dispersive and polar component (Owens & Wendt).
    Components(ComponentsRequest),
    /// Lifshitz–van der Waals, electron-acceptor and electron-donor component (van Oss, Chaudhury & Good).
    AcidBase(AcidBaseRequest),
    /// Total surface energy only.
    Total(TotalRequest),
    /// Energies of the solid against vapour and against the liquid (Young).
    Interfacial(InterfacialRequest),
    /// Contact angles measured with probe liquids at 20 °C: two or more for Owens & Wendt, three or more (two of them polar) for van Oss.
    ProbeAngles(ProbeAngles),
}

/// Dispersive and polar component of the surface energy. Standard uncertainty of each: 5 %, at least 0.5 mN/m.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ComponentsRequest {
    /// Dispersive component.
    pub dispersive_mn_m: SurfaceEnergy,
    /// Polar component.
    pub polar_mn_m: SurfaceEnergy,
}

/// Components after van Oss, Chaudhury & Good. Standard uncertainty of each: 5 %, at least 0.5 mN/m.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct AcidBaseRequest {
    /// Lifshitz–van der Waals component.
    pub lw_mn_m: SurfaceEnergy,
    /// Electron-donor component.
    pub minus_mn_m: SurfaceEnergy,
    /// Electron-acceptor component.
    pub plus_mn_m: SurfaceEnergy,
}

/// Total surface energy. Standard uncertainty: 5 %, at least 0.5 mN/m.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct TotalRequest {
    /// Total surface energy.
    pub total_mn_m: SurfaceEnergy,
}

/// Energies of the solid's two interfaces. Standard uncertainty of each: 5 %, at least 0.5 mN/m.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct InterfacialRequest {
    /// Energy of the solid against this liquid.
    pub solid_liquid_mn_m: SurfaceEnergy,
    /// Energy of the solid against the liquid's vapour.
    pub solid_vapour_mn_m: SurfaceEnergy,
}

/// Contact angles of probe liquids.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(transparent)]
#[schema(min_items = 1, max_items = 32)]
pub struct ProbeAngles(pub Vec<ProbeAngleRequest>);

/// The most probe angles that are taken; the schema of [`ProbeAngles`] names it too.
const MOST_PROBES: usize = 32;

/// The contact angle that a probe liquid makes.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct ProbeAngleRequest {
    /// Static contact angle. Standard uncertainty: 3°.
    pub contact_angle_deg: ContactAngle,
    /// The probe liquid, at 20 °C.
    pub liquid: ProbeName,
}

/// The identifier of a probe liquid.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProbeName(&'static ProbeLiquid);

impl<'de> Deserialize<'de> for ProbeName {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let id = Cow::<'de, str>::deserialize(deserializer)?;
        find_probe(&id).map(Self).ok_or_else(|| {
            de::Error::invalid_value(de::Unexpected::Str(&id), &"the identifier of a probe liquid")
        })
    }
}

impl Serialize for ProbeName {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.0.id)
    }
}

impl PartialSchema for ProbeName {
    fn schema() -> RefOr<Schema> {
        ObjectBuilder::new()
            .schema_type(Type::String)
            .enum_values(Some(probe_liquids().iter().map(|probe| probe.id)))
            .description(Some("identifier of a probe liquid"))
            .examples(["diiodomethane"])
            .into()
    }
}

impl ToSchema for ProbeName {
    fn name() -> Cow<'static, str> {
        Cow::Borrowed("ProbeName")
    }
}

/// What the face is like: exactly one member.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum TextureRequest {
    /// Ratio of true to projected area of a face that the liquid fills (Wenzel). Standard uncertainty: 5 %.
    RoughnessRatio(RoughnessRatio),
    /// Fraction of the projected area where liquid touches solid, on a texture that carries it on flat tips (Cassie & Baxter). Standard uncertainty: 10 %.
    SolidFraction(SolidFraction),
}

/// The question in physics' terms.
#[derive(Debug)]
pub struct Question {
    /// The liquid.
    pub liquid: LiquidSpec,
    /// Its properties.
    pub properties: Properties,
    /// What is known of the solid.
    pub solid: Known,
    /// Roughness or texture.
    pub texture: Option<TextureRequest>,
    /// Coefficient set, for the record.
    pub coefficients: &'static CoefficientSet,
}

fn default_coefficients() -> String {
    DEFAULT_SET.id.to_owned()
}

/// A realistic request.
pub const EXAMPLE: &str = include_str!("example.json");

fn example() -> serde_json::Value {
    serde_json::from_str(EXAMPLE).unwrap_or_default()
}

impl ContactAnglesRequest {
    /// The question asked.
    ///
    /// # Errors
    /// Every name that is not known, every fault of the liquid's conditions, and a wrong count of probe angles, together.
    pub fn question(&self) -> Result<Question, Vec<Fault>> {
        let mut faults = Vec::new();
        let coefficients = CoefficientSet::named(&self.coefficients);
        if coefficients.is_none() {
            let detail = format!("there is no coefficient set {}", quoted(&self.coefficients));
            let ids = SETS.iter().map(|set| set.id);
            faults.push(Fault::new("/coefficients", "unknown_id", detail).choices(ids));
        }
        let liquid = self.liquid.spec("/liquid").map_err(|fault| vec![fault]).and_then(|liquid| {
            let properties = resolve_liquid(&liquid)?;
            Ok((liquid, properties))
        });
        let liquid = liquid.map_err(|mut found| faults.append(&mut found)).ok();
        let solid = self.solid.known().map_err(|fault| faults.push(fault)).ok();
        match (coefficients, liquid, solid) {
            (Some(coefficients), Some((liquid, properties)), Some(solid)) => {
                Ok(Question { liquid, properties, solid, texture: self.texture, coefficients })
            }
            _ => Err(faults),
        }
    }
}

impl SolidRequest {
    fn known(&self) -> Result<Known, Fault> {
        let energies = |kind: Solid, given: &[SurfaceEnergy]| {
            let DefaultRule { relative, at_least } = default_rule(Field::Dispersive);
            let values: Vec<f64> = given.iter().map(|energy| energy.get()).collect();
            let to_si = quantity::SURFACE_ENERGY.to_si;
            Known {
                kind,
                uncertainties: values.iter().map(|v| (relative * v).max(at_least) * to_si).collect(),
                numbers: values.into_iter().map(|v| v * to_si).collect(),
            }
        };
        Ok(match self {
            Self::Components(c) => energies(Solid::Components, &[c.dispersive_mn_m, c.polar_mn_m]),
            Self::AcidBase(c) => energies(Solid::AcidBase, &[c.lw_mn_m, c.plus_mn_m, c.minus_mn_m]),
            Self::Total(c) => energies(Solid::Total, &[c.total_mn_m]),
            Self::Interfacial(c) => energies(Solid::Interfacial, &[c.solid_vapour_mn_m, c.solid_liquid_mn_m]),
            Self::ProbeAngles(ProbeAngles(probes)) => {
                if probes.is_empty() || probes.len() > MOST_PROBES {
                    let detail = format!("{} are given; accepted: 1 to {MOST_PROBES}", probes.len());
                    let fault = Fault::new("/solid/probe_angles", "wrong_count", detail);
                    return Err(fault.within(1.0, MOST_PROBES as f64));
                }
                let each = default_rule(Field::MeasuredContact).at_least * DEGREE;
                Known {
                    kind: Solid::Probes(probes.iter().map(|probe| probe.liquid.0).collect()),
                    numbers: probes.iter().map(|probe| probe.contact_angle_deg.get() * DEGREE).collect(),
                    uncertainties: vec![each; probes.len()],
                }
            }
        })
    }
}

impl Request for ContactAnglesRequest {
    fn sound() -> &'static str {
        EXAMPLE
    }

    fn contract() -> &'static OnceLock<Contract> {
        static CONTRACT: OnceLock<Contract> = OnceLock::new();
        &CONTRACT
    }

    fn faults(&self) -> Vec<Fault> {
        self.question().err().unwrap_or_default()
    }
}

#[cfg(test)]
mod tests {
    use super::{ContactAnglesRequest, EXAMPLE};

    /// The fingerprint is taken over what serde writes, so that must stand in RFC 8785 order whatever the alternative.
    #[test]
    fn every_alternative_serialises_in_canonical_order() {
        let liquid = r#"{"measured": {"viscosity_mpa_s": 1.5, "surface_tension_mn_m": 46.5, "density_kg_m3": 1030.5}}"#;
        for solid in [
            r#"{"components": {"polar_mn_m": 1.5, "dispersive_mn_m": 30.5}}"#,
            r#"{"acid_base": {"plus_mn_m": 1.5, "minus_mn_m": 2.5, "lw_mn_m": 30.5}}"#,
            r#"{"total": {"total_mn_m": 30.5}}"#,
            r#"{"interfacial": {"solid_vapour_mn_m": 1.5, "solid_liquid_mn_m": 30.5}}"#,
            r#"{"probe_angles": [{"liquid": "water", "contact_angle_deg": 80.5}]}"#,
        ] {
            let text =
                format!(r#"{{"texture": {{"solid_fraction": 0.5}}, "solid": {solid}, "liquid": {liquid}}}"#);
            let request: ContactAnglesRequest = serde_json::from_str(&text).unwrap();
            let written = serde_json::to_string(&request).unwrap();
            let canonical = serde_json_canonicalizer::to_string(&serde_json::to_value(&request).unwrap());
            assert_eq!(written, canonical.unwrap());
        }
        assert!(serde_json::from_str::<ContactAnglesRequest>(EXAMPLE).is_ok());
    }
}
