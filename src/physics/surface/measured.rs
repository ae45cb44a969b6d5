//! Angles from what the caller measured with this liquid.

use core::f64::consts::PI;

use super::angle::accept_angle;
use super::{AngleEstimate, SurfaceFault, WettingAngles};
use crate::physics::Basis;
use crate::physics::quantity::DEGREE;

/// Usual excess of the advancing over the static angle: 10° (own judgement, from the spread of the catalogue).
pub(super) const ADVANCING_EXCESS: f64 = 10.0 * DEGREE;
/// Standard uncertainty of that excess: 8° (own judgement).
pub(super) const ADVANCING_DOUBT: f64 = 8.0 * DEGREE;
/// Usual deficit of the receding angle below the static one: 20° (own judgement, from the spread of the catalogue).
pub(super) const RECEDING_DEFICIT: f64 = 20.0 * DEGREE;
/// Standard uncertainty of that deficit: 15° (own judgement).
pub(super) const RECEDING_DOUBT: f64 = 15.0 * DEGREE;

const FROM_CONTACT: &str = "from the contact angle: advancing 10 ± 8° above it, receding 20 ± 15° below it, within 0 to 180° (own judgement)";
const FROM_ADVANCING: &str = "from the advancing angle: 10 ± 8° below it, within 0 to 180° (own judgement)";
const FROM_RECEDING: &str = "from the receding angle: 20 ± 15° above it, within 0 to 180° (own judgement)";
const FROM_BOTH: &str = "between the advancing and the receding angle: 10 ± 8° below the one, 20 ± 15° above the other (own judgement)";

/// Angles measured with this liquid, rad; any one is enough.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct MeasuredAngles {
    /// Static contact angle, 0 to π.
    pub contact: Option<f64>,
    /// Advancing angle, 0 to π.
    pub advancing: Option<f64>,
    /// Receding angle, 0 to π.
    pub receding: Option<f64>,
}

/// Standard uncertainties of measured angles, rad. Those of angles that were not measured are not used.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MeasuredUncertainty {
    /// Of the static contact angle.
    pub contact: f64,
    /// Of the advancing angle.
    pub advancing: f64,
    /// Of the receding angle.
    pub receding: f64,
}

impl Default for MeasuredUncertainty {
    /// 3° each: goniometry from place to place on one part (own judgement).
    fn default() -> Self {
        Self { contact: 3.0 * DEGREE, advancing: 3.0 * DEGREE, receding: 3.0 * DEGREE }
    }
}

/// Which of the three angles were not measured but assumed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Assumed {
    /// The static contact angle.
    pub contact: bool,
    /// The advancing angle.
    pub advancing: bool,
    /// The receding angle.
    pub receding: bool,
}

/// The three angles from those measured, and which of them had to be assumed.
///
/// A missing advancing angle is the contact angle + 10 ± 8°, a missing receding angle the contact angle − 20 ± 15°, a missing contact angle
/// follows from the same rule read backwards (from both, weighted by their uncertainties, when both are given), all within 0 to 180° and in
/// order (own judgement). The rule's doubt adds in quadrature to that of the measured angle.
///
/// # Errors
/// [`SurfaceFault::NoAngleGiven`], [`SurfaceFault::NotAnAngle`], [`SurfaceFault::UnphysicalUncertainty`], and
/// [`SurfaceFault::AdvancingBelowContact`], [`SurfaceFault::RecedingAboveContact`], [`SurfaceFault::RecedingAboveAdvancing`] for angles out of order.
pub fn from_measured(
    measured: &MeasuredAngles,
    uncertainty: &MeasuredUncertainty,
) -> Result<(WettingAngles, Assumed), SurfaceFault> {
    let contact = given(measured.contact, uncertainty.contact)?;
    let advancing = given(measured.advancing, uncertainty.advancing)?;
    let receding = given(measured.receding, uncertainty.receding)?;
    if let (Some(a), Some(c)) = (advancing, contact)
        && a.angle < c.angle
    {
        return Err(SurfaceFault::AdvancingBelowContact);
    }
    if let (Some(r), Some(c)) = (receding, contact)
        && r.angle > c.angle
    {
        return Err(SurfaceFault::RecedingAboveContact);
    }
    if let (Some(r), Some(a)) = (receding, advancing)
        && r.angle > a.angle
    {
        return Err(SurfaceFault::RecedingAboveAdvancing);
    }
    let assumed =
        Assumed { contact: contact.is_none(), advancing: advancing.is_none(), receding: receding.is_none() };
    let contact = match (contact, advancing, receding) {
        (Some(c), _, _) => c,
        (None, Some(a), None) => below_advancing(&a),
        (None, None, Some(r)) => above_receding(&r),
        (None, Some(a), Some(r)) => between(&a, &r),
        (None, None, None) => return Err(SurfaceFault::NoAngleGiven),
    };
    let around = around_contact(&contact, FROM_CONTACT);
    let angles = WettingAngles {
        contact,
        advancing: advancing.unwrap_or(around.advancing),
        receding: receding.unwrap_or(around.receding),
    };
    Ok((angles, assumed))
}

/// Advancing and receding angle by rule from a contact angle.
pub(super) fn around_contact(contact: &AngleEstimate, source: &'static str) -> WettingAngles {
    WettingAngles {
        contact: *contact,
        advancing: by_rule(contact, ADVANCING_EXCESS, ADVANCING_DOUBT, source),
        receding: by_rule(contact, -RECEDING_DEFICIT, RECEDING_DOUBT, source),
    }
}

