//! What each model of wetting says, side by side, and how sure that is.

use super::{
    request::{Question, TextureRequest},
    solid::{Known, Missing, UNKNOWN_ANGLE, propagated},
};
use crate::{
    analysis::{
        field::Field,
        resolve::wetting_liquid,
        spec::LiquidSpec,
        uncertainty::{DefaultRule, default_rule},
    },
    physics::{
        Basis,
        liquid::Component,
        quantity::DEGREE,
        surface::{
            AcidBase, Components, ModelAngle, ProbeLiquid, WettingLiquid, cassie_baxter, find_probe,
            from_energy, neumann, owens_wendt, van_oss, wenzel, young,
        },
    },
};

/// A model of wetting.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Model {
    /// Young's equation.
    Young,
    /// Owens, Wendt, Rabel & Kaelble.
    OwensWendt,
    /// Van Oss, Chaudhury & Good.
    VanOss,
    /// Neumann's equation of state.
    Neumann,
    /// Wenzel, on a rough face.
    Wenzel,
    /// Cassie & Baxter, on the tips of a texture.
    CassieBaxter,
}

impl Model {
    /// The models of a smooth face, in the order in which they are preferred where they are equally sure.
    pub const SMOOTH: [Self; 4] = [Self::Young, Self::OwensWendt, Self::VanOss, Self::Neumann];

    /// The word used for it in every answer.
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Young => "young",
            Self::OwensWendt => "owens_wendt",
            Self::VanOss => "van_oss",
            Self::Neumann => "neumann",
            Self::Wenzel => "wenzel",
            Self::CassieBaxter => "cassie_baxter",
        }
    }

    /// Where it is published.
    pub const fn source(self) -> &'static str {
        match self {
            Self::Young => "Young 1805, doi:10.1098/rstl.1805.0005",
            Self::OwensWendt => "Owens & Wendt 1969, doi:10.1002/app.1969.070130815",
            Self::VanOss => "van Oss, Chaudhury & Good 1988, doi:10.1021/cr00088a006",
            Self::Neumann => "Li & Neumann 1992, J. Colloid Interface Sci. 148, 190",
            Self::Wenzel => "Wenzel 1936, doi:10.1021/ie50320a024",
            Self::CassieBaxter => "Cassie & Baxter 1944, doi:10.1039/tf9444000546",
        }
    }

    /// Standard uncertainty of the model itself, rad; that of Owens & Wendt and of Neumann is what [`from_energy`] states.
    fn doubt(self) -> f64 {
        match self {
            // It says no more than that the forces balance.
            Self::Young => 0.0,
            Self::OwensWendt => judged(1.0, Some(0.3)),
            Self::VanOss => VAN_OSS_DOUBT,
            Self::Neumann => judged(1.0, None),
            Self::Wenzel => 0.0,
            Self::CassieBaxter => CASSIE_BAXTER_DOUBT,
        }
    }
}

/// Standard uncertainty of an angle after van Oss: 10°, as that after Owens & Wendt (own judgement: water's even split is a convention, and published
/// components of one solid differ by as much as those of the other model).
const VAN_OSS_DOUBT: f64 = 10.0 * DEGREE;
/// Standard uncertainty of an angle on tips besides that of its inputs: 5° (own judgement: real tips are neither flat nor alike).
const CASSIE_BAXTER_DOUBT: f64 = 5.0 * DEGREE;
/// Relative standard uncertainty of a solid fraction (own judgement; read off micrographs).
const SOLID_FRACTION_DOUBT: f64 = 0.1;

/// The doubt that [`from_energy`] states at this roughness, with a liquid whose split is known or is not, rad.
fn judged(roughness_ratio: f64, dispersive_fraction: Option<f64>) -> f64 {
    // Water on a face that it wets, so that every roughness is within Wenzel's equation.
    let liquid =
        WettingLiquid { surface_tension: 0.0728, dispersive_fraction, leaves_film: false, is_water: false };
    from_energy(0.04, 0.04, roughness_ratio, &liquid)
        .map_or(UNKNOWN_ANGLE, |angles| angles.contact.standard_uncertainty)
}

/// What one model says.
#[derive(Debug, Clone, PartialEq)]
pub struct Estimate {
    /// The model.
    pub model: Model,
    /// The angle, or why there is none.
    pub angle: Result<Angle, Missing>,
}

/// An angle with its doubt.
#[derive(Debug, Clone, PartialEq)]
pub struct Angle {
    /// Equilibrium angle, rad.
    pub angle: f64,
    /// Standard uncertainty, rad.
    pub standard_uncertainty: f64,
    /// No drop: the liquid spreads.
    pub spreads: bool,
    /// What both rest on.
    pub detail: String,
}

