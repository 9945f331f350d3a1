use super::{Kind, Label, Reading};
use crate::math::Vec3;
use core::f64::consts::PI;
use std::collections::HashMap;
use std::sync::LazyLock;

/// A named site of the idealised 10-5 system, on the unit sphere: x right, y front, z up.
#[derive(Clone, Debug, PartialEq)]
pub struct StandardSite {
    /// Name, in the usual spelling.
    pub name: String,
    /// Unit direction from the centre.
    pub direction: Vec3,
    /// How exact the place is.
    pub grade: Grade,
}

/// How exact a standard place is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Grade {
    /// A site of the 10-10 system.
    Ten,
    /// A site that only the 10-5 system has.
    Five,
    /// A mastoid or an ear lobe, whose place is approximate.
    Approximate,
}

/// Rows across the head from front to back: the name in the middle, the name from the number 7 outwards, and steps of 22.5°
/// from Cz to the row's middle, towards the front; the row's ends lie on the ring, as many steps of 18° from the ear.
/// Those with half steps are of the 10-5 system.
const ROWS: [(&str, &str, f64); 15] = [
    ("AFp", "AFp", 3.5),
    ("AF", "AF", 3.0),
    ("AFF", "AFF", 2.5),
    ("F", "F", 2.0),
    ("FFC", "FFT", 1.5),
    ("FC", "FT", 1.0),
    ("FCC", "FTT", 0.5),
    ("C", "T", 0.0),
    ("CCP", "TTP", -0.5),
    ("CP", "TP", -1.0),
    ("CPP", "TPP", -1.5),
    ("P", "P", -2.0),
    ("PPO", "PPO", -2.5),
    ("PO", "PO", -3.0),
    ("POO", "POO", -3.5),
];

/// Rows before and behind those, which hold sites up to number 1: name, steps of 22.5° from Cz to the middle.
const ENDS: [(&str, f64); 6] = [("N", 5.0), ("NFp", 4.5), ("Fp", 4.0), ("O", -4.0), ("OI", -4.5), ("I", -5.0)];

/// Numbers from the midline to the ring on the left, and from the ring to the lower ring; `h` marks halves.
const INNER: [&str; 8] = ["1h", "1", "3h", "3", "5h", "5", "7h", "7"];
const OUTER: [&str; 2] = ["9h", "9"];

/// Mastoids and ear lobes: degrees from the nose and below the ring. Approximate: near TP9 and T9, where no two coincide.
const NEAR: [([&str; 2], f64, f64); 2] = [(["M1", "M2"], 108.0, 30.0), (["A1", "A2"], 94.5, 30.0)];

/// Names that the 1958 nomenclature had for four sites (American Electroencephalographic Society 1991, J Clin
/// Neurophysiol 8:200–202).
const OLD_NAMES: [(&str, &str); 4] = [("t3", "T7"), ("t4", "T8"), ("t5", "P7"), ("t6", "P8")];

/// All sites of the idealised 10-5 system, and the mastoids and ear lobes.
///
/// The ring Fpz–T7–Oz–T8 is the equator with steps of 18°, the midline has steps of 22.5° with Cz at the pole, and inner
/// rows are eight equal arcs of the circle through the row's two ends and its middle. A second ring lies 22.5° below the
/// first. Proportions after Jasper 1958 (EEG Clin Neurophysiol 10:371–375) and the 10-10 division of Chatrian, Lettich &
/// Nelson 1985 (Am J EEG Technol 25:83–92). The 10-5 sites, with the names of Oostenveld & Praamstra 2001 (Clin
/// Neurophysiol 112:713–719, from memory), halve these arcs: rows between rows run through the half steps of ring and
/// midline, sites marked `h` lie midway between their neighbours of a row.
pub fn standard_sites() -> &'static [StandardSite] {
    static SITES: LazyLock<Vec<StandardSite>> = LazyLock::new(make_sites);
    &SITES
}

