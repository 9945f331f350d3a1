//! Sets of electrodes on the unit sphere.
use crate::draw::Draw;
use crate::place::data;
use inward_core::Vec3;

const NINETEEN: &str = "Fp1 Fp2 F7 F3 Fz F4 F8 T7 C3 Cz C4 T8 P7 P3 Pz P4 P8 O1 O2";
const THIRTEEN_MORE: &str = "FC5 FC1 FC2 FC6 CP5 CP1 CP2 CP6 AF3 AF4 PO3 PO4 Oz";
const LEFT_OUT_OF_71: &str = "Nz Iz N1 N2 I1 I2 AF9 AF10 PO9 PO10 AF1 AF2 PO1 PO2 AF5 AF6 PO5 PO6";

/// Labels with unit directions, x right, y front, z up.
#[derive(Clone)]
pub struct Electrodes {
    /// The labels.
    pub labels: Vec<String>,
    /// A direction for each.
    pub directions: Vec<Vec3>,
}

impl Electrodes {
    /// All standard positions of the committed table.
    pub fn standard() -> Self {
        let table = data("standard_positions.csv");
        let rows = table.lines().skip(1).map(|line| line.split(',').collect::<Vec<_>>());
        let (labels, directions) =
            rows.map(|row| (row[0].to_owned(), Vec3::new(number(row[1]), number(row[2]), number(row[3])))).unzip();
        Self { labels, directions }
    }

    /// 19, 32 or 71 of the standard positions; any other number is spread evenly over the upper two thirds.
    pub fn set(count: usize) -> Self {
        match count {
            19 => Self::named(NINETEEN.split(' ')),
            32 => Self::named(NINETEEN.split(' ').chain(THIRTEEN_MORE.split(' '))),
            71 => {
                let all = Self::standard();
                let kept: Vec<usize> = (0..all.count())
                    .filter(|&i| !LEFT_OUT_OF_71.split(' ').any(|label| label == all.labels[i]))
                    .collect();
                assert_eq!(kept.len(), 71);
                all.only(&kept)
            }
            _ => Self::spread(count, -0.35),
        }
    }

    /// Evenly over the sphere above a height: a spiral in equal steps of height and golden-angle turns.
    pub fn spread(count: usize, lowest: f64) -> Self {
        let turn = std::f64::consts::PI * (3.0 - 5f64.sqrt());
        let directions = (0..count).map(|k| {
            let z = 1.0 - (1.0 - lowest) * (k as f64 + 0.5) / count as f64;
            let (r, angle) = ((1.0 - z * z).sqrt(), turn * k as f64);
            Vec3::new(r * angle.cos(), r * angle.sin(), z)
        });
        Self { labels: (1..=count).map(|k| format!("E{k}")).collect(), directions: directions.collect() }
    }

    fn named<'a>(labels: impl Iterator<Item = &'a str>) -> Self {
        let all = Self::standard();
        let found = labels.map(|label| all.labels.iter().position(|known| known == label).expect("a standard label"));
        all.only(&found.collect::<Vec<_>>())
    }

    /// Some of them, in this order.
    pub fn only(&self, which: &[usize]) -> Self {
        Self {
            labels: which.iter().map(|&i| self.labels[i].clone()).collect(),
            directions: which.iter().map(|&i| self.directions[i]).collect(),
        }
    }

    /// Positions on a head of this radius and centre, each off by up to `jitter` in a direction of its own.
    pub fn measured(&self, radius: f64, centre: Vec3, jitter: f64, draw: &mut Draw) -> Vec<Vec3> {
        let place = |&e: &Vec3| e * radius + centre + draw.direction() * draw.between(0.0, jitter);
        self.directions.iter().map(place).collect()
    }

    /// How many there are.
    pub fn count(&self) -> usize {
        self.labels.len()
    }

    /// A table of these positions, written so that every digit comes back.
    pub fn table(&self, positions: &[Vec3]) -> String {
        let rows =
            self.labels.iter().zip(positions).map(|(label, p)| format!("{label}\t{}\t{}\t{}\n", p[0], p[1], p[2]));
        "label\tx\ty\tz\n".to_owned() + &rows.collect::<String>()
    }

    /// A table of maps, one column each.
    pub fn maps(&self, maps: &[(&str, &[f64])]) -> String {
        let head: String = maps.iter().map(|(name, _)| format!("\t{name}")).collect();
        let rows = self.labels.iter().enumerate().map(|(i, label)| {
            label.clone() + &maps.iter().map(|(_, map)| format!("\t{}", map[i])).collect::<String>() + "\n"
        });
        format!("label{head}\n") + &rows.collect::<String>()
    }
}

fn number(text: &str) -> f64 {
    text.parse().unwrap_or_else(|_| panic!("{text:?} is no number"))
}
