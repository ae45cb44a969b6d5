//! From a question to a case: units, catalogue values, uncertainties. The only place where a question's faults are found.

use super::{
    case::{Case, Confidence, Input, Inputs, Primary, Shift, Source},
    fault::Fault,
    field::Field,
    spec::{LiquidSpec, OuterFace, SectionSpec, Spec, SurfaceSpec},
    uncertainty::standard_uncertainty,
};
use crate::physics::{
    Basis,
    lip::{Edge, Lip, Run, Section},
    liquid::{ConditionFault, Properties, Property},
    quantity::{self, DEGREE},
    surface::{
        Assumed, MeasuredAngles, MeasuredUncertainty, SurfaceFault, WettingAngles, WettingLiquid,
        from_energy, from_measured,
    },
};

/// A case with what it was made from.
#[derive(Debug, Clone)]
pub struct Resolved {
    /// The case.
    pub case: Case,
    /// Properties of the liquid, each with its source.
    pub liquid: Properties,
    /// The liquid as wetting sees it.
    pub wetting_liquid: WettingLiquid,
    /// Contact angles with their sources.
    pub angles: WettingAngles,
    /// Which of the angles were assumed from the others.
    pub assumed: Assumed,
}

/// Liquid and surface of a question, with their uncertain inputs.
#[derive(Debug, Clone)]
pub struct Condition {
    /// Properties of the liquid, each with its source.
    pub liquid: Properties,
    /// The liquid as wetting sees it.
    pub wetting_liquid: WettingLiquid,
    /// Contact angles with their sources.
    pub angles: WettingAngles,
    /// Which of the angles were assumed from the others.
    pub assumed: Assumed,
    /// The angle that counts for this outer face, rad.
    pub contact_angle: f64,
    /// Uncertain inputs of liquid and surface.
    pub inputs: Inputs,
}

impl Spec {
    /// The case that this question asks about.
    ///
    /// # Errors
    /// Every fault of the question, each with its pointer.
    pub fn resolve(&self) -> Result<Resolved, Vec<Fault>> {
        let mut faults = Vec::new();
        let lip = self.resolve_lip(&mut faults);
        let condition = match self.condition() {
            Ok(condition) if faults.is_empty() => condition,
            Ok(_) => return Err(faults),
            Err(found) => {
                faults.extend(found);
                return Err(faults);
            }
        };
        let Condition { liquid, wetting_liquid, angles, assumed, contact_angle, mut inputs } = condition;
        for input in self.lip_inputs() {
            // A question has fewer inputs than places for them; a test holds that.
            let _ = inputs.try_push(input);
        }
        let case = Case {
            lip,
            liquid: liquid.liquid(),
            advancing: angles.advancing.angle,
            receding: angles.receding.angle,
            contact_angle,
            flow: self.flow_ml_s * quantity::FLOW.to_si,
            confidence: Confidence::at(self.confidence),
            coefficients: self.coefficients,
            calibration: self.calibration,
            inputs,
        };
        Ok(Resolved { case, liquid, wetting_liquid, angles, assumed })
    }

    /// Liquid and surface of this question: what does not depend on the lip or the pour rate.
    ///
    /// # Errors
    /// Every fault of liquid and surface.
    pub fn condition(&self) -> Result<Condition, Vec<Fault>> {
        let mut faults = Vec::new();
        let liquid = resolve_liquid(&self.liquid);
        let wetting_liquid = liquid.as_ref().ok().map(|properties| wetting_liquid(&self.liquid, properties));
        // Contradicting angles are found even where the liquid itself is at fault.
        let surface = self.resolve_surface(wetting_liquid.as_ref(), &mut faults);
        let liquid = liquid.map_err(|mut found| faults.append(&mut found)).ok();
        let (Some(liquid), Some(wetting_liquid), Some((angles, assumed)), true) =
            (liquid, wetting_liquid, surface, faults.is_empty())
        else {
            return Err(faults);
        };
        let counts = match self.outer_face {
            OuterFace::Dry => angles.advancing,
            OuterFace::Wet => angles.receding,
        };
        let inputs = self.inputs(&liquid, &assumed, counts.standard_uncertainty, counts.angle);
        Ok(Condition { liquid, wetting_liquid, angles, assumed, contact_angle: counts.angle, inputs })
    }

