//! A liquid's conditions as query parameters, read with all their faults, and as they stand in an answer.

use serde::Serialize;
use utoipa::{IntoParams, ToSchema};

use super::super::quantity::{
    Density15, Fat, KinematicViscosity40, KinematicViscosity100, MassFraction, Number, Salinity, Temperature,
};
use crate::{
    analysis::{
        fault::Fault,
        resolve::resolve_liquid,
        spec::{LiquidSpec, Overrides},
    },
    physics::{
        liquid::{Component, Conditions, Entry, Properties},
        quantity::{Quantity, TEMPERATURE},
    },
    service::{
        explain::escaped,
        nearest::{nearest, quoted},
    },
};

/// Query parameters as they came, in their order.
pub type Pairs = Vec<(String, String)>;

/// Temperature of a look-up that names none, °C.
const ROOM_C: f64 = 20.0;

/// The parameter that gives the temperature.
const TEMPERATURE_C: &str = "temperature_c";

/// The most faults that are listed.
const MOST_FAULTS: usize = 200;

/// The conditions of a liquid. Which of the components a liquid needs, `GET /v1/liquids` says; none is ever filled in.
#[derive(Debug, IntoParams)]
#[into_params(parameter_in = Query)]
pub struct ConditionsQuery {
    /// Temperature, °C; default 20.
    #[param(inline, required = false)]
    pub temperature_c: Option<Temperature>,
    /// Mass fraction of the solute; needed by solutions.
    #[param(inline, required = false)]
    pub mass_fraction: Option<MassFraction>,
    /// Salinity, g/kg; needed by sea water.
    #[param(inline, required = false)]
    pub salinity_g_kg: Option<Salinity>,
    /// Fat content, % by mass; needed by milk and cream.
    #[param(inline, required = false)]
    pub fat_percent: Option<Fat>,
    /// Kinematic viscosity at 40 °C, mm²/s; needed by mineral oil.
    #[param(inline, required = false)]
    pub viscosity_40c_mm2_s: Option<KinematicViscosity40>,
    /// Kinematic viscosity at 100 °C, mm²/s; needed by mineral oil.
    #[param(inline, required = false)]
    pub viscosity_100c_mm2_s: Option<KinematicViscosity100>,
    /// Density at 15 °C, kg/m³; needed by mineral oil.
    #[param(inline, required = false)]
    pub density_15c_kg_m3: Option<Density15>,
}

/// Temperature and composition of a liquid.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct ConditionsAnswer {
    /// Temperature, °C.
    #[schema(value_type = f64, example = 20)]
    pub temperature_c: Number,
    /// Mass fraction of the solute.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub mass_fraction: Option<Number>,
    /// Salinity, g/kg.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub salinity_g_kg: Option<Number>,
    /// Fat content, % by mass.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub fat_percent: Option<Number>,
    /// Kinematic viscosity at 40 °C, mm²/s.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub viscosity_40c_mm2_s: Option<Number>,
    /// Kinematic viscosity at 100 °C, mm²/s.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub viscosity_100c_mm2_s: Option<Number>,
    /// Density at 15 °C, kg/m³.
    #[serde(skip_serializing_if = "Option::is_none")]
    #[schema(value_type = f64, required = false)]
    pub density_15c_kg_m3: Option<Number>,
}

impl From<&Conditions> for ConditionsAnswer {
    fn from(conditions: &Conditions) -> Self {
        Self {
            temperature_c: Number(conditions.temperature_c),
            mass_fraction: conditions.mass_fraction.map(Number),
            salinity_g_kg: conditions.salinity_g_kg.map(Number),
            fat_percent: conditions.fat_percent.map(Number),
            viscosity_40c_mm2_s: conditions.viscosity_40c_mm2_s.map(Number),
            viscosity_100c_mm2_s: conditions.viscosity_100c_mm2_s.map(Number),
            density_15c_kg_m3: conditions.density_15c_kg_m3.map(Number),
        }
    }
}

/// What the query of a look-up asks, with the faults found on the way. A number that cannot be read stands as not-a-number, so that it is refused and not
/// taken for missing.
#[derive(Debug)]
pub struct Asked {
    conditions: Conditions,
    /// The liquid named, where one can be named.
    pub liquid: Option<String>,
    /// The faults so far, at most one a parameter.
    pub faults: Vec<Fault>,
}

impl Asked {
    /// Reads the query of a look-up about a liquid's conditions; `names_liquid`: it may also name the liquid.
    #[must_use]
    pub fn read(pairs: &Pairs, names_liquid: bool) -> Self {
        let mut asked = Self { conditions: Conditions::at(ROOM_C), liquid: None, faults: Vec::new() };
        let mut seen: Vec<&str> = Vec::new();
        for (name, value) in pairs {
            let component = Component::ALL.into_iter().find(|component| component.field() == name);
            let liquid = names_liquid && name == "liquid";
            if component.is_none() && name != TEMPERATURE_C && !liquid {
                let liquid = names_liquid.then_some("liquid").into_iter();
                asked
                    .unknown(name, liquid.chain([TEMPERATURE_C]).chain(Component::ALL.map(Component::field)));
            } else if seen.contains(&name.as_str()) {
                asked.fault(Fault::new(pointer(name), "repeated_parameter", "may be given only once"));
            } else if liquid {
                asked.liquid = Some(value.clone());
            } else if let Some(component) = component {
                let number = asked.number(name, value, &component.quantity());
                asked.conditions.set(component, number);
            } else {
                asked.conditions.temperature_c = asked.number(name, value, &TEMPERATURE);
            }
            seen.push(name);
        }
        asked
    }

