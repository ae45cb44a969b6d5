//! The quantities of a request as types that cannot hold a bad value, and their bounds in the OpenAPI document. The ranges are
//! physics' own ([`crate::physics::quantity`]); this file only reads them.

use crate::physics::quantity::{self as range, Quantity};
use serde::{Deserialize, Deserializer, Serialize, Serializer, de};
use std::{borrow::Cow, collections::BTreeMap, fmt, marker::PhantomData};
use utoipa::{
    PartialSchema, ToSchema,
    openapi::{ObjectBuilder, RefOr, Type, extensions::ExtensionsBuilder, schema::Schema},
};

/// Reads a number and checks it against the quantity's range. Whole numbers are numbers.
fn number<'de, D: Deserializer<'de>>(deserializer: D, quantity: &Quantity) -> Result<f64, D::Error> {
    struct Reader<'q>(&'q Quantity);

    impl de::Visitor<'_> for Reader<'_> {
        type Value = f64;

        fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
            let Quantity { name, unit, minimum, maximum, .. } = self.0;
            write!(f, "a number ({name}) from {minimum} to {maximum} {unit}")
        }

        fn visit_f64<E: de::Error>(self, value: f64) -> Result<f64, E> {
            if self.0.accepts(value) {
                Ok(value)
            } else {
                Err(E::invalid_value(de::Unexpected::Float(value), &self))
            }
        }

        fn visit_u64<E: de::Error>(self, value: u64) -> Result<f64, E> {
            self.visit_f64(value as f64)
        }

        fn visit_i64<E: de::Error>(self, value: i64) -> Result<f64, E> {
            self.visit_f64(value as f64)
        }
    }

    deserializer.deserialize_f64(Reader(quantity))
}

fn schema(quantity: &Quantity, example: f64) -> RefOr<Schema> {
    let Quantity { name, unit, minimum, maximum, .. } = *quantity;
    let description = if unit.is_empty() { name.to_owned() } else { format!("{name}, {unit}") };
    ObjectBuilder::new()
        .schema_type(Type::Number)
        .format(Some(utoipa::openapi::SchemaFormat::KnownFormat(utoipa::openapi::KnownFormat::Double)))
        .description(Some(description))
        .minimum(Some(minimum))
        .maximum(Some(maximum))
        .examples([example])
        .extensions(Some(ExtensionsBuilder::new().add("x-unit", unit).build()))
        .into()
}

macro_rules! quantities {
    ($($(#[$doc:meta])* $name:ident = $range:path, $example:expr;)*) => {$(
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq)]
        pub struct $name(f64);

        impl $name {
            /// The value, in the unit of its quantity.
            #[must_use]
            pub const fn get(self) -> f64 {
                self.0
            }

            /// The same as a value known to be in range: for defaults.
            #[must_use]
            pub const fn known(value: f64) -> Self {
                Self(value)
            }
        }

        impl<'de> Deserialize<'de> for $name {
            fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
                number(deserializer, &$range).map(Self)
            }
        }

        impl Serialize for $name {
            fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
                serializer.serialize_f64(self.0)
            }
        }

        impl PartialSchema for $name {
            fn schema() -> RefOr<Schema> {
                schema(&$range, $example)
            }
        }

        impl ToSchema for $name {
            fn name() -> Cow<'static, str> {
                Cow::Borrowed(stringify!($name))
            }
        }
    )*};
}

quantities! {
    /// Width of a straight lip, mm.
    SheetWidth = range::SHEET_WIDTH, 24.0;
    /// Included angle of a vee, degrees.
    IncludedAngle = range::INCLUDED_ANGLE, 70.0;
    /// Diameter of a trough, mm.
    TroughDiameter = range::TROUGH_DIAMETER, 16.0;
    /// Bore of a tube, mm.
    TubeBore = range::TUBE_BORE, 9.0;
    /// Edge radius, mm.
    EdgeRadius = range::EDGE_RADIUS, 0.8;
    /// Turn of the edge, degrees.
    Turn = range::TURN, 110.0;
    /// Slope of the floor, degrees.
    RunSlope = range::RUN_SLOPE, 8.0;
    /// Length of the floor, mm.
    RunLength = range::RUN_LENGTH, 20.0;
    /// Pour rate, mL/s.
    Flow = range::FLOW, 25.0;
    /// Contact angle, degrees.
    ContactAngle = range::CONTACT_ANGLE, 72.0;
    /// Density, kg/m³.
    Density = range::DENSITY, 1030.0;
    /// Dynamic viscosity, mPa·s.
    Viscosity = range::VISCOSITY, 2.1;
    /// Surface tension, mN/m.
    SurfaceTension = range::SURFACE_TENSION, 46.0;
    /// Temperature, °C.
    Temperature = range::TEMPERATURE, 20.0;
    /// Mass fraction.
    MassFraction = range::MASS_FRACTION, 0.3;
    /// Salinity, g/kg.
    Salinity = range::SALINITY, 35.0;
    /// Fat content, %.
    Fat = range::FAT, 3.5;
    /// Kinematic viscosity at 40 °C, mm²/s.
    KinematicViscosity40 = range::KINEMATIC_VISCOSITY_40, 46.0;
    /// Kinematic viscosity at 100 °C, mm²/s.
    KinematicViscosity100 = range::KINEMATIC_VISCOSITY_100, 6.8;
    /// Density at 15 °C, kg/m³.
    Density15 = range::DENSITY_15, 870.0;
    /// Surface energy or a component of it, mN/m.
    SurfaceEnergy = range::SURFACE_ENERGY, 30.1;
    /// Roughness ratio.
    RoughnessRatio = range::ROUGHNESS_RATIO, 1.3;
    /// Solid fraction.
    SolidFraction = range::SOLID_FRACTION, 0.2;
    /// Length of a vessel, mm.
    VesselLength = range::VESSEL_LENGTH, 100.0;
    /// Length in a vessel that may be 0, mm.
    VesselOffset = range::VESSEL_OFFSET, 72.0;
    /// Volume in a vessel, mL.
    Fill = range::FILL, 1000.0;
    /// Tilt, degrees.
    Tilt = range::TILT, 55.0;
    /// Rate of tilting, °/s.
    TiltRate = range::TILT_RATE, 15.0;
    /// Time, s.
    Time = range::TIME, 2.0;
    /// Height of fall, mm.
    Drop = range::DROP, 100.0;
    /// Confidence.
    Confidence = range::CONFIDENCE, 0.95;
}