    /// The contact angle that counts, rad, with this liquid on the surface, uncertainties left out; `None` where liquid and surface
    /// contradict each other.
    #[must_use]
    pub fn contact_angle(&self, liquid: &Properties) -> Option<f64> {
        let (angles, _) =
            self.resolve_surface(Some(&wetting_liquid(&self.liquid, liquid)), &mut Vec::new())?;
        Some(match self.outer_face {
            OuterFace::Dry => angles.advancing.angle,
            OuterFace::Wet => angles.receding.angle,
        })
    }

    /// Whether the outer wall falls away from the edge at all: the turn exceeds the rise of the floor.
    #[must_use]
    pub fn wall_falls(&self) -> bool {
        self.slope_deg + self.turn_deg > 0.0
    }

    /// The lip in SI units, its own contradictions left out ([`Spec::wall_falls`]).
    #[must_use]
    pub fn lip(&self) -> Lip {
        self.resolve_lip(&mut Vec::new())
    }

    fn resolve_lip(&self, faults: &mut Vec<Fault>) -> Lip {
        if !self.wall_falls() {
            let detail = format!(
                "the floor rises by {}° and the edge turns by {}°, so the outer wall would not fall away from the edge; the turn must exceed the rise",
                -self.slope_deg, self.turn_deg
            );
            let turn = Fault::new(Field::Turn.pointer(), "contradiction", detail.clone());
            faults.push(turn.within(-self.slope_deg, quantity::TURN.maximum));
            let slope = Fault::new(Field::Slope.pointer(), "contradiction", detail);
            faults.push(slope.within(-self.turn_deg, quantity::RUN_SLOPE.maximum));
        }
        let section = match self.section {
            SectionSpec::Sheet { width_mm } => {
                Section::Sheet { width: width_mm * quantity::SHEET_WIDTH.to_si }
            }
            SectionSpec::Vee { included_angle_deg } => {
                Section::Vee { included_angle: included_angle_deg * quantity::INCLUDED_ANGLE.to_si }
            }
            SectionSpec::Trough { diameter_mm } => {
                Section::Trough { diameter: diameter_mm * quantity::TROUGH_DIAMETER.to_si }
            }
            SectionSpec::Tube { bore_mm } => Section::Tube { bore: bore_mm * quantity::TUBE_BORE.to_si },
        };
        Lip {
            section,
            edge: Edge {
                radius: self.radius_mm * quantity::EDGE_RADIUS.to_si,
                turn: self.turn_deg * quantity::TURN.to_si,
            },
            run: Run {
                slope: self.slope_deg * quantity::RUN_SLOPE.to_si,
                length: self.length_mm * quantity::RUN_LENGTH.to_si,
            },
        }
    }

