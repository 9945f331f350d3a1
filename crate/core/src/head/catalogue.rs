use super::{ShellSpec, Shells};
use std::sync::LazyLock;

/// A published choice of shells.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct CatalogueHead {
    /// Fixed name for programs.
    pub name: &'static str,
    /// Name for people.
    pub title: &'static str,
    /// Where its numbers come from.
    pub source: &'static str,
    /// Its shells, innermost first.
    pub shells: Vec<ShellSpec>,
}

/// Radii of Rush & Driscoll 1968 (Anesth Analg 47:717–723), brain, skull, scalp; from memory.
const THREE_RADII: [f64; 3] = [80.0, 85.0, 92.0];

/// Radii of Cuffin & Cohen 1979 (EEG Clin Neurophysiol 47:132–146), brain, cerebrospinal fluid, skull, scalp.
const FOUR_RADII: [f64; 4] = [79.0, 81.0, 85.0, 88.0];

const THREE_TISSUES: [&str; 3] = ["brain", "skull", "scalp"];
const FOUR_TISSUES: [&str; 4] = ["brain", "cerebrospinal fluid", "skull", "scalp"];

/// Published heads to choose from; the first is the default.
///
/// The sources of the radii stand beside them above. Conductivities of brain and scalp of 0.33 S/m are those of Geddes &
/// Baker 1967 (Med Biol Eng 5:271–293), 1.79 S/m of cerebrospinal fluid that of Baumann et al. 1997 (IEEE TBME
/// 44:220–223). The skull is 25 times less conductive than the brain after Lai et al. 2005 (Clin Neurophysiol
/// 116:456–465), 80 times after Rush & Driscoll 1968 (from memory), 15 times, at 0.015 S/m, after Oostendorp et al. 2000
/// (IEEE TBME 47:1487–1492). The conductivities of Cuffin & Cohen 1979 are from memory.
pub fn heads() -> &'static [CatalogueHead] {
    static HEADS: LazyLock<Vec<CatalogueHead>> = LazyLock::new(|| {
        vec![
            CatalogueHead {
                name: "four-shells-25",
                title: "Four shells, brain to skull 25 : 1",
                source: "Radii Cuffin & Cohen 1979; conductivities Geddes & Baker 1967, Baumann et al. 1997; ratio Lai et al. 2005",
                shells: shells(FOUR_TISSUES, FOUR_RADII, [0.33, 1.79, 0.0132, 0.33]),
            },
            CatalogueHead {
                name: "four-shells-1979",
                title: "Four shells, brain to skull 79 : 1",
                source: "Cuffin & Cohen 1979",
                shells: shells(FOUR_TISSUES, FOUR_RADII, [0.33, 1.0, 0.0042, 0.33]),
            },
            CatalogueHead {
                name: "three-shells-80",
                title: "Three shells, brain to skull 80 : 1",
                source: "Radii and ratio Rush & Driscoll 1968; brain conductivity Geddes & Baker 1967",
                shells: shells(THREE_TISSUES, THREE_RADII, [0.33, 0.004125, 0.33]),
            },
            CatalogueHead {
                name: "three-shells-25",
                title: "Three shells, brain to skull 25 : 1",
                source: "Radii Rush & Driscoll 1968; brain conductivity Geddes & Baker 1967; ratio Lai et al. 2005",
                shells: shells(THREE_TISSUES, THREE_RADII, [0.33, 0.0132, 0.33]),
            },
            CatalogueHead {
                name: "three-shells-15",
                title: "Three shells, brain to skull 15 : 1",
                source: "Radii Rush & Driscoll 1968; conductivities Oostendorp et al. 2000",
                shells: shells(THREE_TISSUES, THREE_RADII, [0.225, 0.015, 0.225]),
            },
            CatalogueHead {
                name: "homogeneous",
                title: "One homogeneous sphere, for comparison",
                source: "Wilson & Bayley 1950; conductivity Geddes & Baker 1967",
                shells: shells(["head"], [1.0], [0.33]),
            },
        ]
    });
    &HEADS
}

/// The head of the catalogue with exactly these shells.
pub fn catalogued(shells: &Shells) -> Option<&'static CatalogueHead> {
    heads().iter().find(|head| head.shells == shells.specs())
}

/// Radii in any unit, conductivities in S/m.
fn shells<const N: usize>(tissues: [&str; N], radii: [f64; N], conductivities: [f64; N]) -> Vec<ShellSpec> {
    let outer = radii[N - 1];
    tissues
        .iter()
        .zip(radii)
        .zip(conductivities)
        .map(|((tissue, radius), conductivity)| ShellSpec {
            tissue: (*tissue).into(),
            ratio: radius / outer,
            conductivity,
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_head_of_the_catalogue_can_be_computed_and_is_found_again() {
        for head in heads() {
            let shells = Shells::new(head.shells.clone()).unwrap();
            assert_eq!(catalogued(&shells).map(|found| found.name), Some(head.name));
            assert!(!head.title.is_empty() && !head.source.is_empty());
        }
        assert_eq!(Shells::standard().specs(), heads()[0].shells);
    }
}