    /// Reads the query of a look-up that takes no parameters.
    #[must_use]
    pub fn nothing(pairs: &Pairs) -> Vec<Fault> {
        let mut asked = Self { conditions: Conditions::at(ROOM_C), liquid: None, faults: Vec::new() };
        for (name, _) in pairs {
            asked.unknown(name, std::iter::empty());
        }
        asked.faults
    }

    /// Notes a fault, unless its parameter has one already.
    pub fn fault(&mut self, fault: Fault) {
        let known = self.faults.iter().any(|known| known.pointer == fault.pointer);
        if !known && self.faults.len() < MOST_FAULTS {
            self.faults.push(fault);
        }
    }

    fn unknown<'a>(&mut self, name: &str, known: impl Iterator<Item = &'a str>) {
        if self.faults.len() < MOST_FAULTS {
            let choices = nearest(name, known).into_iter().map(str::to_owned);
            let detail = format!("there is no parameter {} here", quoted(name));
            self.fault(Fault::new(pointer(name), "unknown_parameter", detail).choices(choices));
        }
    }

    fn number(&mut self, name: &str, text: &str, quantity: &Quantity) -> f64 {
        let Quantity { minimum, maximum, unit, .. } = *quantity;
        let accepted = format!("a number between {minimum} and {maximum} {unit} is accepted");
        let (code, detail) = match text.parse::<f64>() {
            Ok(value) if value.is_finite() => return value,
            Ok(_) => ("not_finite", format!("{} is not a finite number", quoted(text))),
            Err(_) => ("wrong_type", format!("{} is not a number", quoted(text))),
        };
        let detail = format!("{detail}; {}", accepted.trim_end());
        self.fault(Fault::new(pointer(name), code, detail).within(minimum, maximum));
        f64::NAN
    }

    /// The liquid at these conditions.
    ///
    /// # Errors
    /// Every fault of the query and of the conditions.
    pub fn resolve(mut self, entry: &'static Entry) -> Result<Found, Vec<Fault>> {
        let spec =
            LiquidSpec::Catalogue { entry, conditions: self.conditions, overrides: Overrides::default() };
        match resolve_liquid(&spec) {
            Ok(properties) if self.faults.is_empty() => {
                return Ok(Found { entry, conditions: self.conditions, spec, properties });
            }
            Ok(_) => {}
            Err(faults) => faults.into_iter().for_each(|fault| self.fault(in_query(fault, entry))),
        }
        Err(self.faults)
    }

    /// The faults of a look-up whose liquid is not known: what of the numbers no liquid would accept.
    #[must_use]
    pub fn without_liquid(mut self) -> Vec<Fault> {
        let given = Component::ALL.into_iter().filter_map(|component| {
            Some((component.field(), component.quantity(), self.conditions.get(component)?))
        });
        let numbers: Vec<(&str, Quantity, f64)> =
            given.chain([(TEMPERATURE_C, TEMPERATURE, self.conditions.temperature_c)]).collect();
        for (name, quantity, value) in numbers {
            if !quantity.accepts(value) {
                let Quantity { minimum, maximum, unit, .. } = quantity;
                let detail = format!("must be between {minimum} and {maximum} {unit}");
                let fault = Fault::new(pointer(name), "out_of_range", detail.trim_end());
                self.fault(fault.within(minimum, maximum));
            }
        }
        self.faults
    }
}

/// A liquid of the catalogue with its properties at the conditions asked for.
#[derive(Debug)]
pub struct Found {
    /// The liquid.
    pub entry: &'static Entry,
    /// Its conditions.
    pub conditions: Conditions,
    /// Both, as analysis takes them.
    pub spec: LiquidSpec,
    /// Its properties.
    pub properties: Properties,
}

fn pointer(name: &str) -> String {
    format!("/{}", escaped(name))
}

/// Where the members of a catalogue liquid stand in a request; in a query they stand at the top.
const IN_REQUEST: &str = "/liquid/catalogue";

/// The pointer without the members that a query does not have.
pub fn pointer_in_query(pointer: &'static str) -> &'static str {
    pointer.strip_prefix(IN_REQUEST).unwrap_or(pointer)
}

/// A fault with its pointer in the query, and for a missing component with what this liquid accepts.
fn in_query(fault: Fault, entry: &Entry) -> Fault {
    let pointer = fault.pointer.strip_prefix(IN_REQUEST).unwrap_or(&fault.pointer).to_owned();
    let needed = entry.parameters.iter().find(|p| pointer.strip_prefix('/') == Some(p.component.field()));
    match needed {
        Some(p) if fault.code == "missing" => {
            let unit = p.component.quantity().unit;
            let detail = format!("{}: {} to {} {unit}", fault.detail, p.minimum, p.maximum);
            Fault::new(pointer, fault.code, detail.trim_end()).within(p.minimum, p.maximum)
        }
        _ => Fault { pointer: pointer.into(), ..fault },
    }
}