    fn resolve_surface(
        &self,
        liquid: Option<&WettingLiquid>,
        faults: &mut Vec<Fault>,
    ) -> Option<(WettingAngles, Assumed)> {
        let none_assumed = Assumed::default();
        match self.surface {
            SurfaceSpec::Measured { contact_angle_deg, advancing_deg, receding_deg } => {
                let radians = |degrees: Option<f64>| degrees.map(|d| d * DEGREE);
                let uncertainty =
                    |field: Field| standard_uncertainty(self, field, field.get(self).unwrap_or(0.0)) * DEGREE;
                let angles = MeasuredAngles {
                    contact: radians(contact_angle_deg),
                    advancing: radians(advancing_deg),
                    receding: radians(receding_deg),
                };
                let uncertainties = MeasuredUncertainty {
                    contact: uncertainty(Field::MeasuredContact),
                    advancing: uncertainty(Field::MeasuredAdvancing),
                    receding: uncertainty(Field::MeasuredReceding),
                };
                from_measured(&angles, &uncertainties)
                    .map_err(|fault| faults.push(measured_fault(fault)))
                    .ok()
            }
            SurfaceSpec::Catalogue { material, state } => {
                // Whether the state is known does not depend on the liquid.
                if material.state(state).is_none() {
                    let fault = Fault::new(
                        "/surface/catalogue/state",
                        "state_unknown",
                        format!("{} has no values in this state", material.id),
                    );
                    let known = crate::physics::surface::State::ALL
                        .into_iter()
                        .filter(|s| material.state(*s).is_some());
                    faults.push(fault.choices(known.map(crate::physics::surface::State::as_str)));
                    return None;
                }
                material
                    .angles(state, liquid?)
                    .map(|angles| (angles, none_assumed))
                    .map_err(|fault| {
                        faults.push(Fault::new("/surface/catalogue", "not_applicable", fault.to_string()))
                    })
                    .ok()
            }
            SurfaceSpec::Estimated { dispersive_mn_m, polar_mn_m, roughness_ratio } => {
                let to_si = quantity::SURFACE_ENERGY.to_si;
                from_energy(dispersive_mn_m * to_si, polar_mn_m * to_si, roughness_ratio, liquid?)
                    .map(|angles| (angles, none_assumed))
                    .map_err(|fault| {
                        let pointer = match fault {
                            SurfaceFault::BeyondWenzel { .. } => Field::Roughness.pointer(),
                            _ => "/surface/estimated",
                        };
                        faults.push(Fault::new(pointer, "not_applicable", fault.to_string()));
                    })
                    .ok()
            }
        }
    }

    /// The uncertain inputs of liquid and surface. `angle` and `angle_uncertainty` (rad): the contact angle that counts.
    fn inputs(&self, liquid: &Properties, assumed: &Assumed, angle_uncertainty: f64, angle: f64) -> Inputs {
        let mut inputs = Inputs::new();
        let mut push = |source: Source, shift: Shift| {
            // A question has fewer inputs than places for them; a test holds that.
            let _ = inputs.try_push(Input { source, shift });
        };
        self.liquid_inputs(liquid, &mut push);
        let angle_source = match (self.surface, self.outer_face) {
            (SurfaceSpec::Catalogue { .. }, _) => Source::CatalogueSurface,
            (SurfaceSpec::Estimated { .. }, _) => Source::EstimatedSurface,
            (SurfaceSpec::Measured { .. }, OuterFace::Dry) if !assumed.advancing => {
                Source::Field(Field::MeasuredAdvancing)
            }
            (SurfaceSpec::Measured { .. }, OuterFace::Wet) if !assumed.receding => {
                Source::Field(Field::MeasuredReceding)
            }
            (SurfaceSpec::Measured { .. }, _) if !assumed.contact => Source::Field(Field::MeasuredContact),
            (SurfaceSpec::Measured { .. }, OuterFace::Dry) => Source::Field(Field::MeasuredReceding),
            (SurfaceSpec::Measured { .. }, OuterFace::Wet) => Source::Field(Field::MeasuredAdvancing),
        };
        push(angle_source, Shift::One(Primary::ContactAngle, angle_uncertainty));
        self.energy_inputs(liquid, angle, &mut push);
        inputs
    }

    /// The uncertain inputs of section, radius, turn, slope, length and flow, in this order.
    #[must_use]
    pub fn lip_inputs(&self) -> [Input; 6] {
        let number = |field: Field, primary: Primary, value: f64, logarithmic: bool| {
            let u = standard_uncertainty(self, field, value);
            let by = if logarithmic { u / value } else { u * field.quantity().to_si };
            Input { source: Source::Field(field), shift: Shift::One(primary, by) }
        };
        let section =
            |field: Field, value: f64| number(field, Primary::Section, value, field != Field::VeeAngle);
        [
            match self.section {
                SectionSpec::Sheet { width_mm } => section(Field::SheetWidth, width_mm),
                SectionSpec::Vee { included_angle_deg } => section(Field::VeeAngle, included_angle_deg),
                SectionSpec::Trough { diameter_mm } => section(Field::TroughDiameter, diameter_mm),
                SectionSpec::Tube { bore_mm } => section(Field::TubeBore, bore_mm),
            },
            number(Field::EdgeRadius, Primary::EdgeRadius, self.radius_mm, false),
            number(Field::Turn, Primary::Turn, self.turn_deg, false),
            number(Field::Slope, Primary::Slope, self.slope_deg, false),
            number(Field::RunLength, Primary::RunLength, self.length_mm, false),
            number(Field::Flow, Primary::Flow, self.flow_ml_s, true),
        ]
    }