/// The liquid as the models see it.
#[derive(Debug, Clone, PartialEq)]
pub struct LiquidSide {
    tension: f64,
    /// Standard uncertainty of the surface tension, N/m.
    pub tension_uncertainty: f64,
    dispersive_fraction: Option<f64>,
    probe: Option<&'static ProbeLiquid>,
}

impl LiquidSide {
    /// The liquid of a question.
    pub fn of(question: &Question) -> Self {
        let tension = question.properties.surface_tension;
        let given = tension.basis == Basis::Given;
        let rule = default_rule(Field::MeasuredSurfaceTension).relative;
        let probe = probe_of(&question.liquid);
        let known = wetting_liquid(&question.liquid, &question.properties).dispersive_fraction;
        Self {
            tension: tension.value,
            tension_uncertainty: if given { rule * tension.value } else { tension.standard_uncertainty },
            dispersive_fraction: known
                .or_else(|| probe.map(|p| p.components.dispersive / p.components.total())),
            probe,
        }
    }

    /// The components at this surface tension, in the known proportion.
    fn components(&self, tension: f64) -> Result<Components, Missing> {
        let fraction = self.dispersive_fraction.ok_or(
            "the dispersive share of this liquid's surface tension is not known; GET /v1/liquids tells of which liquids it is",
        )?;
        Ok(Components { dispersive: fraction * tension, polar: (1.0 - fraction) * tension })
    }

    /// The components after van Oss at this surface tension, in the probe liquid's proportions.
    fn acid_base(&self, tension: f64) -> Result<AcidBase, Missing> {
        let at_20 = self.probe.and_then(|probe| probe.acid_base).ok_or(
            "the acid–base components of this liquid are not known: they are of water, ethylene-glycol and pure glycerol with the catalogue's surface tension",
        )?;
        let scale = tension / at_20.total();
        Ok(AcidBase {
            lifshitz: scale * at_20.lifshitz,
            plus: scale * at_20.plus,
            minus: scale * at_20.minus,
        })
    }
}

/// The probe liquid that this liquid is, if it is one and its surface tension is the catalogue's.
pub fn probe_of(liquid: &LiquidSpec) -> Option<&'static ProbeLiquid> {
    let LiquidSpec::Catalogue { entry, conditions, overrides } = liquid else { return None };
    let pure = conditions.get(Component::MassFraction).is_some_and(|fraction| fraction >= 1.0);
    let id = match entry.id {
        "glycerol-solution" if pure => "glycerol",
        id => id,
    };
    find_probe(id).filter(|_| overrides.surface_tension_mn_m.is_none())
}

/// What all models say of a question: those of a smooth face, then those of a rough or textured one, which stand on the surest of the first.
pub fn estimates(question: &Question) -> Vec<Estimate> {
    let liquid = LiquidSide::of(question);
    let smooth = Smooth { solid: &question.solid, liquid: &liquid };
    let mut found: Vec<Estimate> = Model::SMOOTH.into_iter().map(|model| smooth.estimate(model)).collect();
    let ground = surest(&found).map(|(model, _)| model);
    for model in [Model::Wenzel, Model::CassieBaxter] {
        let angle = textured(model, question.texture, ground, &smooth);
        found.push(Estimate { model, angle });
    }
    found
}

/// The applying estimate with the smallest standard uncertainty; the earlier one where they are equal.
pub fn surest(estimates: &[Estimate]) -> Option<(Model, &Angle)> {
    let mut best: Option<(Model, &Angle)> = None;
    for estimate in estimates {
        if let Ok(angle) = &estimate.angle
            && best.is_none_or(|(_, known)| angle.standard_uncertainty < known.standard_uncertainty)
        {
            best = Some((estimate.model, angle));
        }
    }
    best
}

/// A smooth face and the liquid on it.
struct Smooth<'a> {
    solid: &'a Known,
    liquid: &'a LiquidSide,
}

