//! Statistics against standards, published tables and general-purpose reference libraries.
//!
//! Data, each row with source, basis and tolerance: `data/statistics.json`. Left out are rows about things the service
//! does not compute (correlated propagation, degrees of freedom after Welch and Satterthwaite, two-sided indices, tabulated
//! critical values of a test whose p-value is used) and those of bench calibrations, which have a file of their own.
#![allow(clippy::unwrap_used)]

use dribble_risk::analysis::statistics::{
    attribute_plan::{AttributePlan, Population},
    beta::binomial_cdf,
    capability, guard_band,
    guard_band::Inspection,
    hypergeometric::hypergeometric_cdf,
    indices::{Design, Function, Index, indices},
    moments::Moments,
    normal::{normal_cdf, normal_quantile},
    normality, proportion,
    random::Sequence,
    rare::{Mixture, WeightedCount, probable_point, probable_points},
    student::t_quantile,
    tolerance_factor::{one_sided_factor, pieces_without_distribution},
    variables_plan::{RiskPoint, VariablesPlan, acceptance_probability, fraction_accepted, wallis},
};
use serde_json::Value;

struct Row(Value);

impl Row {
    fn name(&self) -> &str {
        self.0["name"].as_str().unwrap()
    }

    fn input(&self, name: &str) -> f64 {
        self.0["inputs"][name].as_f64().unwrap()
    }

    fn count(&self, name: &str) -> u64 {
        self.0["inputs"][name].as_u64().unwrap()
    }

    fn list(&self, name: &str) -> Vec<f64> {
        self.0["inputs"][name].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect()
    }

    fn sorted(&self) -> Vec<f64> {
        let mut x = self.list("x");
        x.sort_by(f64::total_cmp);
        x
    }

    fn values(&self) -> Vec<f64> {
        match &self.0["value"] {
            Value::Array(values) => values.iter().map(|x| x.as_f64().unwrap()).collect(),
            value => vec![value.as_f64().unwrap()],
        }
    }

    fn value(&self) -> f64 {
        self.values()[0]
    }

    fn tolerance(&self) -> f64 {
        self.0["tolerance"].as_f64().unwrap()
    }

    fn point(&self, fraction: &str, risk: &str) -> RiskPoint {
        RiskPoint { fraction: self.input(fraction), risk: self.input(risk) }
    }
}

fn rows(prefix: &str, suffix: &str, expected: usize) -> Vec<Row> {
    let all: Vec<Value> = serde_json::from_str(include_str!("data/statistics.json")).unwrap();
    let rows: Vec<Row> = all
        .into_iter()
        .map(Row)
        .filter(|row| row.name().starts_with(prefix) && row.name().ends_with(suffix))
        .collect();
    assert_eq!(rows.len(), expected, "rows named {prefix}*{suffix}");
    rows
}

/// Checks rows by name: `compute` must meet every number of the row's value within its tolerance, which is absolute.
fn check(prefix: &str, suffix: &str, expected: usize, compute: impl Fn(&Row) -> Vec<f64>) {
    for row in rows(prefix, suffix, expected) {
        assert!(row.0["source"].is_string() && row.0["basis"] != "regression", "{}", row.name());
        let computed = compute(&row);
        assert_eq!(computed.len(), row.values().len(), "{}", row.name());
        for (ours, theirs) in computed.iter().zip(row.values()) {
            // 1e-12: rounding of the decimal fractions in the file.
            let allowed = row.tolerance() + 1e-12 * theirs.abs();
            assert!((ours - theirs).abs() <= allowed, "{}: {ours}, should be {theirs}", row.name());
        }
    }
}

#[test]
fn every_row_is_checked() {
    assert_eq!(rows("", "", ROWS).len(), ROWS);
    assert!(rows("", "", ROWS).iter().map(|row| row.values().len()).sum::<usize>() >= 150);
}

const ROWS: usize = 143;

#[test]
fn student_t_and_normal_quantiles() {
    check("gum_H1_t99", "", 1, |r| vec![t_quantile(0.5 * (1.0 + r.input("p")), r.input("nu")).unwrap()]);
    check("outlier_threshold", "", 1, |r| {
        vec![-normal_quantile(r.input("family_alpha") / (2.0 * r.input("n")))]
    });
}

