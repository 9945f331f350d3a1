use crate::finding::{Code, Error, Finding, Place};

/// What a shell is made of; a name only, the physics is in its conductivity.
pub type Tissue = String;

/// A shell as the user states it.
#[derive(Clone, Debug, PartialEq, serde::Serialize, serde::Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ShellSpec {
    /// Name of the tissue.
    pub tissue: Tissue,
    /// Outer radius over the scalp's outer radius; 1 for the outermost shell.
    pub ratio: f64,
    /// Conductivity in S/m.
    pub conductivity: f64,
}

/// A shell of a head of known size.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct Shell {
    /// Name of the tissue.
    pub tissue: Tissue,
    /// Outer radius in millimetres.
    pub outer_radius_mm: f64,
    /// Conductivity in S/m.
    pub conductivity_s_per_m: f64,
}

/// Concentric isotropic shells, innermost first; sources lie in the innermost one.
#[derive(Clone, Debug, PartialEq)]
pub struct Shells {
    specs: Vec<ShellSpec>,
}

impl Shells {
    /// Most shells a head may have.
    pub const MOST: usize = 16;

    /// Checks and takes shells: 1 to [`Self::MOST`] of them, ratios ascending to exactly 1, conductivities positive.
    ///
    /// # Errors
    /// `head-invalid`, naming the shell and what is wrong with it.
    pub fn new(specs: Vec<ShellSpec>) -> Result<Self, Error> {
        let invalid = |shell: usize, why: &str| {
            Error::from(
                Finding::new(Code::HeadInvalid).at(Place::input("settings")).with("shell", shell).with("why", why),
            )
        };
        if specs.is_empty() || specs.len() > Self::MOST {
            let why = "shell-count";
            return Err(Finding::new(Code::HeadInvalid).at(Place::input("settings")).with("why", why).into());
        }
        let mut inner = 0.05;
        for (index, spec) in specs.iter().enumerate() {
            if !(spec.conductivity >= 1e-6 && spec.conductivity <= 1e3) {
                return Err(invalid(index + 1, "conductivity"));
            }
            if !(spec.ratio > inner && spec.ratio <= 1.0) {
                return Err(invalid(index + 1, "ratio"));
            }
            inner = spec.ratio;
        }
        if inner != 1.0 {
            return Err(invalid(specs.len(), "outermost"));
        }
        Ok(Self { specs })
    }

    /// The default head, the first of [`super::heads`].
    pub fn standard() -> Self {
        Self { specs: super::heads()[0].shells.clone() }
    }

    /// The shells as stated, innermost first.
    pub fn specs(&self) -> &[ShellSpec] {
        &self.specs
    }

    /// Radius of the innermost shell over the scalp radius.
    pub fn brain_ratio(&self) -> f64 {
        self.specs[0].ratio
    }

    /// Outer radius over the scalp radius up to which the model's depth counts: the inner surface of the shell called
    /// `skull`, or the innermost shell where none is called so.
    pub fn inner_skull_ratio(&self) -> f64 {
        match self.specs.iter().position(|spec| spec.tissue.eq_ignore_ascii_case("skull")) {
            Some(skull) if skull > 0 => self.specs[skull - 1].ratio,
            _ => self.brain_ratio(),
        }
    }

    /// The shells of a head of this scalp radius in millimetres.
    pub fn sized(&self, radius_mm: f64) -> Vec<Shell> {
        self.specs
            .iter()
            .map(|spec| Shell {
                tissue: spec.tissue.clone(),
                outer_radius_mm: spec.ratio * radius_mm,
                conductivity_s_per_m: spec.conductivity,
            })
            .collect()
    }
}
