//! Trends, limits and continuity over the whole accepted region.

use proptest::prelude::*;

use super::{Control, Flags, Stream, approach_film};
use crate::physics::GRAVITY;
use crate::physics::lip::{Run, Section};
use crate::physics::liquid::Liquid;
use crate::physics::quantity::{self, DEGREE, Quantity};

const WATER: Liquid = Liquid { density: 998.2, viscosity: 1.002e-3, surface_tension: 0.07275 };

fn liquid(viscosity: f64) -> Liquid {
    Liquid { density: 1000.0, viscosity, surface_tension: 0.04 }
}

fn film(section: &Section, slope: f64, length: f64, liquid: &Liquid, flow: f64) -> Stream {
    approach_film(section, &Run { slope, length }, liquid, flow)
        .unwrap_or_else(|fault| panic!("{section:?} {slope} {length} {liquid:?} {flow}: {fault}"))
}

/// Thin, middling and large sections of each kind.
fn sections() -> Vec<Section> {
    let mut all = Vec::new();
    for (width, angle, diameter, bore) in
        [(1e-3, 20.0, 1e-3, 0.5e-3), (0.024, 80.0, 0.016, 0.012), (2.0, 170.0, 0.5, 0.2)]
    {
        all.push(Section::Sheet { width });
        all.push(Section::Vee { included_angle: angle * DEGREE });
        all.push(Section::Trough { diameter });
        all.push(Section::Tube { bore });
    }
    all
}

fn geometric(from: f64, to: f64, steps: u32) -> impl Iterator<Item = f64> {
    (0..=steps).map(move |i| from * libm::pow(to / from, f64::from(i) / f64::from(steps)))
}

const SLOPES: [f64; 14] = [-30.0, -5.0, 0.0, 0.05, 0.3, 1.0, 3.0, 8.0, 15.0, 30.0, 45.0, 60.0, 75.0, 85.0];
const LENGTHS: [f64; 7] = [0.0, 1e-4, 1e-3, 5e-3, 0.02, 0.1, 1.0];
const VISCOSITIES: [f64; 8] = [1e-4, 1e-3, 1e-2, 0.07, 0.3, 1.0, 30.0, 1000.0];

/// More flow never lowers speed, U²h or thickness, and nothing jumps.
#[test]
fn more_flow_is_never_slower_nor_thinner() {
    let ratio = libm::pow(2e6, 1.0 / 300.0);
    let mut worst = [0.0_f64; 4];
    for section in sections() {
        for degrees in SLOPES {
            for length in LENGTHS {
                for viscosity in VISCOSITIES {
                    let liquid = liquid(viscosity);
                    let mut last: Option<Stream> = None;
                    for flow in geometric(1e-8, 0.02, 300) {
                        let now = film(&section, degrees * DEGREE, length, &liquid, flow);
                        if let Some(before) = last {
                            let grows = [
                                libm::log(now.speed / before.speed),
                                libm::log(now.thickness / before.thickness),
                                libm::log(now.area / before.area),
                                libm::log(now.brink_depth / before.brink_depth),
                            ];
                            for (w, g) in worst.iter_mut().zip(grows) {
                                if g < *w - 1e-9 {
                                    println!(
                                        "{section:?} {degrees} {length} {viscosity} {flow}: {grows:?}\n  {before:?}\n {now:?}"
                                    );
                                }
                                *w = w.min(g);
                            }
                            let most = 1.5 * libm::log(ratio);
                            assert!(
                                grows[0] < most && grows[1] < most && grows[2] < most,
                                "jump: {section:?} {degrees} {length} {viscosity} {flow}: {grows:?}\n {before:?}\n {now:?}"
                            );
                        }
                        last = Some(now);
                    }
                }
            }
        }
    }
    assert!(worst[0] > -1e-9 && worst[1] > -1e-9 && worst[2] > -1e-9, "{worst:?}");
}

/// A steeper floor never slows a sheet, but for the exception in the module's documentation.
///
/// A sheet depends on Re = q/ν, L/y_c and the slope only.
#[test]
fn a_steeper_floor_never_slows_a_sheet() {
    let section = Section::Sheet { width: 1.0 };
    let flow = 1e-3;
    let critical = libm::cbrt(flow * flow / GRAVITY);
    for reynolds in geometric(1e-3, 1e6, 72) {
        let liquid = liquid(1000.0 * flow / reynolds);
        for length in [0.0].into_iter().chain(geometric(1e-3, 1e4, 21)) {
            let mut fastest = 0.0_f64;
            for step in -75..=850 / 4 {
                let degrees = 0.4 * f64::from(step);
                let now = film(&section, degrees * DEGREE, length * critical, &liquid, flow).speed;
                let falls = 1.0 - now / fastest;
                let excepted = degrees > 82.0 && length < 0.6 && reynolds > 3.0 && reynolds < 4.1;
                assert!(falls < if excepted { 1e-4 } else { 1e-9 }, "{reynolds} {length} {degrees}: {falls}");
                fastest = fastest.max(now);
            }
        }
    }
}

