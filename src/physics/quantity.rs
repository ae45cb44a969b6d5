//! The quantities that callers give: name, unit, accepted range and factor to SI.
//!
//! Bounds live here and nowhere else. Parsing, the OpenAPI document, sweeps and remedies all read them.

/// A quantity as callers give it.
///
/// `minimum` and `maximum` are inclusive and in `unit`; they are what the service accepts, not what a correlation
/// covers. Multiplying by `to_si` gives the SI value (degrees become radians; temperatures stay in °C).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Quantity {
    /// What it is, in the field's words.
    pub name: &'static str,
    /// Unit as written in answers; empty for ratios.
    pub unit: &'static str,
    /// Smallest accepted value, in `unit`.
    pub minimum: f64,
    /// Largest accepted value, in `unit`.
    pub maximum: f64,
    /// Factor from `unit` to SI.
    pub to_si: f64,
}

impl Quantity {
    /// Whether `value` (in `unit`) is finite and accepted.
    #[must_use]
    pub fn accepts(&self, value: f64) -> bool {
        value >= self.minimum && value <= self.maximum
    }
}

const fn quantity(
    name: &'static str,
    unit: &'static str,
    minimum: f64,
    maximum: f64,
    to_si: f64,
) -> Quantity {
    Quantity { name, unit, minimum, maximum, to_si }
}

/// Radians in a degree.
pub const DEGREE: f64 = core::f64::consts::PI / 180.0;

/// Width of a straight lip.
pub const SHEET_WIDTH: Quantity = quantity("width of the lip", "mm", 1.0, 2000.0, 1e-3);
/// Full angle of a pinched (V-shaped) lip.
pub const INCLUDED_ANGLE: Quantity = quantity("included angle of the vee", "deg", 20.0, 170.0, DEGREE);
/// Diameter of an open half-round channel.
pub const TROUGH_DIAMETER: Quantity = quantity("diameter of the trough", "mm", 1.0, 500.0, 1e-3);
/// Bore of a closed round spout.
pub const TUBE_BORE: Quantity = quantity("bore of the tube", "mm", 0.5, 200.0, 1e-3);
/// Radius of the rounding that the stream turns over; 0 is ideally sharp.
pub const EDGE_RADIUS: Quantity = quantity("edge radius", "mm", 0.0, 50.0, 1e-3);
/// Angle from the floor's direction to the outer wall's.
pub const TURN: Quantity = quantity("turn of the edge", "deg", 20.0, 180.0, DEGREE);
/// Slope of the floor before the edge, downhill positive.
pub const RUN_SLOPE: Quantity = quantity("slope of the floor", "deg", -30.0, 85.0, DEGREE);
/// Length of the floor before the edge.
pub const RUN_LENGTH: Quantity = quantity("length of the floor", "mm", 0.0, 1000.0, 1e-3);
/// Pour rate.
pub const FLOW: Quantity = quantity("pour rate", "mL/s", 0.01, 20_000.0, 1e-6);
/// Contact angle through the liquid (static, advancing or receding).
pub const CONTACT_ANGLE: Quantity = quantity("contact angle", "deg", 0.0, 180.0, DEGREE);
/// Density of a liquid.
pub const DENSITY: Quantity = quantity("density", "kg/m³", 500.0, 4000.0, 1.0);
/// Dynamic viscosity of a liquid.
pub const VISCOSITY: Quantity = quantity("dynamic viscosity", "mPa·s", 0.1, 1e6, 1e-3);
/// Surface tension of a liquid.
pub const SURFACE_TENSION: Quantity = quantity("surface tension", "mN/m", 5.0, 200.0, 1e-3);
/// Temperature, °C; not converted.
pub const TEMPERATURE: Quantity = quantity("temperature", "°C", -40.0, 250.0, 1.0);
/// Mass fraction of the solute, or of the named component.
pub const MASS_FRACTION: Quantity = quantity("mass fraction", "", 0.0, 1.0, 1.0);
/// Salinity of sea water.
pub const SALINITY: Quantity = quantity("salinity", "g/kg", 0.0, 150.0, 1.0);
/// Fat content of milk or cream by mass.
pub const FAT: Quantity = quantity("fat content", "%", 0.0, 60.0, 1.0);
/// Kinematic viscosity of an oil at 40 °C.
pub const KINEMATIC_VISCOSITY_40: Quantity =
    quantity("kinematic viscosity at 40 °C", "mm²/s", 1.0, 10_000.0, 1e-6);
/// Kinematic viscosity of an oil at 100 °C.
pub const KINEMATIC_VISCOSITY_100: Quantity =
    quantity("kinematic viscosity at 100 °C", "mm²/s", 0.5, 1000.0, 1e-6);
/// Density of an oil at 15 °C.
pub const DENSITY_15: Quantity = quantity("density at 15 °C", "kg/m³", 600.0, 1200.0, 1.0);
/// Surface energy, or a component of it.
pub const SURFACE_ENERGY: Quantity = quantity("surface energy", "mN/m", 0.0, 500.0, 1e-3);
/// Ratio of true to projected area (Wenzel).
pub const ROUGHNESS_RATIO: Quantity = quantity("roughness ratio", "", 1.0, 20.0, 1.0);
/// Fraction of the projected area where liquid touches solid (Cassie–Baxter).
pub const SOLID_FRACTION: Quantity = quantity("solid fraction", "", 0.001, 1.0, 1.0);
/// Confidence of a verdict.
pub const CONFIDENCE: Quantity = quantity("confidence", "", 0.5, 0.9999, 1.0);
/// A length of a vessel: diameter, height, length, width.
pub const VESSEL_LENGTH: Quantity = quantity("length of the vessel", "mm", 5.0, 5000.0, 1e-3);
/// A length of a vessel that may be 0: a cone's tip, a point of a profile.
pub const VESSEL_OFFSET: Quantity = quantity("length in the vessel", "mm", 0.0, 5000.0, 1e-3);
/// Volume of liquid in a vessel.
pub const FILL: Quantity = quantity("volume in the vessel", "mL", 0.1, 1e6, 1e-6);
/// Tilt of a vessel, from upright to upside down.
pub const TILT: Quantity = quantity("tilt", "deg", 0.0, 180.0, DEGREE);
/// Rate of tilting.
pub const TILT_RATE: Quantity = quantity("rate of tilting", "deg/s", 0.1, 1000.0, DEGREE);
/// Time in a tilt programme.
pub const TIME: Quantity = quantity("time", "s", 0.0, 3600.0, 1.0);
/// Height of the lip above where the stream lands.
pub const DROP: Quantity = quantity("height of fall", "mm", 1.0, 5000.0, 1e-3);