fn given(angle: Option<f64>, standard_uncertainty: f64) -> Result<Option<AngleEstimate>, SurfaceFault> {
    let Some(angle) = angle else { return Ok(None) };
    if !(standard_uncertainty >= 0.0 && standard_uncertainty.is_finite()) {
        return Err(SurfaceFault::UnphysicalUncertainty);
    }
    Ok(Some(AngleEstimate {
        angle: accept_angle(angle)?,
        standard_uncertainty,
        source: "given: measured with this liquid",
        basis: Basis::Given,
    }))
}

fn by_rule(from: &AngleEstimate, step: f64, doubt: f64, source: &'static str) -> AngleEstimate {
    AngleEstimate {
        angle: (from.angle + step).clamp(0.0, PI),
        standard_uncertainty: libm::hypot(from.standard_uncertainty, doubt),
        source,
        basis: Basis::Estimate,
    }
}

fn below_advancing(advancing: &AngleEstimate) -> AngleEstimate {
    by_rule(advancing, -ADVANCING_EXCESS, ADVANCING_DOUBT, FROM_ADVANCING)
}

fn above_receding(receding: &AngleEstimate) -> AngleEstimate {
    by_rule(receding, RECEDING_DEFICIT, RECEDING_DOUBT, FROM_RECEDING)
}

fn between(advancing: &AngleEstimate, receding: &AngleEstimate) -> AngleEstimate {
    let (above, below) = (below_advancing(advancing), above_receding(receding));
    let weight = |e: &AngleEstimate| 1.0 / (e.standard_uncertainty * e.standard_uncertainty);
    let (wa, wb) = (weight(&above), weight(&below));
    let mean = (wa * above.angle + wb * below.angle) / (wa + wb);
    AngleEstimate {
        angle: mean.clamp(receding.angle, advancing.angle),
        standard_uncertainty: (1.0 / (wa + wb)).sqrt(),
        source: FROM_BOTH,
        basis: Basis::Estimate,
    }
}

#[cfg(test)]
mod tests {
    use super::{DEGREE, MeasuredAngles, MeasuredUncertainty, SurfaceFault, from_measured};
    use proptest::prelude::{Just, prop_assert, prop_oneof, proptest};
    use proptest::strategy::Strategy;

    fn degrees(contact: Option<f64>, advancing: Option<f64>, receding: Option<f64>) -> MeasuredAngles {
        let rad = |x: Option<f64>| x.map(|d| d * DEGREE);
        MeasuredAngles { contact: rad(contact), advancing: rad(advancing), receding: rad(receding) }
    }

    #[test]
    fn fills_in_by_rule_and_says_so() {
        let default = MeasuredUncertainty::default();
        let (angles, assumed) = from_measured(&degrees(Some(72.0), None, None), &default).unwrap();
        assert!((angles.advancing.angle - 82.0 * DEGREE).abs() < 1e-12);
        assert!((angles.receding.angle - 52.0 * DEGREE).abs() < 1e-12);
        assert!((angles.receding.standard_uncertainty - 234f64.sqrt() * DEGREE).abs() < 1e-12);
        assert!(!assumed.contact && assumed.advancing && assumed.receding);
        let (angles, assumed) = from_measured(&degrees(None, Some(82.0), None), &default).unwrap();
        assert!((angles.contact.angle - 72.0 * DEGREE).abs() < 1e-12 && assumed.contact);
        assert!(
            (angles.receding.angle - 52.0 * DEGREE).abs() < 1e-12 && assumed.receding && !assumed.advancing
        );
        let (angles, _) = from_measured(&degrees(None, None, Some(52.0)), &default).unwrap();
        assert!((angles.contact.angle - 72.0 * DEGREE).abs() < 1e-12);
        assert!((angles.advancing.angle - 82.0 * DEGREE).abs() < 1e-12);
    }

    #[test]
    fn refuses_contradictions() {
        let default = MeasuredUncertainty::default();
        for (c, a, r, fault) in [
            (None, None, None, SurfaceFault::NoAngleGiven),
            (Some(70.0), Some(60.0), None, SurfaceFault::AdvancingBelowContact),
            (Some(70.0), None, Some(71.0), SurfaceFault::RecedingAboveContact),
            (None, Some(60.0), Some(61.0), SurfaceFault::RecedingAboveAdvancing),
        ] {
            assert_eq!(from_measured(&degrees(c, a, r), &default), Err(fault));
        }
        assert!(from_measured(&degrees(Some(181.0), None, None), &default).is_err());
        assert!(from_measured(&degrees(Some(f64::NAN), None, None), &default).is_err());
        let negative = MeasuredUncertainty { contact: -1.0, ..default };
        assert_eq!(
            from_measured(&degrees(Some(70.0), None, None), &negative),
            Err(SurfaceFault::UnphysicalUncertainty)
        );
    }

    fn maybe() -> impl Strategy<Value = Option<f64>> {
        prop_oneof![Just(None), (0.0..=180.0).prop_map(Some)]
    }

    proptest! {
        #[test]
        fn always_in_order_and_uncertain(c in maybe(), a in maybe(), r in maybe()) {
            if let Ok((angles, _)) = from_measured(&degrees(c, a, r), &MeasuredUncertainty::default()) {
                prop_assert!(angles.receding.angle >= 0.0);
                prop_assert!(angles.receding.angle <= angles.contact.angle);
                prop_assert!(angles.contact.angle <= angles.advancing.angle);
                prop_assert!(angles.advancing.angle <= core::f64::consts::PI);
                for e in [angles.contact, angles.advancing, angles.receding] {
                    prop_assert!(e.standard_uncertainty > 0.0 && e.standard_uncertainty.is_finite());
                }
            }
        }
    }
}
