use super::table::{LABEL_NAMES, number};
use super::{Table, decode};
use crate::head::Sphere;
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

/// Points whose distances from the fitted centre differ by less than this share of the radius (rms) may be a head;
/// measured heads stay below 0.08, values of maps far above.
const ROUGH: f64 = 0.15;

/// Tells tables apart by their content. Electrodes have columns named x, y and z, or no other column than labels, or a
/// column of labels and three unnamed columns of numbers that lie about on a sphere. All else is taken for maps, also
/// what cannot be read, so that reading it says what is wrong.
pub fn kind(bytes: &[u8]) -> Kind {
    let input = "maps";
    let Ok(table) = decode(bytes, input).and_then(|text| Table::read(text, input)) else { return Kind::Maps };
    if ["x", "y", "z"].iter().all(|axis| table.column(&[axis]).is_some()) {
        return Kind::Electrodes;
    }
    let Some(label) = table.column(LABEL_NAMES).or_else(|| table.words()) else { return Kind::Maps };
    if table.width == 1 {
        return Kind::Electrodes;
    }
    if table.header.is_some() || table.width != 4 {
        return Kind::Maps;
    }
    let points: Vec<Vec3> = table
        .rows
        .iter()
        .filter_map(|row| {
            let mut numbers = (0..4).filter(|&column| column != label).map(|column| number(row.field(column)));
            Some(Vec3::new(numbers.next()??, numbers.next()??, numbers.next()??))
        })
        .collect();
    match Sphere::fit(&points) {
        Some(fit) if points.len() >= 5 && fit.rms <= ROUGH * fit.sphere.radius => Kind::Electrodes,
        _ => Kind::Maps,
    }
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
