//! The decider of many cases at once is equal to the decider of one, point by point, on random questions of every kind.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::sync::atomic::AtomicBool;

use dribble_risk::{
    analysis::{
        calibration::{Calibration, Moments, Symmetric},
        decision::decide,
        evaluation::{Include, evaluate},
        fault::Fault,
        field::Field,
        spec::{LiquidSpec, OuterFace, Overrides, SectionSpec, Spec, SurfaceSpec, Uncertainties},
        sweep::{Axis, Block, Column, Output, Sweep, Values},
    },
    physics::{
        liquid::{self, Conditions},
        quantity,
        separation::closed_form::DEFAULT_SET,
        surface::{self, State},
    },
};
use proptest::{prelude::*, sample::Index};

fn section() -> impl Strategy<Value = SectionSpec> {
    prop_oneof![
        (2.0..200.0).prop_map(|width_mm| SectionSpec::Sheet { width_mm }),
        (20.0..170.0).prop_map(|included_angle_deg| SectionSpec::Vee { included_angle_deg }),
        (2.0..80.0).prop_map(|diameter_mm| SectionSpec::Trough { diameter_mm }),
        (1.0..40.0).prop_map(|bore_mm| SectionSpec::Tube { bore_mm }),
    ]
}

fn liquid() -> impl Strategy<Value = LiquidSpec> {
    let of_catalogue = (any::<Index>(), 2.0..60.0, 0.0..0.6, proptest::option::of(20.0..70.0)).prop_map(
        |(index, temperature_c, share, surface_tension_mn_m)| {
            let entry = index.get(liquid::catalogue());
            let mut conditions = Conditions { temperature_c, ..Conditions::default() };
            for parameter in entry.parameters {
                use liquid::Component as C;
                match parameter.component {
                    C::MassFraction => conditions.mass_fraction = Some(share),
                    C::Salinity => conditions.salinity_g_kg = Some(100.0 * share),
                    C::FatPercent => conditions.fat_percent = Some(50.0 * share),
                    C::Viscosity40 => conditions.viscosity_40c_mm2_s = Some(46.0),
                    C::Viscosity100 => conditions.viscosity_100c_mm2_s = Some(6.8),
                    C::Density15 => conditions.density_15c_kg_m3 = Some(870.0),
                }
            }
            let overrides = Overrides { surface_tension_mn_m, ..Overrides::default() };
            LiquidSpec::Catalogue { entry, conditions, overrides }
        },
    );
    prop_oneof![
        of_catalogue,
        (600.0..2000.0, -0.5..3.5, 15.0..80.0).prop_map(
            |(density_kg_m3, log_viscosity, surface_tension_mn_m)| LiquidSpec::Measured {
                density_kg_m3,
                viscosity_mpa_s: libm::pow(10.0, log_viscosity),
                surface_tension_mn_m,
            }
        ),
    ]
}

fn finish() -> impl Strategy<Value = SurfaceSpec> {
    let states: Vec<SurfaceSpec> = surface::catalogue()
        .iter()
        .flat_map(|material| {
            let known = State::ALL.into_iter().filter(|state| material.state(*state).is_some());
            known.map(move |state| SurfaceSpec::Catalogue { material, state })
        })
        .collect();
    prop_oneof![
        proptest::sample::select(states),
        (0.0..180.0, 0.0..40.0, 0.0..40.0, 1..8_u8).prop_map(|(contact, up, down, given)| {
            let contact: f64 = contact;
            let picked = |bit: u8, angle: f64| (given & bit != 0).then_some(angle.clamp(0.0, 180.0));
            SurfaceSpec::Measured {
                contact_angle_deg: picked(1, contact),
                advancing_deg: picked(2, contact + up),
                receding_deg: picked(4, contact - down),
            }
        }),
        (5.0..45.0, 0.0..30.0, 1.0..1.6).prop_map(|(dispersive_mn_m, polar_mn_m, roughness_ratio)| {
            SurfaceSpec::Estimated { dispersive_mn_m, polar_mn_m, roughness_ratio }
        }),
    ]
}

