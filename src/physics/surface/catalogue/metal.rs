//! Metals.

use super::super::{Confidence, Finish, Material, SurfaceKind};
use super::{energy, published, recalled, with_energy};

pub(super) const MATERIALS: [Material; 3] = [
    with_energy(Material {
        id: "stainless-polished",
        name: "Stainless steel 304/316, polished",
        kind: SurfaceKind::Dense,
        clean: Some(Finish {
            finish: "degreased and plasma or alkaline cleaned",
            contact: recalled(15.0, 0.0, 30.0),
            advancing: recalled(20.0, 5.0, 40.0),
            receding: recalled(0.0, 0.0, 10.0),
            surface_energy: energy(35.0, 30.0, "from memory"),
            confidence: Confidence::Low,
            note: "Temporary state.",
        }),
        in_use: Some(Finish {
            finish: "mirror or electropolished",
            contact: recalled(75.0, 60.0, 90.0),
            advancing: recalled(82.0, 65.0, 95.0),
            receding: recalled(35.0, 20.0, 50.0),
            surface_energy: energy(35.0, 5.0, "from memory"),
            confidence: Confidence::Low,
            note: "Organic film controls the angle (abstract, Surf Interface Anal 1994 21:595).",
        }),
        worn: None,
        surface_energy: None,
    }),
    with_energy(Material {
        id: "stainless-brushed",
        name: "Stainless steel 304/316, brushed",
        kind: SurfaceKind::Dense,
        clean: Some(Finish {
            finish: "degreased and plasma or alkaline cleaned",
            contact: recalled(15.0, 0.0, 30.0),
            advancing: recalled(20.0, 5.0, 40.0),
            receding: recalled(0.0, 0.0, 10.0),
            surface_energy: energy(35.0, 30.0, "from memory"),
            confidence: Confidence::Low,
            note: "Temporary state.",
        }),
        in_use: Some(Finish {
            finish: "ground 240-320 grit",
            contact: published(
                75.0,
                54.0,
                94.0,
                "Foods 2021 10:611 Table 2 (PMC8001712): 65.9 ± 11.7 (320 grit), 85.6 ± 7.9 (240 grit)",
            ),
            advancing: recalled(85.0, 65.0, 105.0),
            receding: recalled(30.0, 10.0, 45.0),
            surface_energy: energy(
                39.0,
                2.0,
                "Foods 2021 10:611 Table 2 (PMC8001712): vOCG totals 41.3 and 40.7 with LW 41.0, 39.0; d/p here taken as LW/remainder",
            ),
            confidence: Confidence::Medium,
            note: "Grooves make the angle depend on direction (Materials 2012 5:2773): lower along than across the lay.",
        }),
        worn: None,
        surface_energy: None,
    }),
    with_energy(Material {
        id: "aluminium-bare",
        name: "Aluminium, bare",
        kind: SurfaceKind::Dense,
        clean: None,
        in_use: Some(Finish {
            finish: "native oxide, handled",
            contact: recalled(72.0, 50.0, 95.0),
            advancing: recalled(85.0, 60.0, 100.0),
            receding: recalled(28.0, 10.0, 45.0),
            surface_energy: energy(30.0, 8.0, "from memory"),
            confidence: Confidence::Low,
            note: "Clean or boiled oxide is near 0; anodised unsealed 10-50.",
        }),
        worn: None,
        surface_energy: None,
    }),
];