#[test]
fn intervals_of_a_proportion() {
    let end = |name: &str, (low, high): (f64, f64)| vec![if name.ends_with("_lo") { low } else { high }];
    check("ci95_wilson", "", 6, |r| end(r.name(), proportion::wilson(r.count("x"), r.count("n"), 0.95)));
    check("ci95_clopper", "", 5, |r| {
        end(r.name(), proportion::clopper_pearson(r.count("x"), r.count("n"), 0.95).unwrap())
    });
    check("ci90_clopper", "", 1, |r| {
        end(r.name(), proportion::clopper_pearson(r.count("x"), r.count("n"), 0.90).unwrap())
    });
    let ppm = |ends: Vec<f64>| ends.iter().map(|x| 1e6 * x).collect::<Vec<f64>>();
    check("ppm_wilson", "", 1, |r| ppm(end(r.name(), proportion::wilson(r.count("x"), r.count("n"), 0.95))));
    check("ppm_clopper", "", 2, |r| {
        ppm(end(r.name(), proportion::clopper_pearson(r.count("x"), r.count("n"), 0.95).unwrap()))
    });
    check("ppm_upper95", "", 1, |r| {
        ppm(vec![proportion::upper_bound(r.count("x"), r.count("n"), 0.95).unwrap()])
    });
    check("cp_upper95", "", 1, |r| vec![proportion::upper_bound(r.count("x"), r.count("n"), 0.95).unwrap()]);
}

#[test]
fn tolerance_factors_and_pieces_without_distribution() {
    check("tol_k1", "", 9, |r| {
        vec![one_sided_factor(r.count("n"), r.input("coverage"), r.input("confidence")).unwrap()]
    });
    check("nonparam_n", "", 4, |r| {
        vec![pieces_without_distribution(r.input("coverage"), r.input("confidence")) as f64]
    });
}

#[test]
fn plans_by_variables() {
    check("var_plan_exact", "", 6, |r| {
        let plan = VariablesPlan::between(r.point("AQL", "alpha"), r.point("LQ", "beta")).unwrap();
        vec![plan.pieces as f64, plan.k_low, plan.k_high]
    });
    check("var_plan_wallis", "", 4, |r| {
        let plan = wallis(r.point("AQL", "alpha"), r.point("LQ", "beta"));
        vec![plan.sigma_known, plan.sigma_unknown, plan.k]
    });
    check("z19_LQ10", "", 5, |r| vec![fraction_accepted(r.count("n"), r.input("k"), r.input("Pa")).unwrap()]);
    let accepted = |r: &Row| vec![acceptance_probability(r.count("n"), r.input("k"), r.input("p"))];
    check("z19_Pa", "", 3, accepted);
    check("oc_kmethod", "", 8, accepted);
}

#[test]
fn plans_by_attributes() {
    let binomial = |r: &Row| binomial_cdf(r.count("c"), r.count("n"), r.input("p"));
    check("oc_binom", "", 21, |r| vec![binomial(r)]);
    check("attr_plan", "", 1, |r| {
        let (producer, consumer) = (r.point("AQL", "alpha"), r.point("LQ", "beta"));
        let plan = AttributePlan::between(Population::Stream, producer, consumer).unwrap();
        let accepts = |p| Population::Stream.acceptance_probability(plan.pieces, plan.accept_at_most, p);
        let (alpha, beta) = (1.0 - accepts(producer.fraction), accepts(consumer.fraction));
        vec![plan.pieces as f64, plan.accept_at_most as f64, alpha, beta]
    });
    check("zero_accept_n", "", 4, |r| {
        vec![Population::Stream.pieces_for(0, r.point("LQ", "beta")).unwrap() as f64]
    });
    check("zero_accept_hyper", "", 3, |r| {
        let consumer = RiskPoint { fraction: r.input("D") / r.input("N"), risk: r.input("beta") };
        vec![Population::Lot(r.count("N")).pieces_for(0, consumer).unwrap() as f64]
    });
    check("oc_hyper", "", 2, |r| {
        vec![hypergeometric_cdf(r.count("c"), r.count("N"), r.count("D"), r.count("n"))]
    });
}

fn quality(r: &Row) -> (u64, f64) {
    let moments = Moments::of(&r.list("x")).unwrap();
    (moments.count as u64, (r.input("U") - moments.mean) / moments.standard_deviation.unwrap())
}

