//! Many maps at once: lines of a table, small pictures.
use inward_core::map::MapUnit;
use inward_core::report::{FittedMap, MapRow, columns};
use inward_core::{MapReport, Request, Settings, Study};
use inward_tests::{Draw, Electrodes, example};

fn study(settings: Settings) -> Study {
    let (electrodes, maps) = (example("watch_electrodes.tsv"), example("watch_maps.tsv"));
    let request =
        Request { electrodes: Some(electrodes.as_bytes()), maps: maps.as_bytes(), settings, ..Request::default() };
    Study::open(&request).unwrap()
}

fn fitted(study: &Study, index: usize) -> FittedMap {
    match study.fit(index).unwrap() {
        MapReport::Fitted(map) => *map,
        failed => panic!("{failed:?}"),
    }
}

fn cell<'a>(row: &'a MapRow, code: &str) -> &'a str {
    let at = columns(None).iter().position(|column| column.code == code).unwrap();
    &row.cells[at]
}

#[test]
fn a_row_says_what_the_sheet_says() {
    let activation_sd = vec![Some(2.0), None, Some(0.5)];
    let study = study(Settings { activation_sd, map_unit: MapUnit::Volt, flip: vec![1], ..Settings::default() });
    let mut variances = 0;
    for index in 0..study.count() {
        let map = fitted(&study, index);
        let (row, sheet) = (study.row(&map), study.sheet(index, &map));
        let value = |code: &str| sheet.rows.iter().find(|row| row.code == code).unwrap().value.clone();
        assert_eq!(row.cells.len(), columns(None).len());
        for (column, code) in [
            ("rv", "residual_variance"),
            ("adjusted_rv", "adjusted_rv"),
            ("site", "nearest_site"),
            ("side", "side"),
            ("depth", "depth_mm"),
            ("eccentricity", "eccentricity"),
            ("strength", "strength"),
            ("radial", "radial_share"),
        ] {
            assert_eq!(cell(&row, column), value(code), "{column}");
        }
        assert_eq!(["x", "y", "z"].map(|axis| cell(&row, axis)).join(", "), value("canonical_mm"));
        assert_eq!((row.name.as_str(), row.flipped), (map.name.as_str(), index == 1));
        let power = map.measured.iter().map(|v| v * v).sum::<f64>() / map.measured.len() as f64;
        assert!((row.power / power - 1.0).abs() < 1e-12);
        match [Some(4.0), None, Some(0.25)].get(index).copied().flatten() {
            Some(square) => {
                assert!((row.variance.unwrap() / (square * power) - 1.0).abs() < 1e-12);
                let written: f64 = cell(&row, "variance").parse().unwrap();
                assert!((written / (1e12 * square * power) - 1.0).abs() < 5e-3, "volts are written as microvolts");
                variances += 1;
            }
            None => assert_eq!((row.variance, cell(&row, "variance")), (None, "")),
        }
    }
    assert!(variances > 1);
    let unit = |unit, code: &str| columns(unit).into_iter().find(|column| column.code == code).unwrap().unit;
    assert_eq!(
        [None, Some(MapUnit::Relative), Some(MapUnit::Volt)].map(|u| unit(u, "strength")),
        ["nAm or relative", "relative", "nAm"]
    );
    assert_eq!(unit(Some(MapUnit::Volt), "variance"), "µV²");
}

#[test]
fn regions_are_thirds_of_the_head_with_their_sides() {
    let study = study(Settings::default());
    let map = fitted(&study, 0);
    let third = study.head().radius_mm / 3.0;
    for (x, y, side, region) in [
        (-30.0, third + 0.1, "left", "front-left"),
        (30.0, third - 0.1, "right", "middle-right"),
        (4.0, -third + 0.1, "midline", "middle-midline"),
        (4.0, -third - 0.1, "midline", "back-midline"),
        (2.0, -4.0, "midline", "centre"),
    ] {
        let mut moved = map.clone();
        moved.dipole.canonical_mm.0 = [x, y, 0.0];
        moved.dipole.side = side;
        let row = study.row(&moved);
        assert_eq!((row.region, cell(&row, "region")), (region, region));
    }
}

/// The pixels of 32 have their centres where every third of the picture's 96 has one.
#[test]
fn thumbnails_show_what_the_picture_shows() {
    let study = study(Settings { flip: vec![1], exclude: vec!["Cz".into(), "T7".into()], ..Settings::default() });
    let indexes: Vec<usize> = (0..study.count()).rev().collect();
    let small = study.thumbnails(&indexes, 32).unwrap().unwrap();
    let mut painted = 0;
    for (&index, (raster, limit)) in indexes.iter().zip(small.measured.iter().zip(&small.limit)) {
        let map = fitted(&study, index);
        let picture = study.picture(&map).unwrap();
        assert_eq!(*limit, map.measured.iter().fold(0.0f64, |most, v| most.max(v.abs())));
        assert_eq!((picture.size, &picture.outline), (96, &small.outline));
        for (pixel, value) in raster.iter().enumerate() {
            let large = picture.measured.raster[(3 * (pixel / 32) + 1) * 96 + 3 * (pixel % 32) + 1];
            assert_eq!(value.is_nan(), large.is_nan());
            if !value.is_nan() {
                painted += 1;
                let large = f64::from(large) * picture.limit / limit;
                assert!((f64::from(*value) - large).abs() < 1e-5, "{value} {large}");
            }
        }
    }
    assert!(painted > 500 * indexes.len());
    assert_eq!(study.thumbnails(&[0], 8).unwrap().unwrap().measured[0].len(), 64);
    assert_eq!(study.thumbnails(&[99], 32).unwrap_err().finding().code.as_str(), "map-index");
    for size in [7, 65] {
        assert_eq!(study.thumbnails(&[0], size).unwrap_err().finding().code.as_str(), "settings-unknown");
    }
}

#[test]
fn thumbnails_of_maps_without_values_are_empty() {
    let set = Electrodes::set(32);
    let noise = Draw::from(5).noise(32);
    let mut gap = noise.clone();
    gap[7] = f64::NAN;
    let table = set.maps(&[("a", &noise), ("flat", &[3.0; 32]), ("gap", &gap)]).replace("NaN", "n/a");
    let study = Study::open(&Request { maps: table.as_bytes(), ..Request::default() }).unwrap();
    let small = study.thumbnails(&[0, 1, 2], 16).unwrap().unwrap();
    let empty = |k: usize| small.measured[k].iter().all(|v| v.is_nan()) && small.limit[k] == 0.0;
    assert_eq!([empty(0), empty(1), empty(2)], [false, true, true]);
}