fn make_sites() -> Vec<StandardSite> {
    let mut sites = Vec::new();
    let mut add = |name: String, direction: Vec3, whole: bool| {
        let grade = if whole && !name.ends_with('h') { Grade::Ten } else { Grade::Five };
        sites.push(StandardSite { name, direction, grade });
    };
    let is_whole = |steps: f64| steps == libm::trunc(steps);
    for (row, steps) in ENDS {
        add(format!("{row}z"), midline(steps), is_whole(steps));
        let below = (steps.abs() - 4.0) * PI / 8.0;
        for (number, ring) in [("1h", 0.5), ("1", 1.0)] {
            let ring = if steps > 0.0 { ring } else { 10.0 - ring };
            for (number, side) in [(number.to_owned(), -1.0), (even(number), 1.0)] {
                add(format!("{row}{number}"), on_ring(ring, side, below), is_whole(steps));
            }
        }
    }
    for (inner, outer, steps) in ROWS {
        let ring = 5.0 - steps;
        let (start, top, stop) = (on_ring(ring, -1.0, 0.0), midline(steps), on_ring(ring, 1.0, 0.0));
        add(format!("{inner}z"), top, is_whole(steps));
        for (index, number) in INNER.into_iter().enumerate() {
            let row = if number.starts_with('7') { outer } else { inner };
            for (number, sixteenths, side) in [(number.to_owned(), 7 - index, -1.0), (even(number), 9 + index, 1.0)] {
                let direction = match number.as_str() {
                    "7" | "8" => on_ring(ring, side, 0.0),
                    _ => on_arc(start, top, stop, sixteenths as f64 / 16.0),
                };
                add(format!("{row}{number}"), direction, is_whole(steps));
            }
        }
        for (half, number) in OUTER.into_iter().enumerate() {
            let below = (half + 1) as f64 * PI / 16.0;
            for (number, side) in [(number.to_owned(), -1.0), (even(number), 1.0)] {
                add(format!("{outer}{number}"), on_ring(ring, side, below), is_whole(steps));
            }
        }
    }
    for (names, azimuth, below) in NEAR {
        for (name, side) in names.into_iter().zip([-1.0, 1.0]) {
            let direction = on_ring(azimuth / 18.0, side, below.to_radians());
            sites.push(StandardSite { name: name.into(), direction, grade: Grade::Approximate });
        }
    }
    sites
}

/// The number of the same site on the right: `3h` to `4h`.
fn even(odd: &str) -> String {
    let (digits, half) = odd.strip_suffix('h').map_or((odd, ""), |digits| (digits, "h"));
    format!("{}{half}", digits.parse().unwrap_or(0) + 1)
}

/// The site that a name stands for, upper and lower case alike; T3 to T6 are not among the names, see [`modern_name`].
pub fn site(name: &str) -> Option<&'static StandardSite> {
    static INDEX: LazyLock<HashMap<String, usize>> = LazyLock::new(|| {
        standard_sites().iter().enumerate().map(|(index, site)| (site.name.to_ascii_lowercase(), index)).collect()
    });
    INDEX.get(&name.to_ascii_lowercase()).map(|&index| &standard_sites()[index])
}

/// The name that took the place of one of 1958.
pub fn modern_name(name: &str) -> Option<&'static str> {
    OLD_NAMES.iter().find(|(old, _)| old.eq_ignore_ascii_case(name)).map(|(_, new)| *new)
}

/// The site that a label stands for, however it is written: see [`Reading`].
pub fn standard_site(label: &Label) -> Option<&'static StandardSite> {
    match Reading::of(label).kind {
        Kind::Site(site) => Some(site),
        _ => None,
    }
}

/// The standard position of a label, on the unit sphere.
pub fn standard_position(label: &Label) -> Option<Vec3> {
    standard_site(label).map(|site| site.direction)
}

/// The 10-10 site whose direction is nearest, unless it is more than 20° away; neighbouring sites of the upper head are 16°
/// to 22.5° apart.
pub fn nearest_site(direction: Vec3) -> Option<&'static str> {
    let unit = direction.unit()?;
    standard_sites()
        .iter()
        .filter(|site| site.grade == Grade::Ten)
        .map(|site| (site.direction.dot(unit), site.name.as_str()))
        .reduce(|best, next| if next.0 > best.0 { next } else { best })
        .filter(|(cosine, _)| *cosine >= libm::cos(20.0 * PI / 180.0))
        .map(|(_, name)| name)
}

/// Steps of 22.5° from Cz along the midline, towards the front.
fn midline(steps: f64) -> Vec3 {
    let angle = steps * PI / 8.0;
    Vec3::new(0.0, libm::sin(angle), libm::cos(angle))
}

