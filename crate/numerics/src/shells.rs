//! Concentric isotropic shells of a head.

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

/// What is wrong with stated shells.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct ShellFault {
    /// The shell, counted from 1 at the innermost; `None` where it is their number.
    pub shell: Option<usize>,
    /// `shell-count`, `conductivity`, `ratio` or `outermost`.
    pub why: &'static str,
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
    /// Which shell is wrong, and what is wrong with it.
    pub fn new(specs: Vec<ShellSpec>) -> Result<Self, ShellFault> {
        if specs.is_empty() || specs.len() > Self::MOST {
            return Err(ShellFault { shell: None, why: "shell-count" });
        }
        let mut inner = 0.05;
        for (index, spec) in specs.iter().enumerate() {
            let fault = |why| Err(ShellFault { shell: Some(index + 1), why });
            if !(spec.conductivity >= 1e-6 && spec.conductivity <= 1e3) {
                return fault("conductivity");
            }
            if !(spec.ratio > inner && spec.ratio <= 1.0) {
                return fault("ratio");
            }
            inner = spec.ratio;
        }
        if inner != 1.0 {
            return Err(ShellFault { shell: Some(specs.len()), why: "outermost" });
        }
        Ok(Self { specs })
    }

    /// The default head: radii of Cuffin & Cohen 1979 (EEG Clin Neurophysiol 47:132–146); conductivities of brain and
    /// scalp of Geddes & Baker 1967 (Med Biol Eng 5:271–293), of cerebrospinal fluid of Baumann et al. 1997 (IEEE TBME
    /// 44:220–223); skull 25 times less conductive than the brain after Lai et al. 2005 (Clin Neurophysiol 116:456–465).
    pub fn standard() -> Self {
        let shell = |tissue: &str, radius: f64, conductivity| ShellSpec {
            tissue: tissue.into(),
            ratio: radius / 88.0,
            conductivity,
        };
        Self {
            specs: vec![
                shell("brain", 79.0, 0.33),
                shell("cerebrospinal fluid", 81.0, 1.79),
                shell("skull", 85.0, 0.0132),
                shell("scalp", 88.0, 0.33),
            ],
        }
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