fn question() -> impl Strategy<Value = Spec> {
    let lip = (section(), 0.0..4.0, 20.0..180.0, -30.0..85.0, 0.0..80.0);
    let rest = (
        (finish(), liquid(), -1.0..3.5, any::<bool>(), 0.5..0.9999, proptest::option::of(0.001..0.5)),
        any::<bool>(),
    );
    (lip, rest).prop_map(|(lip, ((surface, liquid, log_flow, wet, confidence, uncertainty), calibrated))| {
        let (section, radius_mm, turn_deg, slope_deg, length_mm) = lip;
        let mut known = Uncertainties::default();
        if let Some(u) = uncertainty {
            known.set(Field::EdgeRadius, u);
        }
        Spec {
            section,
            radius_mm,
            turn_deg,
            slope_deg,
            length_mm,
            surface,
            liquid,
            flow_ml_s: libm::pow(10.0, log_flow),
            outer_face: if wet { OuterFace::Wet } else { OuterFace::Dry },
            confidence,
            uncertainty: known,
            coefficients: DEFAULT_SET,
            calibration: calibrated.then(calibration),
        }
    })
}

/// A calibration whose rows covered some of the questions and not others.
fn calibration() -> Calibration {
    let moments = Moments {
        mean: [0.25, -0.1, 0.15],
        covariance: Symmetric([0.01, 0.002, -0.001, 0.02, 0.003, 0.03]),
        scatter_variance: 0.02,
        ln_scatter: -2.0,
        ln_scatter_sd: 0.2,
    };
    let covered = [[-1.5, 0.5], [-0.5, 0.6], [-0.2, 0.5], [4.0, 7.0], [0.0, 1.5]];
    Calibration::new(&moments, [-0.4, 0.1], covered)
}

/// Axes over distinct fields that the question has, near its own values and far from them.
fn axes(spec: &Spec, picks: &[(Index, f64, usize, bool)]) -> Vec<Axis> {
    let mut fields: Vec<Field> = Field::all().filter(|field| field.get(spec).is_some()).collect();
    picks
        .iter()
        .map(|(index, far, count, log)| {
            let field = fields.remove(index.index(fields.len()));
            let q = field.quantity();
            let own = field.get(spec).unwrap();
            let (from, to) = if *log && own > 0.0 {
                (own / (1.0 + far), own * (1.0 + far))
            } else {
                let span = 0.2 * far * (q.maximum - q.minimum).min(60.0);
                (own - span, own + span)
            };
            let (from, to) = (from.max(q.minimum), to.min(q.maximum));
            let count = *count;
            let values = match *log && from > 0.0 {
                true => Values::Logarithmic { from, to, count },
                false => Values::Linear { from, to, count },
            };
            Axis::new(field, values)
        })
        .collect()
}

fn close(a: f64, b: f64) -> bool {
    a == b || (a.is_nan() && b.is_nan()) || (a - b).abs() <= 1e-12 * (1.0 + a.abs().max(b.abs()))
}

/// The same by the single path: safety factor, its interval, probability, uncertainty, critical Weber number, verdict.
fn single(spec: &Spec) -> Result<([f64; 7], &'static str), Vec<Fault>> {
    let case = spec.resolve()?.case;
    let d = decide(&case).map_err(|e| vec![Fault::new("/lip", "not_computable", e.to_string())])?;
    let (low, high) = d.safety_interval(&case);
    let critical = d.balance.threshold.critical_weber;
    let numbers =
        [d.safety_factor(), low, high, d.dribble_probability, d.margin, d.standard_uncertainty, critical];
    Ok((numbers, d.verdict.as_str()))
}

const NUMBERS: [Output; 7] = [
    Output::SafetyFactor,
    Output::SafetyFactorLow,
    Output::SafetyFactorHigh,
    Output::DribbleProbability,
    Output::Margin,
    Output::MarginStandardUncertainty,
    Output::CriticalWeber,
];