/// Steps of 18° from the nose along the ring on one side (−1 left), an angle below the equator.
fn on_ring(steps: f64, side: f64, below: f64) -> Vec3 {
    let azimuth = steps * PI / 10.0;
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

#[cfg(test)]
mod tests {
    use super::*;

    fn at(name: &str) -> Vec3 {
        site(name).unwrap_or_else(|| panic!("{name} is no site")).direction
    }

    /// The 10-5 system has 345 sites (Oostenveld & Praamstra 2001, from memory).
    #[test]
    fn all_sites_are_there_once_and_in_pairs() {
        let sites = standard_sites();
        let of = |grade| sites.iter().filter(|site| site.grade == grade).count();
        assert_eq!((of(Grade::Ten), of(Grade::Five), of(Grade::Approximate)), (89, 256, 4));
        for (index, a) in sites.iter().enumerate() {
            assert!((a.direction.norm() - 1.0).abs() < 1e-14, "{}", a.name);
            for b in &sites[..index] {
                assert!(!a.name.eq_ignore_ascii_case(&b.name), "{} twice", a.name);
                assert!((a.direction - b.direction).norm() > 0.05, "{} and {} at one place", a.name, b.name);
            }
            if let Some(odd) = a.name.find(['1', '3', '5', '7', '9']).filter(|_| !a.name.contains("10")) {
                let right = at(&format!("{}{}", &a.name[..odd], even(&a.name[odd..])));
                assert!((right - Vec3::new(-a.direction[0], a.direction[1], a.direction[2])).norm() < 1e-14);
            }
        }
        for name in "NFp1h NFpz AFp3 AFF1h AFF6 FFT7h FFC4h FFT10h FTT7h FCC3h TTP8h CCP5h TPP9h CPPz PPO9h PO7h POO10h OI1h OIz I2h Fp2h C3h T9h".split(' ') {
            at(name);
        }
        assert!(site("T7z").is_none() && site("FC7").is_none() && site("Fp3").is_none() && site("T5h").is_none());
    }

    /// Front and back are alike on the ring: the system is symmetric about the plane through the ears.
    #[test]
    fn front_and_back_mirror_each_other() {
        let pairs = [
            ("Nz", "Iz"),
            ("NFp1", "OI1"),
            ("Fp2h", "O2h"),
            ("AFp7", "POO7"),
            ("AFF3h", "PPO3h"),
            ("F10", "P10"),
            ("FFC5", "CPP5"),
            ("FFT9h", "TPP9h"),
            ("FCC1h", "CCP1h"),
            ("FTT8", "TTP8"),
        ];
        for (front, back) in pairs {
            let (f, b) = (at(front), at(back));
            assert!((f - Vec3::new(b[0], -b[1], b[2])).norm() < 1e-14, "{front} {back}");
        }
    }

    #[test]
    fn sites_of_the_finer_system_lie_midway() {
        let midway = |a: &str, middle: &str, b: &str| {
            let (a, m, b) = (at(a), at(middle), at(b));
            assert!(((a - m).norm() - (b - m).norm()).abs() < 1e-14, "{middle} is as far from both");
            // Not only as far from both, but between them.
            assert!((a - m).norm() < 0.52 * (a - b).norm(), "{middle} is not between them");
        };
        for (a, m, b) in [
            ("Fpz", "Fp1h", "Fp1"),
            ("Fp1", "AFp7", "AF7"),
            ("AF7", "AFF7", "F7"),
            ("T7", "FTT7", "FT7"),
            ("P8", "PPO8", "PO8"),
            ("O2", "POO8", "PO8"),
            ("Fz", "AFFz", "AFz"),
            ("Cz", "FCCz", "FCz"),
            ("Oz", "OIz", "Iz"),
            ("Nz", "NFpz", "Fpz"),
            ("Cz", "C1h", "C1"),
            ("C5", "T7h", "T7"),
            ("FC3", "FC5h", "FC5"),
            ("FFCz", "FFC1h", "FFC1"),
            ("FFC5", "FFT7h", "FFT7"),
            ("T7", "T9h", "T9"),
            ("AFp8", "AFp10h", "AFp10"),
            ("TP9", "TTP9", "T9"),
            ("Iz", "I2h", "I2"),
        ] {
            midway(a, m, b);
        }
    }
}