    fn liquid_inputs(&self, properties: &Properties, push: &mut impl FnMut(Source, Shift)) {
        let given = matches!(self.liquid, LiquidSpec::Measured { .. });
        let fields = if given {
            [Field::MeasuredDensity, Field::MeasuredViscosity, Field::MeasuredSurfaceTension]
        } else {
            [Field::DensityOverride, Field::ViscosityOverride, Field::SurfaceTensionOverride]
        };
        let rows = [
            (properties.density, Primary::Density),
            (properties.viscosity, Primary::Viscosity),
            (properties.surface_tension, Primary::SurfaceTension),
        ];
        for (field, (property, primary)) in fields.into_iter().zip(rows) {
            let relative = match field.get(self) {
                Some(value) => standard_uncertainty(self, field, value) / value,
                None => property.standard_uncertainty / property.value,
            };
            push(Source::Field(field), Shift::One(primary, relative));
        }
        let LiquidSpec::Catalogue { entry, conditions, .. } = self.liquid else { return };
        let composition = entry.parameters.iter().map(|parameter| Field::of(parameter.component));
        for field in [Field::Temperature].into_iter().chain(composition) {
            let Some(value) = field.get(self) else { continue };
            let u = standard_uncertainty(self, field, value);
            if u == 0.0 {
                continue;
            }
            // Upwards, or downwards where upwards is out of what the liquid accepts.
            let at = |shift: f64| {
                let mut shifted = *self;
                field.set(&mut shifted, value + shift);
                resolve_liquid(&shifted.liquid).ok()
            };
            let (up, step) = match at(u) {
                Some(up) => (Some(up), 1.0),
                None => (at(-u), -1.0),
            };
            let Some(other) = up else { continue };
            let change = |a: Property, b: Property| libm::log(a.value / b.value) * step;
            let shift = [
                change(other.density, properties.density),
                change(other.viscosity, properties.viscosity),
                change(other.surface_tension, properties.surface_tension),
            ];
            push(Source::Field(field), Shift::Liquid(shift));
        }
        let _ = conditions;
    }

    /// What the uncertainty of given surface energies does to the contact angle that counts.
    fn energy_inputs(&self, liquid: &Properties, angle: f64, push: &mut impl FnMut(Source, Shift)) {
        if !matches!(self.surface, SurfaceSpec::Estimated { .. }) {
            return;
        }
        let wetting_liquid = wetting_liquid(&self.liquid, liquid);
        for field in [Field::Dispersive, Field::Polar, Field::Roughness] {
            let Some(value) = field.get(self) else { continue };
            let u = standard_uncertainty(self, field, value);
            let mut shifted = *self;
            field.set(&mut shifted, value + u);
            let Some((angles, _)) = shifted.resolve_surface(Some(&wetting_liquid), &mut Vec::new()) else {
                continue;
            };
            let moved = match self.outer_face {
                OuterFace::Dry => angles.advancing.angle,
                OuterFace::Wet => angles.receding.angle,
            };
            push(Source::Field(field), Shift::One(Primary::ContactAngle, moved - angle));
        }
    }
}