#[test]
fn capability_of_a_lot() {
    check("lot25_mean", "", 1, |r| vec![Moments::of(&r.list("x")).unwrap().mean]);
    check("lot25_PpkU", "U", 1, |r| vec![capability::index(quality(r).1)]);
    check("lot25_PpkU_lower95", "", 1, |r| {
        let (n, q) = quality(r);
        vec![capability::index(capability::quality_low(q, n, 0.95).unwrap())]
    });
    check("lot25_p_mvue", "", 1, |r| {
        let (n, q) = quality(r);
        vec![1e6 * capability::fraction_unbiased(q, n).unwrap()]
    });
    check("lot25_upper_tolerance", "", 1, |r| {
        let moments = Moments::of(&r.list("x")).unwrap();
        let k = one_sided_factor(25, 0.99, 0.95).unwrap();
        vec![moments.mean + k * moments.standard_deviation.unwrap()]
    });
    check("mil414_example_Q", "", 1, |r| vec![quality(r).1]);
    check("mil414_example_mvue", "", 1, |r| {
        let (n, q) = quality(r);
        vec![100.0 * capability::fraction_unbiased(q, n).unwrap()]
    });
    check("mil414_example_plugin", "", 1, |r| vec![100.0 * capability::fraction_at(quality(r).1)]);
    check("mil414_mvue_pct", "", 1, |r| {
        vec![100.0 * capability::fraction_unbiased(r.input("Q"), r.count("n")).unwrap()]
    });
    check("nist_pmc16_Cpk", "", 1, |r| {
        vec![capability::index((r.input("U") - r.input("mean")) / r.input("s"))]
    });
}

#[test]
fn guard_bands_and_their_risks() {
    check("jcgm106_zener_pc", "", 1, |r| {
        vec![guard_band::conformance_probability(r.input("y"), r.input("u"), r.input("TU"))]
    });
    check("guard_r1", "", 1, |_| vec![1.0 - guard_band::conformance_probability(-2.0, 1.0, 0.0)]);
    check("guard_factor", "", 1, |r| vec![guard_band::factor(r.input("conformance"))]);
    let inspection = |r: &Row| Inspection {
        mean: r.input("mu"),
        spread: r.input("s0"),
        uncertainty: r.input("u_m"),
        upper: r.input("TU"),
        accept_up_to: r.input("A"),
    };
    check("global_consumer_risk", "", 3, |r| vec![inspection(r).consumer_risk()]);
    check("global_producer_risk", "", 2, |r| vec![inspection(r).producer_risk()]);
}

#[test]
fn tests_of_normality() {
    check("ad_A2_", "", 1, |r| vec![normality::anderson_darling_a2(&r.sorted()).unwrap()]);
    check("ad_A2star_", "", 1, |r| vec![normality::anderson_darling(&r.sorted()).unwrap().statistic]);
    check("ad_p_", "", 2, |r| vec![normality::anderson_darling(&r.sorted()).unwrap().p_value]);
    check("sw_W_", "", 3, |r| vec![normality::shapiro_wilk(&r.sorted()).unwrap().statistic]);
    check("sw_p_", "", 2, |r| vec![normality::shapiro_wilk(&r.sorted()).unwrap().p_value]);
    // Tabulated critical values: the p-value passes through the level within their tolerance.
    for row in rows("sw_crit5_", "", 2) {
        let p = |w: f64| normality::shapiro_wilk_p(w, row.count("n") as usize);
        let (w, t) = (row.value(), row.tolerance());
        assert!(p(w - t) < row.input("alpha") && row.input("alpha") < p(w + t), "{}", row.name());
    }
}

/// Estimates with standard errors: within four of them of the exact value.
fn check_indices(prefix: &str, found: &[Index], expected: usize) {
    let mut seen = 0;
    for (i, index) in found.iter().enumerate() {
        for (kind, value, error) in
            [("S", index.first_order, index.first_order_error), ("ST", index.total, index.total_error)]
        {
            let name = format!("{prefix}_{kind}{}", i + 1);
            let all = rows(&name, "", usize::from(i < expected));
            for row in all {
                let off = (value - row.value()).abs();
                assert!(off < 4.0 * error + 1e-9 && error < 0.02, "{name}: {value} ± {error}");
                seen += 1;
            }
        }
    }
    assert_eq!(seen, 2 * expected);
}

struct Plain<F>(F);

impl<F: Fn(&[f64]) -> Option<f64>> Function for Plain<F> {
    fn place(&mut self, _: usize, _: &mut [f64]) {}

    fn results(&mut self, columns: &[Vec<f64>], results: &mut [f64]) {
        for (i, result) in results.iter_mut().enumerate() {
            let point: Vec<f64> = columns.iter().map(|c| c[i]).collect();
            *result = (self.0)(&point).unwrap_or(f64::NAN);
        }
    }
}

