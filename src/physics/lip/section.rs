//! Cross-sections of a lip, seen against the stream.

/// Cross-section of the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Section {
    /// Wide straight lip of this width, m. Side-wall friction is neglected.
    Sheet {
        /// Width, m.
        width: f64,
    },
    /// Pinched lip: a V with this full included angle, rad.
    Vee {
        /// Full included angle, rad.
        included_angle: f64,
    },
    /// Open half-round channel of this diameter, m; above half depth its walls go on vertically.
    Trough {
        /// Diameter, m.
        diameter: f64,
    },
    /// Closed round spout of this bore, m.
    Tube {
        /// Bore, m.
        bore: f64,
    },
}