/// Nothing jumps where the slope passes through a border of regimes: a step of 1e-6 rad changes the results
/// by less than 1e-3.
#[test]
fn nothing_jumps_with_the_slope() {
    for section in sections() {
        for length in LENGTHS {
            for viscosity in VISCOSITIES {
                let liquid = liquid(viscosity);
                for flow in geometric(1e-8, 0.02, 12) {
                    let at = |slope: f64| film(&section, slope, length, &liquid, flow);
                    for degrees in SLOPES {
                        // Look for the border by bisection on the control.
                        let (mut low, mut high) = (degrees * DEGREE, 85.0 * DEGREE);
                        for _ in 0..30 {
                            let middle = 0.5 * (low + high);
                            if at(middle).control == at(low).control { low = middle } else { high = middle }
                        }
                        for (a, b) in
                            [(low - 1e-7, high + 1e-7), (degrees * DEGREE - 1e-7, degrees * DEGREE + 1e-7)]
                        {
                            let (a, b) = (at(a), at(b));
                            for (x, y) in [
                                (a.speed, b.speed),
                                (a.thickness, b.thickness),
                                (a.momentum_factor, b.momentum_factor),
                                (a.brink_thickness, b.brink_thickness),
                            ] {
                                assert!(
                                    (x / y - 1.0).abs() < 1e-3,
                                    "{section:?} {length} {viscosity} {flow}\n{a:?}\n{b:?}"
                                );
                            }
                        }
                    }
                }
            }
        }
    }
}

/// The march of round and vee sections against Simpson's rule with 40 000 intervals in the depth itself.
#[test]
fn the_march_agrees_with_a_fine_integration() {
    let mut checked = 0;
    for section in [
        Section::Vee { included_angle: 80.0 * DEGREE },
        Section::Trough { diameter: 0.016 },
        Section::Tube { bore: 0.02 },
    ] {
        for (viscosity, flow) in [(1e-3, 2e-5), (1e-3, 2e-6), (0.07, 2e-5), (0.02, 5e-6)] {
            for degrees in [5.0, 30.0, 75.0] {
                for length in [2e-3, 0.02, 0.3] {
                    let liquid = liquid(viscosity);
                    let nu = liquid.kinematic_viscosity();
                    let slope = degrees * DEGREE;
                    let stream = film(&section, slope, length, &liquid, flow);
                    if stream.momentum_factor < super::DEVELOPED || stream.flags.contains(Flags::TUBE_FILLING)
                    {
                        continue;
                    }
                    let start = film(&section, slope, 0.0, &liquid, flow);
                    if start.momentum_factor < super::DEVELOPED {
                        continue;
                    }
                    let (sine, cosine) = libm::sincos(slope);
                    let rate = |y: f64| {
                        let w = section.wetted(y);
                        let froude = 1.2 * flow * flow * w.top_width / (GRAVITY * w.area * w.area * w.area);
                        (cosine - froude) / (sine - super::friction_slope(&section, y, flow, nu))
                    };
                    let intervals = 40_000;
                    let step = (stream.depth - start.depth) / f64::from(intervals);
                    if step.abs() < 1e-13 || stream.depth < stream.normal_depth.unwrap() * (1.0 + 1e-4) {
                        continue; // normal to the last digits: the inverse integral is singular there
                    }
                    let sum: f64 = (0..=intervals)
                        .map(|i| {
                            let weight = if i == 0 || i == intervals {
                                1.0
                            } else if i % 2 == 1 {
                                4.0
                            } else {
                                2.0
                            };
                            weight * rate(start.depth + step * f64::from(i))
                        })
                        .sum();
                    let error = (sum * step / 3.0 - length) / rate(stream.depth) / stream.depth;
                    assert!(error.abs() < 1e-7, "{section:?} {viscosity} {flow} {degrees} {length}: {error}");
                    checked += 1;
                }
            }
        }
    }
    assert!(checked > 30, "{checked}");
}