fn numbers(block: &Block, column: usize) -> &[f64] {
    let Column::Numbers(numbers) = &block.columns[column] else { panic!("not numbers") };
    numbers
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, ..ProptestConfig::default() })]
    #[test]
    fn both_deciders_agree_at_every_point(
        spec in question(),
        picks in proptest::collection::vec((any::<Index>(), 0.05..1.5_f64, 2..6_usize, any::<bool>()), 1..=4),
    ) {
        let axes = axes(&spec, &picks);
        let never = AtomicBool::new(false);
        let sweep = Sweep::new(spec, axes.clone(), &never).unwrap();
        let outputs: Vec<Output> = NUMBERS.into_iter().chain([Output::Verdict]).collect();
        let block = sweep.block(0..sweep.rows(), &outputs, &never).unwrap();
        prop_assert_eq!(block.len(), axes.iter().map(Axis::len).product::<usize>());
        let Column::Words(verdicts) = &block.columns[7] else { panic!("not words") };
        for row in 0..block.len() {
            let mut at = spec;
            for (axis, values) in axes.iter().zip(&block.axes) {
                axis.field().set(&mut at, values[row]);
            }
            match single(&at) {
                Ok((expected, verdict)) => {
                    prop_assert_eq!(block.faults.at(row), None);
                    prop_assert_eq!(verdicts[row], Some(verdict));
                    for (i, expected) in expected.into_iter().enumerate() {
                        let found = numbers(&block, i)[row];
                        prop_assert!(close(found, expected), "{:?} {} {}", NUMBERS[i], found, expected);
                    }
                }
                Err(faults) => {
                    prop_assert!(block.faults.at(row).is_some_and(|code| faults.iter().any(|f| f.code == code)));
                    prop_assert!(numbers(&block, 0)[row].is_nan() && verdicts[row].is_none());
                }
            }
        }
        // A part of it alone is the same part.
        let (from, to) = (block.len() / 3, block.len() - block.len() / 4);
        let part = sweep.chunk(from..to, &[Output::DribbleProbability], &never).unwrap();
        let same = numbers(&part, 0).iter().zip(&numbers(&block, 3)[from..to]).all(|(a, b)| a.to_bits() == b.to_bits());
        prop_assert!(same);
    }
}

/// Every other output is what the evaluation says.
#[test]
fn outputs_are_those_of_an_evaluation() {
    let base = Spec {
        section: SectionSpec::Trough { diameter_mm: 16.0 },
        radius_mm: 0.5,
        turn_deg: 120.0,
        slope_deg: 10.0,
        length_mm: 25.0,
        surface: SurfaceSpec::Measured {
            contact_angle_deg: None,
            advancing_deg: Some(84.0),
            receding_deg: Some(41.0),
        },
        liquid: LiquidSpec::Measured {
            density_kg_m3: 1030.0,
            viscosity_mpa_s: 2.1,
            surface_tension_mn_m: 46.0,
        },
        flow_ml_s: 25.0,
        outer_face: OuterFace::Dry,
        confidence: 0.95,
        uncertainty: Uncertainties::default(),
        coefficients: DEFAULT_SET,
        calibration: None,
    };
    let axes = vec![
        Axis::new(Field::EdgeRadius, Values::Linear { from: 0.0, to: 2.0, count: 5 }),
        Axis::new(Field::Flow, Values::Logarithmic { from: 1.0, to: 100.0, count: 7 }),
    ];
    let never = AtomicBool::new(false);
    let sweep = Sweep::new(base, axes.clone(), &never).unwrap();
    let outputs: Vec<Output> = Output::all().filter(|output| !output.is_word()).collect();
    let block = sweep.block(0..35, &outputs, &never).unwrap();
    for row in 0..35 {
        let mut at = base;
        for (axis, values) in axes.iter().zip(&block.axes) {
            axis.field().set(&mut at, values[row]);
        }
        let e = evaluate(&at, Include::NONE, &[]).unwrap();
        let (d, n) = (&e.decision, &e.decision.balance.numbers);
        let ml_s = |flow: Option<f64>| flow.map_or(f64::NAN, |f| f / quantity::FLOW.to_si);
        let bend = e.deflection.map_or(f64::NAN, |b| b.angle / quantity::DEGREE);
        for (output, expected) in [
            (Output::Weber, n.weber),
            (Output::Reynolds, n.reynolds),
            (Output::Froude, n.froude),
            (Output::Bond, n.bond),
            (Output::Capillary, n.capillary),
            (Output::Thickness, d.balance.stream.thickness * 1e3),
            (Output::Speed, d.balance.stream.speed),
            (Output::BrinkThickness, d.balance.stream.brink_thickness * 1e3),
            (Output::Deflection, bend),
            (Output::Density, 1030.0),
            (Output::Viscosity, 2.1),
            (Output::SurfaceTension, 46.0),
            (Output::ContactAngle, 84.0),
        ] {
            let column = outputs.iter().position(|o| *o == output).unwrap();
            let found = numbers(&block, column)[row];
            assert!(close(found, expected), "{output:?} {found} {expected}");
        }
        for (output, expected) in
            [(Output::OnsetFlow, ml_s(e.flows.onset)), (Output::RecoveryFlow, ml_s(e.flows.recovery))]
        {
            // Found by iteration from another start.
            let column = outputs.iter().position(|o| *o == output).unwrap();
            let found = numbers(&block, column)[row];
            assert!(
                (found / expected - 1.0).abs() < 1e-7 || found.is_nan() && expected.is_nan(),
                "{output:?}"
            );
        }
    }
}