/// Properties of the liquid asked for, overrides applied.
///
/// # Errors
/// Every fault of its conditions.
pub fn resolve_liquid(liquid: &LiquidSpec) -> Result<Properties, Vec<Fault>> {
    match liquid {
        LiquidSpec::Measured { density_kg_m3, viscosity_mpa_s, surface_tension_mn_m } => {
            let given = |value: f64, q: quantity::Quantity| given_property(value * q.to_si);
            Ok(Properties {
                density: given(*density_kg_m3, quantity::DENSITY),
                viscosity: given(*viscosity_mpa_s, quantity::VISCOSITY),
                surface_tension: given(*surface_tension_mn_m, quantity::SURFACE_TENSION),
            })
        }
        LiquidSpec::Catalogue { entry, conditions, overrides } => {
            let mut properties = entry
                .properties(conditions)
                .map_err(|faults| faults.into_iter().map(condition_fault).collect::<Vec<_>>())?;
            let replace = |property: &mut Property, value: Option<f64>, q: quantity::Quantity| {
                if let Some(value) = value {
                    *property = given_property(value * q.to_si);
                }
            };
            replace(&mut properties.density, overrides.density_kg_m3, quantity::DENSITY);
            replace(&mut properties.viscosity, overrides.viscosity_mpa_s, quantity::VISCOSITY);
            replace(
                &mut properties.surface_tension,
                overrides.surface_tension_mn_m,
                quantity::SURFACE_TENSION,
            );
            Ok(properties)
        }
    }
}

/// The liquid as wetting sees it.
#[must_use]
pub fn wetting_liquid(liquid: &LiquidSpec, properties: &Properties) -> WettingLiquid {
    let surface_tension = properties.surface_tension.value;
    match liquid {
        LiquidSpec::Measured { .. } => {
            WettingLiquid { surface_tension, dispersive_fraction: None, leaves_film: false, is_water: false }
        }
        LiquidSpec::Catalogue { entry, overrides, .. } => WettingLiquid {
            surface_tension,
            dispersive_fraction: entry.wetting.dispersive_fraction,
            leaves_film: entry.wetting.leaves_film,
            is_water: entry.id == "water" && overrides.surface_tension_mn_m.is_none(),
        },
    }
}

fn given_property(value: f64) -> Property {
    Property {
        value,
        standard_uncertainty: 0.0,
        source: "given by the caller",
        basis: Basis::Given,
        range: "",
        within_range: true,
    }
}

fn measured_fault(fault: SurfaceFault) -> Fault {
    let detail = fault.to_string();
    match fault {
        SurfaceFault::NoAngleGiven => Fault::new("/surface/measured", "missing", detail).choices([
            "contact_angle_deg",
            "advancing_deg",
            "receding_deg",
        ]),
        SurfaceFault::AdvancingBelowContact => {
            Fault::new(Field::MeasuredAdvancing.pointer(), "contradiction", detail)
        }
        SurfaceFault::RecedingAboveContact | SurfaceFault::RecedingAboveAdvancing => {
            Fault::new(Field::MeasuredReceding.pointer(), "contradiction", detail)
        }
        _ => Fault::new("/surface/measured", "not_applicable", detail),
    }
}

/// A fault of a liquid's conditions, with its pointer in an evaluation request.
fn condition_fault(fault: ConditionFault) -> Fault {
    let detail = fault.to_string();
    let pointer = fault.component().map_or(Field::Temperature, Field::of).pointer();
    match fault {
        ConditionFault::Missing { component } => {
            let q = component.quantity();
            Fault::new(pointer, "missing", detail).within(q.minimum, q.maximum)
        }
        ConditionFault::NotTaken { .. } => Fault::new(pointer, "not_applicable", detail),
        ConditionFault::OutOfRange { minimum, maximum, .. } => {
            Fault::new(pointer, "out_of_range", detail).within(minimum, maximum)
        }
        ConditionFault::TemperatureOutOfRange { minimum_c, maximum_c } => {
            Fault::new(pointer, "out_of_range", detail).within(minimum_c, maximum_c)
        }
        ConditionFault::Freezes { at_c } => Fault::new(pointer, "freezes", detail).within(at_c, None),
        ConditionFault::Boils { at_c } => Fault::new(pointer, "boils", detail).within(None, at_c),
        ConditionFault::Insoluble { maximum, .. } => {
            Fault::new(pointer, "insoluble", detail).within(None, maximum)
        }
        ConditionFault::Inconsistent { .. } => Fault::new(pointer, "contradiction", detail),
        ConditionFault::PropertyOutOfBounds { .. } => Fault::new(pointer, "not_applicable", detail),
    }
}