/// On a level sheet the film is critical, U²/(gh) = 1, exactly; on a level vee, U²/(g A/T) = 1.
#[test]
fn a_level_lip_is_critical() {
    for flow in geometric(1e-6, 1e-3, 30) {
        let stream = film(&Section::Sheet { width: 0.024 }, 0.0, 0.02, &WATER, flow);
        let q = flow / 0.024;
        assert!((stream.thickness / libm::cbrt(q * q / GRAVITY) - 1.0).abs() < 1e-14);
        assert!((stream.speed * stream.speed / (GRAVITY * stream.thickness) - 1.0).abs() < 1e-13);
        assert_eq!((stream.momentum_factor, stream.control), (1.0, Control::Brink));
        for section in [Section::Vee { included_angle: 1.4 }, Section::Trough { diameter: 0.012 }] {
            let stream = film(&section, 0.0, 0.02, &WATER, flow);
            assert!((stream.speed * stream.speed / (GRAVITY * stream.thickness) - 1.0).abs() < 1e-11);
        }
    }
}

/// A long run carries the Nusselt film, and a thin liquid obeys Bernoulli from the head of the level crest.
#[test]
fn limits_of_a_steep_run() {
    for degrees in [10.0, 30.0, 60.0, 85.0] {
        let slope = degrees * DEGREE;
        let (sine, cosine) = libm::sincos(slope);
        let section = Section::Sheet { width: 0.02 };
        let oil = Liquid { density: 915.0, viscosity: 0.010, surface_tension: 0.032 };
        let q = 1e-3;
        let long = film(&section, slope, 1.0, &oil, q * 0.02);
        let nusselt = libm::cbrt(3.0 * oil.kinematic_viscosity() * q / (GRAVITY * sine));
        assert!((long.thickness / nusselt - 1.0).abs() < 1e-4, "{} {nusselt}", long.thickness);

        let thin = Liquid { viscosity: 1e-9, ..WATER };
        let stream = film(&section, slope, 0.05, &thin, q * 0.02);
        let head = 1.5 * libm::cbrt(1.2 * q * q / GRAVITY) + 0.05 * sine;
        let at_end = stream.thickness * cosine + 1.2 * stream.speed * stream.speed / (2.0 * GRAVITY);
        assert!((at_end / head - 1.0).abs() < 1e-4, "{at_end} {head}");
        let vee = film(&Section::Vee { included_angle: 1.4 }, slope, 1000.0, &oil, q * 0.02);
        assert!((vee.depth / vee.normal_depth.unwrap() - 1.0).abs() < 1e-12);
        assert_eq!(vee.control, Control::Crest);
    }
}

/// A creeping film on a level floor is (12νq/g)^⅓ less the softening, and at the brink at least (3νq/g)^⅓.
#[test]
fn a_very_viscous_level_film_is_not_critical() {
    let honey = liquid(10.0);
    let stream = film(&Section::Sheet { width: 0.02 }, 0.0, 0.02, &honey, 2e-5);
    let creeping = libm::cbrt(12.0 * 0.01 * 1e-3 / GRAVITY);
    assert!((stream.thickness / creeping - libm::exp(-0.05)).abs() < 1e-12);
    assert!(stream.flags.contains(Flags::VISCOUS_APPROACH_BOUND));
    assert!(stream.brink_thickness >= libm::cbrt(3.0 * 0.01 * 1e-3 / GRAVITY));
    assert!(
        !film(&Section::Sheet { width: 0.02 }, 0.0, 0.02, &WATER, 2e-5)
            .flags
            .contains(Flags::VISCOUS_APPROACH_BOUND)
    );
}

#[test]
fn a_tube_fills_without_slowing_and_a_narrow_one_is_always_full() {
    let wide = Section::Tube { bore: 0.02 };
    let full = film(&wide, 0.0, 0.05, &WATER, 4e-4);
    assert_eq!(full.control, Control::Full);
    assert!((full.thickness / (core::f64::consts::FRAC_PI_4 * 0.02) - 1.0).abs() < 1e-12);
    assert!((full.thickness_low / 0.005 - 1.0).abs() < 1e-12 && full.thickness_high == 0.02);
    assert!(full.flags.contains(Flags::TUBE_FULL) && full.brink_depth == full.depth);
    let narrow = film(&Section::Tube { bore: 0.003 }, 0.0, 0.05, &WATER, 1e-7);
    assert!(narrow.flags.contains(Flags::TUBE_FULL), "{narrow:?}");
    assert!(film(&wide, 0.0, 0.05, &WATER, 1e-5).control == Control::Brink);
}

