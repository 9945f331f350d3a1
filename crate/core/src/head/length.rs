use super::HEAD_RADII_MM;

/// A unit of length that electrode tables use.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
pub enum LengthUnit {
    /// Metres.
    #[serde(rename = "m")]
    Metre,
    /// Centimetres.
    #[serde(rename = "cm")]
    Centimetre,
    /// Millimetres.
    #[serde(rename = "mm")]
    Millimetre,
}

impl LengthUnit {
    /// The unit in which a sphere of this radius is a head's; the ranges of the three do not overlap.
    pub fn of_head(radius: f64) -> Option<Self> {
        [Self::Metre, Self::Centimetre, Self::Millimetre]
            .into_iter()
            .find(|unit| HEAD_RADII_MM.contains(&(radius * unit.millimetres())))
    }

    /// Millimetres per unit.
    pub fn millimetres(self) -> f64 {
        match self {
            Self::Metre => 1000.0,
            Self::Centimetre => 10.0,
            Self::Millimetre => 1.0,
        }
    }

    /// Its symbol.
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Metre => "m",
            Self::Centimetre => "cm",
            Self::Millimetre => "mm",
        }
    }
}
