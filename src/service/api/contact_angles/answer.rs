//! The contact-angle answer.

use serde::Serialize;
use utoipa::ToSchema;

use super::{
    estimates::{Estimate, LiquidSide, estimates, probe_of, surest},
    request::{Question, TextureRequest},
    solid::{Known, Solid, propagated},
};
use crate::{
    analysis::{notice::Notice, spec::LiquidSpec},
    physics::{
        quantity::{DEGREE, SURFACE_ENERGY, SURFACE_TENSION},
        surface::wettability,
    },
    service::{
        api::{liquids::leaves_film, notice::NoticeAnswer, property::PropertyAnswer, quantity::Number},
        fingerprint::ModelAnswer,
    },
};

/// What the models say, side by side.
#[derive(Debug, Serialize, ToSchema)]
pub struct ContactAnglesAnswer<'a> {
    /// Every model, also those that do not apply: `young`, `owens_wendt`, `van_oss` and `neumann` on a smooth face, `wenzel` and `cassie_baxter` on the texture given.
    pub estimates: Vec<EstimateAnswer<'a>>,
    /// How the face takes to the liquid by the best estimate: `hydrophilic` (below 89°), `neutral`, `hydrophobic` (above 91°) or `superhydrophobic` (150° and more);
    /// null where no model applies.
    #[schema(example = "hydrophilic")]
    pub wettability: Option<&'static str>,
    /// The model whose estimate that is: the textured face's where a texture is given and its model applies, else the one with the smallest standard uncertainty.
    #[schema(example = "owens_wendt")]
    pub wettability_by: Option<&'static str>,
    /// The solid's surface energies, as given or as found from the probe angles.
    pub solid: SolidAnswer,
    /// Surface tension of the liquid, mN/m.
    pub surface_tension_mn_m: PropertyAnswer,
    /// Where a number deserves less trust.
    pub warnings: Vec<NoticeAnswer<'a>>,
    /// What computed this answer.
    pub model: ModelAnswer,
}

/// What one model says.
#[derive(Debug, Serialize, ToSchema)]
pub struct EstimateAnswer<'a> {
    /// The model.
    #[schema(example = "owens_wendt")]
    pub model: &'static str,
    /// Whether it can say anything of this solid and this liquid.
    pub applies: bool,
    /// Equilibrium contact angle through the liquid, degrees, 0 where the liquid spreads; null where the model does not apply.
    #[schema(value_type = Option<f64>, minimum = 0, maximum = 180)]
    pub contact_angle_deg: Option<Number>,
    /// Its standard uncertainty, degrees; null where the model does not apply.
    #[schema(value_type = Option<f64>, minimum = 0)]
    pub standard_uncertainty_deg: Option<Number>,
    /// Whether the liquid spreads to a film.
    pub spreads: bool,
    /// What angle and uncertainty rest on, or what is missing or contradicts.
    pub detail: &'a str,
    /// Where the model is published (digital object identifiers from memory).
    pub source: &'static str,
}

/// Surface energies of the solid; null what does not follow from what was given (the estimates say why).
#[derive(Debug, Serialize, ToSchema)]
pub struct SolidAnswer {
    /// Dispersive and polar component after Owens & Wendt.
    pub components: Option<ComponentsAnswer>,
    /// Components after van Oss, Chaudhury & Good.
    pub acid_base: Option<AcidBaseAnswer>,
    /// Total surface energy as Neumann's equation of state takes it; of probe angles, the mean of what it finds from each.
    pub total_mn_m: Option<EnergyValue>,
    /// Energies of the two interfaces.
    pub interfacial: Option<InterfacialAnswer>,
    /// What these numbers rest on: `given`, or `derived` (from the probe angles).
    #[schema(example = "derived")]
    pub basis: &'static str,
}

/// Components after Owens & Wendt.
#[derive(Debug, Serialize, ToSchema)]
pub struct ComponentsAnswer {
    /// Dispersive component.
    pub dispersive_mn_m: EnergyValue,
    /// Polar component.
    pub polar_mn_m: EnergyValue,
    /// Their sum.
    pub total_mn_m: EnergyValue,
}