/// A number of an answer. Writing one that is not finite fails, rather than turn into `null`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Number(pub f64);

impl Serialize for Number {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        if self.0.is_finite() {
            serializer.serialize_f64(self.0)
        } else {
            Err(serde::ser::Error::custom("a number of the answer is not finite"))
        }
    }
}

impl PartialSchema for Number {
    fn schema() -> RefOr<Schema> {
        ObjectBuilder::new()
            .schema_type(Type::Number)
            .format(Some(utoipa::openapi::SchemaFormat::KnownFormat(utoipa::openapi::KnownFormat::Double)))
            .into()
    }
}

impl ToSchema for Number {
    fn name() -> Cow<'static, str> {
        Cow::Borrowed("Number")
    }
}

/// Reads a whole number that is not negative, written as such or as `2.0`.
pub(super) fn whole_number<'de, D: Deserializer<'de>>(deserializer: D) -> Result<u64, D::Error> {
    let number = f64::deserialize(deserializer)?;
    // Up to here doubles hold every whole number.
    if (0.0..=9_007_199_254_740_991.0).contains(&number) && number == libm::trunc(number) {
        Ok(number as u64)
    } else {
        Err(de::Error::custom("a whole number is needed"))
    }
}

/// Reads a member that may be left out but, when given, must be a `T`: `null` is no value.
pub(super) fn given<'de, D: Deserializer<'de>, T: Deserialize<'de>>(
    deserializer: D,
) -> Result<Option<T>, D::Error> {
    T::deserialize(deserializer).map(Some)
}

/// Reads a map whose members may each be named only once.
pub(super) fn distinct<'de, D: Deserializer<'de>, T: Deserialize<'de>>(
    deserializer: D,
) -> Result<BTreeMap<String, T>, D::Error> {
    struct Reader<T>(PhantomData<T>);

    impl<'de, T: Deserialize<'de>> de::Visitor<'de> for Reader<T> {
        type Value = BTreeMap<String, T>;

        fn expecting(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
            f.write_str("an object")
        }

        fn visit_map<A: de::MapAccess<'de>>(self, mut members: A) -> Result<Self::Value, A::Error> {
            let mut map = BTreeMap::new();
            while let Some((name, value)) = members.next_entry()? {
                if map.insert(name, value).is_some() {
                    return Err(de::Error::custom("a member is named twice"));
                }
            }
            Ok(map)
        }
    }

    deserializer.deserialize_map(Reader(PhantomData))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bounds_hold_and_whole_numbers_are_numbers() {
        let read = serde_json::from_str::<EdgeRadius>;
        assert_eq!(read("0").unwrap().get(), 0.0);
        assert_eq!(read("50.0").unwrap().get(), 50.0);
        for bad in ["-0.1", "50.1", "null", "\"1\"", "true", "[1]", "1e999", "NaN"] {
            assert!(read(bad).is_err(), "{bad}");
        }
    }

    #[test]
    fn the_schema_shows_the_range_of_physics() {
        let schema = serde_json::to_value(EdgeRadius::schema()).unwrap();
        assert_eq!(schema["minimum"], range::EDGE_RADIUS.minimum);
        assert_eq!(schema["maximum"], range::EDGE_RADIUS.maximum);
        assert_eq!(schema["x-unit"], "mm");
    }

    #[test]
    fn a_number_that_is_not_finite_is_not_written() {
        assert_eq!(serde_json::to_string(&Number(0.1)).unwrap(), "0.1");
        assert!(serde_json::to_string(&Number(f64::NAN)).is_err());
        assert!(serde_json::to_string(&Number(f64::INFINITY)).is_err());
    }
}