impl Smooth<'_> {
    /// The solid's numbers and the surface tension after them.
    fn numbers(&self) -> (Vec<f64>, Vec<f64>) {
        let mut numbers = self.solid.numbers.clone();
        numbers.push(self.liquid.tension);
        let mut uncertainties = self.solid.uncertainties.clone();
        uncertainties.push(self.liquid.tension_uncertainty);
        (numbers, uncertainties)
    }

    /// What `model` says of numbers as [`Self::numbers`] gives them.
    fn angle(&self, model: Model, numbers: &[f64]) -> Result<ModelAngle, Missing> {
        let Some((&tension, solid)) = numbers.split_last() else { return Err("needs a liquid".into()) };
        let kind = &self.solid.kind;
        match model {
            Model::Young => {
                let (vapour, liquid) = kind.interfacial(solid)?;
                young(vapour, liquid, tension)
            }
            Model::OwensWendt => owens_wendt(&kind.components(solid)?, &self.liquid.components(tension)?),
            Model::VanOss => van_oss(&kind.acid_base(solid)?, &self.liquid.acid_base(tension)?),
            Model::Neumann => neumann(kind.total(solid)?, tension),
            Model::Wenzel | Model::CassieBaxter => return Err("needs a texture".into()),
        }
        .map_err(|fault| fault.to_string())
    }

    fn estimate(&self, model: Model) -> Estimate {
        let (numbers, uncertainties) = self.numbers();
        let angle = self.angle(model, &numbers).map(|ModelAngle { angle, spreads }| {
            let inputs = propagated(&numbers, &uncertainties, |shifted| {
                self.angle(model, shifted).ok().map(|moved| moved.angle)
            });
            let doubt = model.doubt();
            Angle {
                angle,
                spreads,
                standard_uncertainty: libm::hypot(doubt, inputs).min(UNKNOWN_ANGLE),
                detail: format!("{}; uncertainty: {}", self.rests_on(model), parts(doubt, inputs)),
            }
        });
        Estimate { model, angle }
    }

    fn rests_on(&self, model: Model) -> String {
        let solid = if self.solid.kind.basis() == "given" { "given" } else { "found from the probe angles" };
        match model {
            Model::Young => "rests on the interfacial energies given".into(),
            Model::OwensWendt => {
                let share = self.liquid.dispersive_fraction.unwrap_or_default();
                format!(
                    "rests on the solid's components {solid} and a dispersive share of {share:.3} of the liquid's surface tension"
                )
            }
            Model::VanOss => format!(
                "rests on the solid's acid–base components {solid} and the liquid's at 20 °C, scaled to its surface tension"
            ),
            _ => {
                format!("rests on the solid's total surface energy {solid} and the liquid's surface tension")
            }
        }
    }
}

fn parts(doubt: f64, inputs: f64) -> String {
    let model = if doubt > 0.0 {
        format!("{:.1}° for the model (own judgement), ", doubt / DEGREE)
    } else {
        String::new()
    };
    let most = if libm::hypot(doubt, inputs) > UNKNOWN_ANGLE {
        "; together no more than 52.0°, that of an angle of which nothing is known"
    } else {
        ""
    };
    format!("{model}{:.1}° from the numbers it rests on{most}", inputs / DEGREE)
}

/// The angle on a rough or textured face, from that of the `ground` model on a smooth one.
fn textured(
    model: Model,
    texture: Option<TextureRequest>,
    ground: Option<Model>,
    smooth: &Smooth<'_>,
) -> Result<Angle, Missing> {
    let (number, uncertainty) = match (model, texture) {
        (Model::Wenzel, Some(TextureRequest::RoughnessRatio(ratio))) => {
            let DefaultRule { relative, at_least } = default_rule(Field::Roughness);
            (ratio.get(), (relative * ratio.get()).max(at_least))
        }
        (Model::CassieBaxter, Some(TextureRequest::SolidFraction(fraction))) => {
            (fraction.get(), SOLID_FRACTION_DOUBT * fraction.get())
        }
        (Model::Wenzel, _) => return Err("needs texture/roughness_ratio".into()),
        _ => return Err("needs texture/solid_fraction".into()),
    };
    let ground = ground.ok_or("needs the contact angle of the smooth face, which no model gives")?;
    // After the smooth face's numbers: the texture's, and what the smooth face's angle is off by.
    let (mut numbers, mut uncertainties) = smooth.numbers();
    numbers.extend([number, 0.0]);
    uncertainties.extend([uncertainty, ground.doubt()]);
    let on_texture = |numbers: &[f64]| {
        let [before @ .., number, off] = numbers else { return Err("needs a texture".to_owned()) };
        let flat = smooth.angle(ground, before)?;
        let angle = flat.angle + off;
        let found = match model {
            Model::Wenzel => wenzel(angle, *number),
            _ => cassie_baxter(angle, *number),
        };
        let found = found.map_err(|fault| fault.to_string())?;
        Ok(ModelAngle { spreads: found.spreads || flat.spreads, ..found })
    };
    let ModelAngle { angle, spreads } = on_texture(&numbers)?;
    let inputs = propagated(&numbers, &uncertainties, |shifted| on_texture(shifted).ok().map(|a| a.angle));
    let doubt = match model {
        // What `from_energy` adds for roughness.
        Model::Wenzel => {
            let (rough, flat) = (judged(number, None), judged(1.0, None));
            (rough * rough - flat * flat).max(0.0).sqrt()
        }
        _ => model.doubt(),
    };
    Ok(Angle {
        angle,
        spreads,
        standard_uncertainty: libm::hypot(doubt, inputs).min(UNKNOWN_ANGLE),
        detail: format!(
            "rests on the smooth face's angle by {} and the texture given; uncertainty: {}",
            ground.as_str(),
            parts(doubt, inputs)
        ),
    })
}