fn within(quantity: Quantity) -> impl Strategy<Value = f64> {
    (quantity.minimum..=quantity.maximum).prop_map(move |x| x * quantity.to_si)
}

fn within_decades(quantity: Quantity) -> impl Strategy<Value = f64> {
    (libm::log(quantity.minimum)..=libm::log(quantity.maximum))
        .prop_map(move |x| libm::exp(x) * quantity.to_si)
}

fn any_section() -> impl Strategy<Value = Section> {
    prop_oneof![
        within_decades(quantity::SHEET_WIDTH).prop_map(|width| Section::Sheet { width }),
        within(quantity::INCLUDED_ANGLE).prop_map(|included_angle| Section::Vee { included_angle }),
        within_decades(quantity::TROUGH_DIAMETER).prop_map(|diameter| Section::Trough { diameter }),
        within_decades(quantity::TUBE_BORE).prop_map(|bore| Section::Tube { bore }),
    ]
}

fn any_liquid() -> impl Strategy<Value = Liquid> {
    (within(quantity::DENSITY), within_decades(quantity::VISCOSITY), within(quantity::SURFACE_TENSION))
        .prop_map(|(density, viscosity, surface_tension)| Liquid { density, viscosity, surface_tension })
}

fn any_slope() -> impl Strategy<Value = f64> {
    prop_oneof![
        3 => within(quantity::RUN_SLOPE),
        1 => Just(0.0),
        2 => (-9.0..0.0_f64).prop_map(|x| libm::exp(x) * 1.4),
    ]
}

fn any_length() -> impl Strategy<Value = f64> {
    prop_oneof![within(quantity::RUN_LENGTH), Just(0.0), (-9.0..0.0_f64).prop_map(libm::exp)]
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(4000))]

    #[test]
    fn every_accepted_case_gives_a_stream(
        section in any_section(), slope in any_slope(), length in any_length(),
        liquid in any_liquid(), flow in within_decades(quantity::FLOW), more in 1.0..1.5_f64,
    ) {
        let s = film(&section, slope, length, &liquid, flow);
        for value in [
            s.thickness, s.thickness_low, s.thickness_high, s.depth, s.speed, s.area, s.critical_depth,
            s.normal_depth.unwrap_or(1.0), s.momentum_factor, s.brink_thickness, s.brink_depth, s.brink_speed,
        ] {
            prop_assert!(value.is_finite() && value > 0.0, "{s:?}");
        }
        prop_assert!((s.speed * s.area / flow - 1.0).abs() < 1e-12);
        prop_assert!((section.area(s.depth) / s.area - 1.0).abs() < 1e-9, "{s:?}");
        let order = 1.0 + 1e-12;
        prop_assert!(s.thickness_low <= s.thickness * order && s.thickness <= s.thickness_high * order, "{s:?}");
        prop_assert!(s.brink_depth <= s.depth && s.brink_speed >= s.speed * (1.0 - 1e-12), "{s:?}");

        let t = film(&section, slope, length, &liquid, flow * more);
        prop_assert!(t.speed >= s.speed * (1.0 - 1e-9), "{s:?} {t:?}");
        prop_assert!(t.thickness >= s.thickness * (1.0 - 1e-9), "{s:?} {t:?}");
        prop_assert!(t.brink_depth >= s.brink_depth * (1.0 - 1e-9), "{s:?} {t:?}");
    }

    /// Differences over relative steps of 1e-4 and 2e-4 agree: no noise that would spoil a derivative.
    #[test]
    fn outputs_are_smooth_enough_for_differences(
        section in any_section(), slope in any_slope(), length in any_length(),
        liquid in any_liquid(), flow in within_decades(quantity::FLOW),
    ) {
        let at = |x: f64| libm::log(film(&section, slope, length, &liquid, flow * (1.0 + x)).speed);
        let derivative = |step: f64| (at(step) - at(-step)) / (2.0 * step);
        let (fine, coarse) = (derivative(1e-4), derivative(2e-4));
        // Kinks (a tube's cavity flow, its full bore) may fall between the two: then both still lie between
        // the one-sided slopes.
        let sides = [(at(0.0) - at(-2e-4)) / 2e-4, (at(2e-4) - at(0.0)) / 2e-4];
        let (low, high) = (sides[0].min(sides[1]), sides[0].max(sides[1]));
        prop_assert!((fine - coarse).abs() < 1e-4 + (high - low), "{fine} {coarse} {sides:?}");
        prop_assert!((-1e-5..=1.0 + 1e-5).contains(&fine), "{fine}");
    }
}
