use super::table::{LABEL_NAMES, number};
use super::{Table, decode};
use crate::head::{LengthUnit, Sphere, SphereFit, spread};
use crate::math::Vec3;

/// What a table is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Kind {
    /// Labels with positions, or labels alone.
    Electrodes,
    /// Labels with values.
    Maps,
}

/// Largest rms deviation from the fitted sphere in radii: measured heads stay below 0.08, also with electrodes 12 mm off.
const ROUGH: f64 = 0.12;

/// Largest radius over the rms distance of the points from their own mean: 1 to 1.15 for heads, 1.3 for a cap on the upper
/// third; a loose cloud of values fits a huge sphere.
const SHALLOW: f64 = 1.35;

/// Tells tables apart by their content. Electrodes have columns named x, y and z, or no other column than labels, or a
/// column of labels and three unnamed columns of numbers, besides one that counts the rows, that lie about on a sphere. All else is taken for maps, also
/// what cannot be read, so that reading it says what is wrong.
pub fn kind(bytes: &[u8]) -> Kind {
    let input = "maps";
    let Ok(table) = decode(bytes, input).and_then(|text| Table::read(text, input)) else { return Kind::Maps };
    if ['x', 'y', 'z'].iter().all(|&axis| table.axis(axis).is_some()) {
        return Kind::Electrodes;
    }
    let Some(label) = table.column(LABEL_NAMES).or_else(|| table.words()) else { return Kind::Maps };
    if table.width == 1 {
        return Kind::Electrodes;
    }
    let numeric: Vec<usize> = (0..table.width).filter(|&column| column != label && !table.counts(column)).collect();
    if table.header.is_some() || numeric.len() != 3 {
        return Kind::Maps;
    }
    let points: Vec<Vec3> = table
        .rows
        .iter()
        .filter_map(|row| {
            let mut numbers = numeric.iter().map(|&column| number(row.field(column)));
            Some(Vec3::new(numbers.next()??, numbers.next()??, numbers.next()??))
        })
        .collect();
    if is_head(&points) { Kind::Electrodes } else { Kind::Maps }
}

/// Whether points lie about on a sphere of a head's size.
fn is_head(points: &[Vec3]) -> bool {
    let Some(SphereFit { sphere, rms, .. }) = Sphere::fit(points) else { return false };
    let spread = (spread(points).values.iter().sum::<f64>() / points.len() as f64).sqrt();
    (LengthUnit::of_head(sphere.radius).is_some() || sphere.is_unit())
        && rms <= ROUGH * sphere.radius
        && sphere.radius <= SHALLOW * spread
}

#[cfg(test)]
#[allow(clippy::indexing_slicing)]
mod tests {
    use super::*;
    use crate::electrode::standard_sites;

    #[test]
    fn tells_by_names_labels_or_shape() {
        let sites = standard_sites();
        let lines = |text: &dyn Fn(usize) -> String| -> String {
            sites.iter().enumerate().map(|(i, site)| format!("{}, {}\n", site.name, text(i))).collect()
        };
        let positions = lines(&|i| {
            let [x, y, z] = sites[i].direction.0.map(|c| c * 0.09 + 0.01);
            format!("{x}, {y}, {z}")
        });
        let value = |i: usize, k: usize| libm::sin((i * i * k) as f64);
        let maps = lines(&|i| format!("{}, {}, {}", value(i, 1), value(i, 2), value(i, 3)));
        assert_eq!(kind(positions.as_bytes()), Kind::Electrodes);
        assert_eq!(kind(maps.as_bytes()), Kind::Maps);
        assert_eq!(kind(format!("name, a, b, c\n{positions}").as_bytes()), Kind::Maps);
        assert_eq!(kind(format!("name, X, Y, Z\n{maps}").as_bytes()), Kind::Electrodes);
        assert_eq!(kind(b"Cz\nFz\nOz"), Kind::Electrodes);
        assert_eq!(kind(b"Cz 1\nFz 2"), Kind::Maps);
        assert_eq!(kind(b"\xff\xfe"), Kind::Maps);
    }
}