/// Components after van Oss, Chaudhury & Good.
#[derive(Debug, Serialize, ToSchema)]
pub struct AcidBaseAnswer {
    /// Lifshitz–van der Waals component.
    pub lw_mn_m: EnergyValue,
    /// Electron-acceptor component.
    pub plus_mn_m: EnergyValue,
    /// Electron-donor component.
    pub minus_mn_m: EnergyValue,
    /// Acid–base part 2√(γ⁺γ⁻).
    pub acid_base_mn_m: EnergyValue,
    /// Total.
    pub total_mn_m: EnergyValue,
}

/// Energies of the two interfaces.
#[derive(Debug, Serialize, ToSchema)]
pub struct InterfacialAnswer {
    /// Against vapour.
    pub solid_vapour_mn_m: EnergyValue,
    /// Against the liquid.
    pub solid_liquid_mn_m: EnergyValue,
}

/// A surface energy with its doubt.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct EnergyValue {
    /// The value, mN/m.
    #[schema(value_type = f64)]
    pub value: Number,
    /// Its standard uncertainty, mN/m: that of the numbers given, carried through. What the model itself is off by is not in it.
    #[schema(value_type = f64)]
    pub standard_uncertainty: Number,
}

/// What is written of a question.
#[derive(Debug)]
pub struct Findings {
    estimates: Vec<Estimate>,
    warnings: Vec<Notice>,
}

impl Findings {
    /// What the models say of this question.
    pub fn of(question: &Question) -> Self {
        let estimates = estimates(question);
        let warnings = warnings(question, &estimates);
        Self { estimates, warnings }
    }
}

impl<'a> ContactAnglesAnswer<'a> {
    /// The answer to a question.
    pub fn new(question: &Question, findings: &'a Findings, model: ModelAnswer) -> Self {
        let best = best(&findings.estimates);
        Self {
            estimates: findings.estimates.iter().map(EstimateAnswer::from).collect(),
            wettability: best.map(|(_, angle)| wettability(angle)),
            wettability_by: best.map(|(model, _)| model),
            solid: SolidAnswer::from(&question.solid),
            surface_tension_mn_m: PropertyAnswer::new(
                &question.properties.surface_tension,
                &SURFACE_TENSION,
                Some(LiquidSide::of(question).tension_uncertainty / SURFACE_TENSION.to_si),
            ),
            warnings: findings.warnings.iter().map(NoticeAnswer::from).collect(),
            model,
        }
    }
}

/// The best estimate: on the texture, else the surest one.
fn best(estimates: &[Estimate]) -> Option<(&'static str, f64)> {
    let (smooth, on_texture) = estimates.split_at(4);
    surest(on_texture).or_else(|| surest(smooth)).map(|(model, angle)| (model.as_str(), angle.angle))
}

impl<'a> From<&'a Estimate> for EstimateAnswer<'a> {
    fn from(estimate: &'a Estimate) -> Self {
        let angle = estimate.angle.as_ref().ok();
        Self {
            model: estimate.model.as_str(),
            applies: angle.is_some(),
            contact_angle_deg: angle.map(|a| Number(a.angle / DEGREE)),
            standard_uncertainty_deg: angle.map(|a| Number(a.standard_uncertainty / DEGREE)),
            spreads: angle.is_some_and(|a| a.spreads),
            detail: match &estimate.angle {
                Ok(angle) => &angle.detail,
                Err(missing) => missing,
            },
            source: estimate.model.source(),
        }
    }
}