#[test]
fn a_picture_is_drawn_from_the_same_table() {
    let mut base = plain();
    base.flow_ml_s = 15.0;
    let never = AtomicBool::new(false);
    let axes = vec![
        Axis::new(Field::Flow, Values::Logarithmic { from: 1.0, to: 100.0, count: 5 }),
        Axis::new(Field::EdgeRadius, Values::Listed(vec![0.1, 0.5])),
    ];
    let sweep = Sweep::new(base, axes, &never).unwrap();
    let table = sweep.picture_table(&never).unwrap();
    assert_eq!((table.axes[0].values.len(), table.axes[0].is_logarithmic), (5, true));
    assert_eq!(table.axes[1].values, [0.1, 0.5]);
    assert_eq!((table.safety_factor.len(), table.verdicts.len()), (10, 10));
    for row in 0..10 {
        let mut at = base;
        Field::Flow.set(&mut at, table.axes[0].values[row / 2]);
        Field::EdgeRadius.set(&mut at, table.axes[1].values[row % 2]);
        let (expected, verdict) = single(&at).unwrap();
        assert!(close(table.safety_factor[row], expected[0]) && close(table.low[row], expected[1]));
        assert!(close(table.high[row], expected[2]) && close(table.dribble_probability[row], expected[3]));
        assert_eq!(table.verdicts[row].map(|v| v.as_str()), Some(verdict));
    }
    let asked = table.asked.unwrap();
    assert_eq!(asked.at, [15.0, 0.8]);
    assert!(close(asked.decision.margin, single(&base).unwrap().0[4]));
}

#[test]
fn a_cancelled_sweep_stops() {
    let stop = AtomicBool::new(true);
    let spec = plain();
    let axis = || vec![Axis::new(Field::Flow, Values::Linear { from: 1.0, to: 2.0, count: 10 })];
    assert!(Sweep::new(spec, axis(), &stop).is_err());
    let sweep = Sweep::new(spec, axis(), &AtomicBool::new(false)).unwrap();
    assert!(sweep.block(0..10, &[Output::Margin], &stop).is_err());
}

fn plain() -> Spec {
    Spec {
        section: SectionSpec::Sheet { width_mm: 24.0 },
        radius_mm: 0.8,
        turn_deg: 110.0,
        slope_deg: 0.0,
        length_mm: 0.0,
        surface: SurfaceSpec::Measured {
            contact_angle_deg: Some(72.0),
            advancing_deg: None,
            receding_deg: None,
        },
        liquid: LiquidSpec::Measured {
            density_kg_m3: 1000.0,
            viscosity_mpa_s: 1.0,
            surface_tension_mn_m: 72.0,
        },
        flow_ml_s: 25.0,
        outer_face: OuterFace::Dry,
        confidence: 0.95,
        uncertainty: Uncertainties::default(),
        coefficients: DEFAULT_SET,
        calibration: None,
    }
}
