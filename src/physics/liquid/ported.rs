//! Values of every formula computed by an independent implementation of the same equations: they find a slip of the pen
//! in a coefficient, nothing more. What nature says is checked in `tests/published/liquids.rs`.
//!
//! Left out, because the formula here departs on purpose: sea water's density above 40 °C and milk's viscosity above
//! 30 °C (see there); acetone at 60 °C, where it boils.

use super::condition::{Component, Conditions};
use super::walther::WaltherLine;
use super::{Liquid, brine, ethanol, find, glycerol, honey, milk, mineral_oil, sea_water, sucrose, water};

/// For each second argument (composition; 0 where there is none) pairs of temperature (°C) and value (SI).
type Rows<'a> = &'a [(f64, &'a [(f64, f64)])];

fn check(name: &str, formula: impl Fn(f64, f64) -> f64, rows: Rows<'_>) {
    for &(x, pairs) in rows {
        for &(t, expected) in pairs {
            let value = formula(t, x);
            assert!((value / expected - 1.0).abs() < 2e-11, "{name}({t}, {x}): {value}, not {expected}");
        }
    }
}

fn entry(id: &str, mass_fraction: Option<f64>, temperature_c: f64) -> Liquid {
    let at = Conditions { mass_fraction, ..Conditions::at(temperature_c) };
    find(id).unwrap().properties(&at).unwrap().liquid()
}

#[test]
fn oil_by_grade() {
    let line = WaltherLine::through(32.0, 5.4);
    let grade =
        [(Component::Viscosity40, 32.0), (Component::Viscosity100, 5.4), (Component::Density15, 870.0)];
    for (t, nu, mu) in [
        (5.0, 229.018173233, 0.200680426831),
        (20.0, 86.2778573777, 0.0747906188107),
        (60.0, 15.1858928278, 0.0127788165918),
    ] {
        assert!((line.at(t) / nu - 1.0).abs() < 2e-11);
        let at = grade.iter().fold(Conditions::at(t), |at, &(component, value)| at.with(component, value));
        let value = find("mineral-oil").unwrap().properties(&at).unwrap().viscosity.value;
        assert!((value / mu - 1.0).abs() < 2e-11, "{value}");
    }
}

#[test]
#[rustfmt::skip] // one line to a formula
fn every_formula() {
    check("water_density", |t, _| water::density(t), &[(0.0, &[(5.0, 999.963821249), (20.0, 998.204132201), (60.0, 983.19888301)])]);
    check("water_viscosity", |t, _| water::viscosity(t), &[(0.0, &[(5.0, 0.00151819834187), (20.0, 0.0010015672646), (60.0, 0.000466039294147)])]);
    check("water_surface_tension", |t, _| water::surface_tension(t), &[(0.0, &[(5.0, 0.0749417141275), (20.0, 0.0727361404216), (60.0, 0.0662382625233)])]);
    check("honey_viscosity", |t, _| honey::viscosity(t), &[(0.0, &[(5.0, 329.157843525), (20.0, 21.4136383392), (60.0, 0.50623946502)])]);
    check("milk_surface_tension", |t, _| milk::surface_tension(t), &[(0.0, &[(5.0, 0.0547895), (20.0, 0.052412), (60.0, 0.046468)])]);
    check("sucrose_density", sucrose::density, &[(0.05, &[(5.0, 1019.99214936), (20.0, 1017.80645886), (60.0, 1002.21983008)]), (0.2, &[(5.0, 1084.4785023), (20.0, 1080.97847732), (60.0, 1063.59232636)]), (0.55, &[(5.0, 1264.18229488), (20.0, 1257.64764082), (60.0, 1236.19744379)])]);
    check("sucrose_viscosity", sucrose::viscosity, &[(0.05, &[(5.0, 0.0017621620065), (20.0, 0.00114128173294), (60.0, 0.000530348067049)]), (0.2, &[(5.0, 0.00326102626442), (20.0, 0.00196702825532), (60.0, 0.00083484156505)]), (0.55, &[(5.0, 0.0734997208884), (20.0, 0.0287694935054), (60.0, 0.00586569806757)])]);
    check("sucrose_surface_tension", sucrose::surface_tension, &[(0.05, &[(5.0, 0.0751357141275), (20.0, 0.0729301404216), (60.0, 0.0664322625233)]), (0.2, &[(5.0, 0.0758857141275), (20.0, 0.0736801404216), (60.0, 0.0671822625233)]), (0.55, &[(5.0, 0.0786157141275), (20.0, 0.0764101404216), (60.0, 0.0699122625233)])]);
    check("glycerol_density", glycerol::density, &[(0.05, &[(5.0, 1012.14160209), (20.0, 1009.74837557), (60.0, 994.551489392)]), (0.2, &[(5.0, 1050.63395059), (20.0, 1046.7159483), (60.0, 1029.78401108)]), (0.55, &[(5.0, 1147.38373712), (20.0, 1139.86835817), (60.0, 1118.72257664)])]);
    check("glycerol_viscosity", glycerol::viscosity, &[(0.05, &[(5.0, 0.00173603830882), (20.0, 0.00113674895355), (60.0, 0.000519875906954)]), (0.2, &[(5.0, 0.0027711392967), (20.0, 0.0017413932981), (60.0, 0.000737132801616)]), (0.55, &[(5.0, 0.0157778213119), (20.0, 0.00796484802107), (60.0, 0.00229807887662)])]);
    check("glycerol_surface_tension", glycerol::surface_tension, &[(0.05, &[(5.0, 0.0744321284211), (20.0, 0.0722693334005), (60.0, 0.0659163493971)]), (0.2, &[(5.0, 0.072903371302), (20.0, 0.0708689123373), (60.0, 0.0649506100186)]), (0.55, &[(5.0, 0.0693362713574), (20.0, 0.0676012631897), (60.0, 0.0626972181355)])]);
    check("ethanol_viscosity", ethanol::viscosity, &[(0.05, &[(5.0, 0.00205186173825), (20.0, 0.0012555849399), (60.0, 0.000539639355106)]), (0.2, &[(5.0, 0.00402179668352), (20.0, 0.002183), (60.0, 0.000736)]), (0.55, &[(5.0, 0.00492363917378), (20.0, 0.00279137811966), (60.0, 0.00090971899012)])]);
    check("ethanol_surface_tension", ethanol::surface_tension, &[(0.05, &[(5.0, 0.05857), (20.0, 0.05644), (60.0, 0.05076)]), (0.2, &[(5.0, 0.04029), (20.0, 0.03855), (60.0, 0.03391)]), (0.55, &[(5.0, 0.0287545482743), (20.0, 0.0274621524409), (60.0, 0.024015763552)])]);
    check("meg_density", |t, w| entry("ethylene-glycol-solution", Some(w), t).density, &[(0.05, &[(5.0, 1006.05490026), (20.0, 1003.97677252), (60.0, 989.460694545)]), (0.2, &[(5.0, 1028.09480478), (20.0, 1024.10384134), (60.0, 1006.20640529)]), (0.55, &[(5.0, 1078.94321901), (20.0, 1071.11160449), (60.0, 1045.80786888)])]);
    check("meg_viscosity", |t, w| entry("ethylene-glycol-solution", Some(w), t).viscosity, &[(0.05, &[(5.0, 0.00172286567984), (20.0, 0.00112466067), (60.0, 0.000511592543103)]), (0.2, &[(5.0, 0.00265938194845), (20.0, 0.00166241977476), (60.0, 0.000696879649003)]), (0.55, &[(5.0, 0.0074523730335), (20.0, 0.00423555068498), (60.0, 0.00156097529912)])]);
    check("meg_surface_tension", |t, w| entry("ethylene-glycol-solution", Some(w), t).surface_tension, &[(0.05, &[(5.0, 0.0732643155488), (20.0, 0.071116743816), (60.0, 0.0648146020327)]), (0.2, &[(5.0, 0.0684964753109), (20.0, 0.0665137684737), (60.0, 0.0607679873173)]), (0.55, &[(5.0, 0.0589135884961), (20.0, 0.0572622437757), (60.0, 0.0526346923944)])]);
    check("mpg_density", |t, w| entry("propylene-glycol-solution", Some(w), t).density, &[(0.05, &[(5.0, 1004.37709875), (20.0, 1002.24796156), (60.0, 986.702838594)]), (0.2, &[(5.0, 1019.08609079), (20.0, 1014.77658504), (60.0, 995.59111553)]), (0.55, &[(5.0, 1051.03734027), (20.0, 1041.45665708), (60.0, 1011.90429233)])]);
    check("mpg_viscosity", |t, w| entry("propylene-glycol-solution", Some(w), t).viscosity, &[(0.05, &[(5.0, 0.00187874307099), (20.0, 0.00120787857829), (60.0, 0.000540689387537)]), (0.2, &[(5.0, 0.00349406914368), (20.0, 0.00203008065208), (60.0, 0.000777757963144)]), (0.55, &[(5.0, 0.0172914145376), (20.0, 0.00768341846201), (60.0, 0.00190874177587)])]);
    check("mpg_surface_tension", |t, w| entry("propylene-glycol-solution", Some(w), t).surface_tension, &[(0.05, &[(5.0, 0.0712984595001), (20.0, 0.0692128667305), (60.0, 0.0630950319273)]), (0.2, &[(5.0, 0.0614896970416), (20.0, 0.0597271298698), (60.0, 0.0546324880149)]), (0.55, &[(5.0, 0.0451417596108), (20.0, 0.0439175684354), (60.0, 0.040528248161)])]);
    check("ethanol_density", ethanol::density, &[(0.05, &[(5.0, 991.31266411), (20.0, 989.377935556)]), (0.2, &[(5.0, 974.157132848), (20.0, 968.606935199)]), (0.55, &[(5.0, 914.449302175), (20.0, 902.548717364)])]);
    check("nacl_density", brine::density, &[(0.05, &[(5.0, 1036.88020749), (20.0, 1033.86217966), (60.0, 1017.05902783)]), (0.2, &[(5.0, 1155.10733842), (20.0, 1148.10534871), (60.0, 1126.80346207)])]);
    check("nacl_viscosity", brine::viscosity, &[(0.05, &[(5.0, 0.0016159864033), (20.0, 0.00107935158956), (60.0, 0.000513486688177)]), (0.2, &[(5.0, 0.00232077279713), (20.0, 0.00156044252178), (60.0, 0.000748534368741)])]);
    check("nacl_surface_tension", brine::surface_tension, &[(0.05, &[(5.0, 0.0764083285865), (20.0, 0.074168248887), (60.0, 0.0675970890281)]), (0.2, &[(5.0, 0.0817580318394), (20.0, 0.0794250699423), (60.0, 0.0726641973822)])]);
    check("seawater_density", sea_water::density, &[(20.0, &[(5.0, 1015.80710904), (20.0, 1013.36199239)]), (35.0, &[(5.0, 1027.67546528), (20.0, 1024.76300499)])]);
    check("seawater_viscosity", sea_water::viscosity, &[(20.0, &[(5.0, 0.00157246466405), (20.0, 0.00104254430119), (60.0, 0.00048960714844)]), (35.0, &[(5.0, 0.00161930431443), (20.0, 0.00107662892525), (60.0, 0.000508349871912)])]);
    check("seawater_surface_tension", sea_water::surface_tension, &[(20.0, &[(5.0, 0.0755237639386), (20.0, 0.0733522737199), (60.0, 0.0669237225592)]), (35.0, &[(5.0, 0.075960301297), (20.0, 0.0738143736936), (60.0, 0.0674378175861)])]);
    check("acetone pure_density", |t, _| entry("acetone", None, t).density, &[(0.0, &[(5.0, 808.945124256), (20.0, 792.240254304)])]);
    check("acetone pure_viscosity", |t, _| entry("acetone", None, t).viscosity, &[(0.0, &[(5.0, 0.000373416587846), (20.0, 0.000320349884351)])]);
    check("acetone pure_surface_tension", |t, _| entry("acetone", None, t).surface_tension, &[(0.0, &[(5.0, 0.0252346568872), (20.0, 0.0233353374355)])]);
    check("isopropanol pure_density", |t, _| entry("isopropanol", None, t).density, &[(0.0, &[(5.0, 801.024811703), (20.0, 786.711171669), (60.0, 745.941880748)])]);
    check("isopropanol pure_viscosity", |t, _| entry("isopropanol", None, t).viscosity, &[(0.0, &[(5.0, 0.00387278046547), (20.0, 0.00237182294337), (60.0, 0.000806546826935)])]);
    check("isopropanol pure_surface_tension", |t, _| entry("isopropanol", None, t).surface_tension, &[(0.0, &[(5.0, 0.0225055), (20.0, 0.021322), (60.0, 0.018166)])]);
    check("ethylene_glycol pure_density", |t, _| entry("ethylene-glycol", None, t).density, &[(0.0, &[(5.0, 1124.15578346), (20.0, 1113.70420716), (60.0, 1084.8741659)])]);
    check("ethylene_glycol pure_viscosity", |t, _| entry("ethylene-glycol", None, t).viscosity, &[(0.0, &[(5.0, 0.042052459331), (20.0, 0.0199355293711), (60.0, 0.00489728205244)])]);
    check("ethylene_glycol pure_surface_tension", |t, _| entry("ethylene-glycol", None, t).surface_tension, &[(0.0, &[(5.0, 0.049765), (20.0, 0.04843), (60.0, 0.04487)])]);
    check("sunflower_oil oil_density", |t, _| entry("sunflower-oil", None, t).density, &[(0.0, &[(5.0, 927.79275), (20.0, 918.171), (60.0, 892.513)])]);
    check("sunflower_oil oil_viscosity", |t, _| entry("sunflower-oil", None, t).viscosity, &[(0.0, &[(5.0, 0.118054840872), (20.0, 0.0600519832716), (60.0, 0.0161728488404)])]);
    check("sunflower_oil oil_surface_tension", |t, _| entry("sunflower-oil", None, t).surface_tension, &[(0.0, &[(5.0, 0.034625), (20.0, 0.0335), (60.0, 0.0305)])]);
    check("olive_oil oil_density", |t, _| entry("olive-oil", None, t).density, &[(0.0, &[(5.0, 923.3), (20.0, 912.8), (60.0, 884.8)])]);
    check("olive_oil oil_viscosity", |t, _| entry("olive-oil", None, t).viscosity, &[(0.0, &[(5.0, 0.185222964464), (20.0, 0.0858489995467), (60.0, 0.0196982729426)])]);
    check("olive_oil oil_surface_tension", |t, _| entry("olive-oil", None, t).surface_tension, &[(0.0, &[(5.0, 0.033625), (20.0, 0.0325), (60.0, 0.0295)])]);
    check("rapeseed_oil oil_density", |t, _| entry("rapeseed-oil", None, t).density, &[(0.0, &[(5.0, 928.25), (20.0, 918.5), (60.0, 892.5)])]);
    check("rapeseed_oil oil_viscosity", |t, _| entry("rapeseed-oil", None, t).viscosity, &[(0.0, &[(5.0, 0.153731208194), (20.0, 0.0736551842463), (60.0, 0.0179319063377)])]);
    check("rapeseed_oil oil_surface_tension", |t, _| entry("rapeseed-oil", None, t).surface_tension, &[(0.0, &[(5.0, 0.034625), (20.0, 0.0335), (60.0, 0.0305)])]);
    check("milk_density", |t, fat| milk::density(t, fat, 8.8), &[(0.1, &[(5.0, 1034.86252567), (20.0, 1031.97688056), (60.0, 1015.81333451)]), (3.5, &[(5.0, 1033.34850062), (20.0, 1029.73486125), (60.0, 1011.94119158)])]);
    check("milk_viscosity", milk::viscosity, &[(0.1, &[(5.0, 0.00244559648097), (20.0, 0.00148237152351)]), (3.5, &[(5.0, 0.00343593488343), (20.0, 0.00208265430027)])]);
    check("mineral_oil_density", mineral_oil::density, &[(870.0, &[(5.0, 876.264202084), (20.0, 866.857628178), (60.0, 841.492610062)])]);
    check("mineral_oil_surface_tension", |t, _| mineral_oil::surface_tension(t), &[(0.0, &[(5.0, 0.031125), (20.0, 0.03), (60.0, 0.027)])]);
}
