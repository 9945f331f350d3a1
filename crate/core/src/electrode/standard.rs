use super::Label;
use crate::math::Vec3;
use core::f64::consts::PI;
use std::sync::LazyLock;

/// A named site of the idealised 10-10 system, on the unit sphere: x right, y front, z up.
#[derive(Clone, Debug, PartialEq)]
pub struct StandardSite {
    /// Name, in the usual spelling.
    pub name: &'static str,
    /// Unit direction from the centre.
    pub direction: Vec3,
}

/// Names of the upper ring from front to back on the left; the right side has the even numbers.
const RING: [[&str; 2]; 9] = [
    ["Fp1", "Fp2"],
    ["AF7", "AF8"],
    ["F7", "F8"],
    ["FT7", "FT8"],
    ["T7", "T8"],
    ["TP7", "TP8"],
    ["P7", "P8"],
    ["PO7", "PO8"],
    ["O1", "O2"],
];

/// The lower ring at the same azimuths.
const LOWER_RING: [[&str; 2]; 9] = [
    ["N1", "N2"],
    ["AF9", "AF10"],
    ["F9", "F10"],
    ["FT9", "FT10"],
    ["T9", "T10"],
    ["TP9", "TP10"],
    ["P9", "P10"],
    ["PO9", "PO10"],
    ["I1", "I2"],
];

/// The midline from Nz to Iz, and the sagittal angle from Cz towards the front in steps of 22.5°.
const MIDLINE: [(&str, f64); 11] = [
    ("Nz", 5.0),
    ("Fpz", 4.0),
    ("AFz", 3.0),
    ("Fz", 2.0),
    ("FCz", 1.0),
    ("Cz", 0.0),
    ("CPz", -1.0),
    ("Pz", -2.0),
    ("POz", -3.0),
    ("Oz", -4.0),
    ("Iz", -5.0),
];

/// Inner rows: index of their ends in the ring, index of their middle in the midline, the sites from the left end to the
/// middle and from the middle to the right end.
const ROWS: [(usize, usize, [&str; 3], [&str; 3]); 7] = [
    (1, 2, ["AF5", "AF3", "AF1"], ["AF2", "AF4", "AF6"]),
    (2, 3, ["F5", "F3", "F1"], ["F2", "F4", "F6"]),
    (3, 4, ["FC5", "FC3", "FC1"], ["FC2", "FC4", "FC6"]),
    (4, 5, ["C5", "C3", "C1"], ["C2", "C4", "C6"]),
    (5, 6, ["CP5", "CP3", "CP1"], ["CP2", "CP4", "CP6"]),
    (6, 7, ["P5", "P3", "P1"], ["P2", "P4", "P6"]),
    (7, 8, ["PO5", "PO3", "PO1"], ["PO2", "PO4", "PO6"]),
];

/// Names that the 1958 nomenclature had for four sites (American Electroencephalographic Society 1991, J Clin
/// Neurophysiol 8:200–202).
const OLD_NAMES: [(&str, &str); 4] = [("t3", "T7"), ("t4", "T8"), ("t5", "P7"), ("t6", "P8")];

/// All sites of the idealised 10-10 system.
///
/// The ring Fpz–T7–Oz–T8 is the equator with steps of 18°, the midline has steps of 22.5° with Cz at the pole, and inner
/// rows are eight equal arcs of the circle through the row's two ends and its middle. A second ring lies 22.5° below the
/// first. Proportions after Jasper 1958 (EEG Clin Neurophysiol 10:371–375) and the 10-10 division of Chatrian, Lettich &
/// Nelson 1985 (Am J EEG Technol 25:83–92).
pub fn standard_sites() -> &'static [StandardSite] {
    static SITES: LazyLock<Vec<StandardSite>> = LazyLock::new(make_sites);
    &SITES
}

fn make_sites() -> Vec<StandardSite> {
    let midline = |steps: f64| {
        let angle = steps * PI / 8.0;
        Vec3::new(0.0, libm::sin(angle), libm::cos(angle))
    };
    let mut sites: Vec<StandardSite> =
        MIDLINE.iter().map(|&(name, steps)| StandardSite { name, direction: midline(steps) }).collect();
    for (ring, below) in [(&RING, 0.0), (&LOWER_RING, PI / 8.0)] {
        for (step, names) in ring.iter().enumerate() {
            for (name, side) in names.iter().zip([-1.0, 1.0]) {
                sites.push(StandardSite { name, direction: on_ring(step, side, below) });
            }
        }
    }
    for (end, middle, left, right) in ROWS {
        let (start, top, stop) = (on_ring(end, -1.0, 0.0), midline(MIDLINE[middle].1), on_ring(end, 1.0, 0.0));
        for (index, name) in left.into_iter().chain(right).enumerate() {
            let eighths = if index < 3 { index + 1 } else { index + 2 };
            sites.push(StandardSite { name, direction: on_arc(start, top, stop, eighths as f64 / 8.0) });
        }
    }
    sites
}

/// The standard position of a label, on the unit sphere.
pub fn standard_position(label: &Label) -> Option<Vec3> {
    let key = label.key();
    let name = OLD_NAMES.iter().find(|(old, _)| *old == key).map_or(key, |(_, new)| new.to_lowercase());
    standard_sites().iter().find(|site| site.name.eq_ignore_ascii_case(&name)).map(|site| site.direction)
}

/// The site whose direction is nearest, unless it is more than 20° away; neighbouring sites of the upper head are 16° to
/// 22.5° apart.
pub fn nearest_site(direction: Vec3) -> Option<&'static str> {
    let unit = direction.unit()?;
    standard_sites()
        .iter()
        .map(|site| (site.direction.dot(unit), site.name))
        .reduce(|best, next| if next.0 > best.0 { next } else { best })
        .filter(|(cosine, _)| *cosine >= libm::cos(20.0 * PI / 180.0))
        .map(|(_, name)| name)
}

/// Step `step` of the ring on one side (−1 left), an angle below the equator.
fn on_ring(step: usize, side: f64, below: f64) -> Vec3 {
    let azimuth = (step + 1) as f64 * PI / 10.0;
    let level = libm::cos(below);
    Vec3::new(side * level * libm::sin(azimuth), level * libm::cos(azimuth), -libm::sin(below))
}

/// The point a fraction of the way along the arc from `start` through `top` to `stop`.
fn on_arc(start: Vec3, top: Vec3, stop: Vec3, fraction: f64) -> Vec3 {
    let normal = (top - start).cross(stop - top).unit().unwrap_or_default();
    let centre = normal * normal.dot(start);
    let (x, radius) = (start - centre, (start - centre).norm());
    let y = normal.cross(x);
    let end = stop - centre;
    // The arc through the top turns the way of the normal.
    let whole = libm::atan2(end.dot(y) / radius, end.dot(x) / radius);
    let whole = if whole < 0.0 { whole + 2.0 * PI } else { whole };
    centre + x * libm::cos(whole * fraction) + y * libm::sin(whole * fraction)
}