#[test]
fn sobol_indices_of_the_ishigami_and_the_g_function() {
    let design = Design { points: 16_384, seed: 1 };
    let ishigami = |u: &[f64]| {
        let x = |i: usize| core::f64::consts::PI * (2.0 * u[i] - 1.0);
        let square = |s: f64| s * s;
        Some(libm::sin(x(0)) + 7.0 * square(libm::sin(x(1))) + 0.1 * square(square(x(2))) * libm::sin(x(0)))
    };
    check_indices("ishigami", &indices(3, design, || Plain(ishigami), |_| true).unwrap(), 3);
    let g_function = |u: &[f64]| {
        let a = [0.0, 1.0, 4.5, 9.0, 99.0, 99.0, 99.0, 99.0];
        Some(u.iter().zip(a).map(|(x, a)| ((4.0 * x - 2.0).abs() + a) / (1.0 + a)).product())
    };
    check_indices("gfunc8", &indices(8, design, || Plain(g_function), |_| true).unwrap(), 5);
}

fn sampled(mut g: impl FnMut(&[f64]) -> Option<f64>, inputs: usize, draws: u64) -> WeightedCount {
    let mixture = Mixture::around(&probable_points(&mut g, inputs), inputs);
    let mut numbers = Sequence::new(1, 0).from(0);
    let (mut count, mut z) = (WeightedCount::default(), vec![0.0; inputs]);
    for _ in 0..draws {
        let pick = numbers.next_open();
        z.iter_mut().for_each(|x| *x = normal_quantile(numbers.next_open()));
        let weight = mixture.draw(pick, &mut z);
        count.add(weight, g(&z).is_some_and(|value| value < 0.0));
    }
    count
}

/// The exact probability lies within four standard errors of the sampled one, and those are small.
fn check_probability(name: &str, g: impl FnMut(&[f64]) -> Option<f64>) {
    let row = &rows(name, "", 1)[0];
    let count = sampled(g, 2, 60_000);
    let (p, error) = (count.probability(), count.standard_error());
    assert!((p - row.value()).abs() < 4.0 * error && error < 0.03 * p, "{name}: {p} ± {error}");
}

#[test]
fn rare_events() {
    // R ~ N(200, 10), S ~ N(100, 20).
    let mut difference = |u: &[f64]| Some((200.0 + 10.0 * u[0]) - (100.0 + 20.0 * u[1]));
    let point = probable_point(&mut difference, &[0.0, 0.0]).unwrap();
    check("form_RS_beta", "", 1, |_| vec![point.distance]);
    check("form_RS_pf", "", 1, |_| vec![normal_cdf(-point.distance)]);
    check("form_RS_design", "", 1, |_| vec![200.0 + 10.0 * point.at[0], 100.0 + 20.0 * point.at[1]]);
    check_probability("form_RS_pf", difference);
    let exponentials =
        |u: &[f64]| Some(libm::exp(0.4 * (u[0] + 2.0) + 6.2) - libm::exp(0.3 * u[1] + 5.0) - 200.0);
    check("form_exp_g_beta", "", 1, |_| {
        vec![probable_point(&mut exponentials.clone(), &[0.0, 0.0]).unwrap().distance]
    });
    // A bar under an axial force: R lognormal with mean 300 and sd 30, F ~ N(75000, 5000), area 100π.
    let sd_log = libm::log1p(0.01).sqrt();
    let mu_log = libm::log(300.0) - 0.5 * sd_log * sd_log;
    let bar = |u: &[f64]| {
        Some(
            libm::exp(mu_log + sd_log * u[0]) - (75_000.0 + 5_000.0 * u[1]) / (100.0 * core::f64::consts::PI),
        )
    };
    let point = probable_point(&mut bar.clone(), &[0.0, 0.0]).unwrap();
    check("axial_beam_form_beta", "", 1, |_| vec![point.distance]);
    check("axial_beam_form_pf", "", 1, |_| vec![normal_cdf(-point.distance)]);
    check_probability("axial_beam_pf_exact", bar);
    // Four branches: the nearest alone would give 1.35e-3.
    let four = |u: &[f64]| {
        let root2 = core::f64::consts::SQRT_2;
        let (sum, difference) = (u[0] + u[1], u[0] - u[1]);
        let curved = 3.0 + 0.1 * difference * difference;
        let branches =
            [curved - sum / root2, curved + sum / root2, difference + 7.0 / root2, 7.0 / root2 - difference];
        Some(branches.into_iter().fold(f64::INFINITY, f64::min))
    };
    check("four_branch_form_beta", "", 1, |_| vec![probable_points(&mut four.clone(), 2)[0].distance]);
    check_probability("four_branch_pf_exact", four);
}