impl From<&Known> for SolidAnswer {
    fn from(solid: &Known) -> Self {
        let Known { kind, numbers, uncertainties } = solid;
        let value = |f: &dyn Fn(&[f64]) -> Option<f64>| {
            let si = f(numbers)?;
            Some(EnergyValue {
                value: Number(si / SURFACE_ENERGY.to_si),
                standard_uncertainty: Number(propagated(numbers, uncertainties, f) / SURFACE_ENERGY.to_si),
            })
        };
        let components = || {
            Some(ComponentsAnswer {
                dispersive_mn_m: value(&|n| Some(kind.components(n).ok()?.dispersive))?,
                polar_mn_m: value(&|n| Some(kind.components(n).ok()?.polar))?,
                total_mn_m: value(&|n| Some(kind.components(n).ok()?.total()))?,
            })
        };
        let acid_base = || {
            Some(AcidBaseAnswer {
                lw_mn_m: value(&|n| Some(kind.acid_base(n).ok()?.lifshitz))?,
                plus_mn_m: value(&|n| Some(kind.acid_base(n).ok()?.plus))?,
                minus_mn_m: value(&|n| Some(kind.acid_base(n).ok()?.minus))?,
                acid_base_mn_m: value(&|n| Some(kind.acid_base(n).ok()?.acid_base()))?,
                total_mn_m: value(&|n| Some(kind.acid_base(n).ok()?.total()))?,
            })
        };
        let interfacial = || {
            Some(InterfacialAnswer {
                solid_vapour_mn_m: value(&|n| Some(kind.interfacial(n).ok()?.0))?,
                solid_liquid_mn_m: value(&|n| Some(kind.interfacial(n).ok()?.1))?,
            })
        };
        Self {
            components: components(),
            acid_base: acid_base(),
            total_mn_m: value(&|n| kind.total(n).ok()),
            interfacial: interfacial(),
            basis: kind.basis(),
        }
    }
}

/// Where the angles deserve less trust.
fn warnings(question: &Question, estimates: &[Estimate]) -> Vec<Notice> {
    let mut found = vec![Notice::new(
        "one_equilibrium_angle",
        "Each model predicts one equilibrium angle. A lip needs two others: the advancing angle, at which a dry face is wetted, and the receding one, at which a wet face lets go. Measure them where you can.",
    )];
    let (smooth, on_texture) = estimates.split_at(4);
    if question.texture.is_some() && on_texture.iter().all(|estimate| estimate.angle.is_err()) {
        found.push(Notice::at(
            "texture_not_applied",
            "/texture",
            "The texture's model does not apply here; its estimate says why, and the wettability is that of a smooth face.",
        ));
    }
    if matches!(question.texture, Some(TextureRequest::SolidFraction(_))) && on_texture[1].angle.is_ok() {
        found.push(Notice::at(
            "texture_may_fill",
            "/texture/solid_fraction",
            "Liquid stands on the tips only as long as nothing presses it in: impact, pressure, a fall in surface tension or wear can fill the texture for good.",
        ));
    }
    if disagree(smooth) {
        found.push(Notice::new(
            "models_disagree",
            "The models differ by more than twice their joint standard uncertainty: at least one does not fit this solid or this liquid.",
        ));
    }
    if let (Solid::Probes(probes), Some(liquid)) = (&question.solid.kind, probe_of(&question.liquid))
        && probes.iter().any(|probe| probe.id == liquid.id)
    {
        found.push(Notice::at(
            "measured_angle_at_hand",
            "/solid/probe_angles",
            "This liquid is one of the probe liquids: on a smooth face at 20 °C the angle measured with it is better than any estimate.",
        ));
    }
    liquid_warnings(question, &mut found);
    found
}

fn liquid_warnings(question: &Question, found: &mut Vec<Notice>) {
    let LiquidSpec::Catalogue { entry, .. } = &question.liquid else { return };
    let tension = &question.properties.surface_tension;
    if !tension.within_range {
        let detail =
            format!("The surface tension is extrapolated: {} covers {}.", tension.source, tension.range);
        found.push(Notice::at("outside_correlation_range", "/liquid/catalogue", detail));
    }
    if entry.wetting.leaves_film {
        found.push(leaves_film("/liquid/catalogue/id"));
    }
}

/// Whether two estimates differ by more than twice their joint standard uncertainty.
fn disagree(estimates: &[Estimate]) -> bool {
    let angles: Vec<_> = estimates.iter().filter_map(|estimate| estimate.angle.as_ref().ok()).collect();
    angles.iter().enumerate().any(|(i, a)| {
        angles[..i].iter().any(|b| {
            let joint = libm::hypot(a.standard_uncertainty, b.standard_uncertainty);
            (a.angle - b.angle).abs() > 2.0 * joint
        })
    })
}
