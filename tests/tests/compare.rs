//! Several decompositions side by side: shares, subjects, matched components, rank.
use inward_core::math::{Resampler, assignment};
use inward_core::report::{Comparison, GroupSummary, MapReport, Member, Pair, Questions, Summary};
use inward_core::understand::ColumnsAre;
use inward_core::{Decomposition, Request, Settings, Study, Vec3, analyse, compare};
use inward_tests::{Draw, Electrodes, data};
use serde_json::Value;

fn member(name: &str, subject: Option<&str>, rv: &[f64]) -> Member {
    let rv = rv.iter().map(|rv| Some(*rv).filter(|rv| rv.is_finite())).collect();
    Member { name: name.into(), subject: subject.map(String::from), rv, ..Member::default() }
}

fn summary(members: &[Member]) -> Summary {
    Summary::new(members, &Questions::default()).unwrap()
}

fn codes(summary: &Summary) -> Vec<&'static str> {
    summary.notes.iter().map(|note| note.code.as_str()).collect()
}

/// Worked out on paper.
#[test]
fn shares_and_medians_of_a_small_case() {
    let mut first = member("a", None, &[0.12, 0.02, 0.5, 0.10]);
    first.variance = vec![Some(2.0), Some(4.0), Some(1.0), Some(1.0)];
    let mut second = member("b", None, &[0.3, f64::NAN, 0.04]);
    second.variance = vec![Some(1.0), None, None];
    let nothing = member("c", None, &[f64::NAN; 2]);
    let summary = summary(&[first, second, nothing]);
    let [a, b, c] = &summary.members[..] else { panic!() };
    assert_eq!((a.fitted, &a.count[..], &a.share[..]), (4, &[1, 2, 3][..], &[Some(0.25), Some(0.5), Some(0.75)][..]));
    assert_eq!(a.weighted_share, Some(vec![Some(0.5), Some(0.625), Some(0.875)]));
    assert!((a.median_rv.unwrap() - 0.11).abs() < 1e-15);
    assert_eq!(a.cells, ["4", "1", "25.0", "2", "50.0", "3", "75.0", "50.0", "62.5", "87.5", "11.0"]);
    assert_eq!((b.fitted, &b.count[..], b.weighted_share.as_ref()), (2, &[1, 1, 1][..], None));
    assert!((b.median_rv.unwrap() - 0.17).abs() < 1e-15);
    assert_eq!((c.fitted, &c.share[..], c.median_rv), (0, &[None; 3][..], None));
    assert_eq!(summary.labels, ["5", "10", "15"]);
    assert!(summary.groups.is_empty() && summary.differences.is_empty());
    assert_eq!(codes(&summary), ["components-no-sample", "variance-incomplete"]);
    for (at, draws) in [(vec![0.0], 4000), (vec![1.5], 4000), (vec![], 4000), (vec![0.1], 10)] {
        let error = Summary::new(&[], &Questions { at, draws, seed: 1 }).unwrap_err();
        assert_eq!(error.finding().code.as_str(), "settings-unknown");
    }
}

/// Five subjects under two names, one of them with two recordings; shares at 10 % worked out on paper.
#[test]
fn groups_are_means_over_subjects() {
    let rv = |low: usize, of: usize| -> Vec<f64> { (0..of).map(|k| if k < low { 0.08 } else { 0.4 }).collect() };
    let mut members: Vec<Member> = Vec::new();
    for (subject, x, y) in [("s1", 1, 0), ("s2", 2, 1), ("s3", 3, 1), ("s4", 4, 4), ("s5", 2, 0)] {
        members.push(Member { information: Some(10.0), ..member("x", Some(subject), &rv(x, 4)) });
        members.push(member("y", Some(subject), &rv(y, 4)));
    }
    // The second recording of a subject counts half of it.
    members.push(Member { information: Some(20.0), ..member("x", Some("s1"), &rv(3, 4)) });
    let few = ["s1", "s2"].map(|subject| member("z", Some(subject), &[0.3]));
    let told = summary(&[&members[..], &few[..]].concat());
    let [x, y, z] = &told.groups[..] else { panic!("{:?}", told.groups) };
    assert_eq!((x.name.as_str(), x.subjects, &x.members[..]), ("x", 5, &[0, 2, 4, 6, 8, 10][..]));
    // (2/4 + 2/4 + 3/4 + 4/4 + 2/4) / 5 and (0 + 1/4 + 1/4 + 4/4 + 0) / 5.
    assert!((x.share[1].unwrap() - 0.65).abs() < 1e-15 && (y.share[1].unwrap() - 0.3).abs() < 1e-15);
    assert_eq!((x.information, y.information), (Some(11.0), None));
    // ((0.4 + 0.08) / 2 + 0.24 + 0.08 + 0.08 + 0.24) / 5.
    assert!((x.median_rv.unwrap() - 0.176).abs() < 1e-15);
    let within = |group: &GroupSummary| {
        let (low, high) = (group.low[1].unwrap(), group.high[1].unwrap());
        low <= group.share[1].unwrap() && group.share[1].unwrap() <= high && (0.0..=1.0).contains(&low) && high <= 1.0
    };
    assert!(within(x) && within(y));
    assert!(z.low == [None; 3] && z.curve.low.is_none() && z.cells[2].is_empty());
    let curve = &x.curve;
    for (threshold, share) in [0.05, 0.10, 0.15].into_iter().zip(&x.share) {
        let at = curve.rv.iter().position(|rv| *rv == threshold).unwrap();
        assert_eq!(Some(curve.share[at]), *share, "curve and table agree at {threshold}");
    }
    assert_eq!(curve.share.last(), Some(&1.0));
    assert!(curve.rv.is_sorted() && curve.share.is_sorted() && curve.low.as_ref().unwrap().is_sorted());
    let difference = told.differences.iter().find(|one| (one.a, one.b) == (0, 1)).unwrap();
    assert_eq!(difference.subjects, 5);
    assert!((difference.difference[1] - 0.35).abs() < 1e-15);
    assert!(difference.low[1].unwrap() > 0.0, "the pairs differ less than the subjects: {difference:?}");
    assert!(difference.cells[3].starts_with('+'), "{:?}", difference.cells);
    let with_few = told.differences.iter().find(|one| (one.a, one.b) == (0, 2)).unwrap();
    assert_eq!((with_few.subjects, with_few.low[1]), (2, None));
    assert_eq!(codes(&told), ["components-no-sample", "subjects-few", "subjects-resampled"]);
    assert_eq!(told, summary(&[&members[..], &few[..]].concat()));
    let other = Summary::new(&members, &Questions { seed: 2, ..Questions::default() }).unwrap();
    assert_eq!(other.groups[0].share, x.share);
    assert_eq!(codes(&other), ["subjects-resampled"]);
}

#[test]
fn subjects_that_are_all_alike_leave_no_interval_to_be_told() {
    let members: Vec<Member> =
        ["a", "b", "c", "d", "e", "f"].map(|subject| member("x", Some(subject), &[0.02, 0.3, 0.5])).to_vec();
    let told = summary(&members);
    let group = &told.groups[0];
    assert!((group.high[0].unwrap() - group.low[0].unwrap()).abs() < 1e-12);
    assert_eq!(group.cells[2], "all subjects alike", "{:?}", group.cells);
}

#[test]
fn other_electrodes_bring_a_warning() {
    let with = |name: &str, labels: &str| Member {
        electrodes: labels.split(',').map(String::from).collect(),
        ..member(name, None, &[0.1])
    };
    let same = summary(&[with("a", "T7,Cz,P7"), with("b", "EEG T3-Ref,cz,T5"), with("c", "P7,Cz,T7")]);
    assert_eq!(codes(&same), ["components-no-sample"]);
    let differ = summary(&[with("a", "T7,Cz,P7"), with("b", "T3,Cz"), with("c", "T7,Cz,P7")]);
    let note = &differ.notes[0];
    assert_eq!((note.code.as_str(), note.severity), ("electrode-sets-differ", "warning"));
    assert!(
        note.message.contains("3 in “a” and 1 more, 2 in “b”") && note.message.contains("them: P7."),
        "{}",
        note.message
    );
}

/// Drawing subjects anew against a known truth: shares of 71 components whose probability differs between subjects.
#[test]
fn intervals_hold_the_truth_about_as_often_as_they_say() {
    const ROUNDS: usize = 1500;
    let even: fn(&mut Draw) -> f64 = |draw| draw.between(0.1, 0.5);
    let skewed: fn(&mut Draw) -> f64 = |draw| 0.02 + 0.4 * draw.between(0.0, 1.0).powi(3);
    for (law, chance, truth) in [("even", even, 0.3), ("skewed", skewed, 0.12)] {
        for (subjects, fewest) in [(5, 0.88), (8, 0.88), (13, 0.90), (30, 0.92)] {
            let mut draw = Draw::from(17 + subjects as u64);
            let resampler = Resampler::new(subjects, 2000, 1);
            let mut held = 0;
            for _ in 0..ROUNDS {
                let shares: Vec<f64> = (0..subjects)
                    .map(|_| {
                        let probability = chance(&mut draw);
                        (0..71).filter(|_| draw.between(0.0, 1.0) < probability).count() as f64 / 71.0
                    })
                    .collect();
                let [low, high] = resampler.interval(&shares);
                held += usize::from(low <= truth && truth <= high);
            }
            let coverage = held as f64 / ROUNDS as f64;
            println!(
                "{law}, {subjects} subjects: {:.1} % of {ROUNDS} intervals hold the truth, nominally 95",
                100.0 * coverage
            );
            assert!((fewest..0.985).contains(&coverage), "{law}, {subjects}: {coverage}");
        }
    }
}

#[test]
fn assignments_are_as_good_as_those_of_scipy() {
    let known: Value = serde_json::from_str(&data("assignment.json")).unwrap();
    for case in known["cases"].as_array().unwrap() {
        let number = |key: &str| case[key].as_u64().unwrap();
        let (rows, columns, modulus) = (number("rows") as usize, number("columns") as usize, number("modulus"));
        let gain =
            |k: u64| ((k * k * 7919 + k * 104_729 + number("seed") * 1_299_709) % modulus) as f64 / modulus as f64;
        let gains: Vec<f64> = (0..(rows * columns) as u64).map(gain).collect();
        let found = assignment(rows, columns, &gains);
        let pairs: Vec<(usize, usize)> =
            found.iter().enumerate().filter_map(|(row, column)| Some((row, (*column)?))).collect();
        let mut taken: Vec<usize> = pairs.iter().map(|(_, column)| *column).collect();
        taken.sort_unstable();
        taken.dedup();
        assert_eq!((found.len(), taken.len(), pairs.len()), (rows, rows.min(columns), rows.min(columns)));
        let sum: f64 = pairs.iter().map(|(row, column)| gains[row * columns + column]).sum();
        assert!((sum - case["sum"].as_f64().unwrap()).abs() < 1e-9, "{rows} × {columns}: {sum}");
        if let Some(expected) = case["pairs"].as_array() {
            let expected: Vec<(usize, usize)> =
                expected.iter().map(|p| (p[0].as_u64().unwrap() as usize, p[1].as_u64().unwrap() as usize)).collect();
            assert_eq!(pairs, expected, "{rows} × {columns}");
        }
    }
}

fn open(maps: &str, settings: Settings) -> Study {
    Study::open(&Request { maps: maps.as_bytes(), settings, ..Request::default() }).unwrap()
}

fn components() -> Settings {
    Settings { columns_are: Some(ColumnsAre::Components), ..Settings::default() }
}

fn table(set: &Electrodes, maps: &[Vec<f64>]) -> String {
    let names: Vec<String> = (0..maps.len()).map(|k| format!("m{k}")).collect();
    set.maps(&names.iter().zip(maps).map(|(name, map)| (name.as_str(), &map[..])).collect::<Vec<_>>())
}

/// The positions that `matches` takes, of every fitted map.
fn positions(study: &Study) -> Vec<Option<Vec3>> {
    let maps = study.fit_range(0..study.count()).unwrap();
    let position = |map: &MapReport| match map {
        MapReport::Fitted(map) => Some(map.dipole.canonical_mm),
        MapReport::Failed { .. } => None,
    };
    maps.iter().map(position).collect()
}

fn matched(a: &Study, b: &Study) -> Pair {
    a.matches(b, [&positions(a), &positions(b)], ["a", "b"]).unwrap()
}

#[test]
fn components_find_their_partners_whatever_their_order_sign_size_and_labels() {
    let (set, mut draw) = (Electrodes::set(32), Draw::from(8));
    let maps: Vec<Vec<f64>> = (0..10).map(|_| draw.noise(32)).collect();
    let order = [3, 7, 0, 9, 1, 5, 2, 8];
    let mut others: Vec<Vec<f64>> = order
        .iter()
        .map(|&k| {
            let (size, offset) = (if k % 2 == 0 { -3.0 } else { 0.2 }, draw.normal());
            maps[k].iter().map(|v| size * (v + 0.1 * draw.normal()) + offset).collect()
        })
        .collect();
    others.push(vec![1.0; 32]);
    others.push(draw.noise(32).into_iter().enumerate().map(|(k, v)| if k == 4 { f64::NAN } else { v }).collect());
    let a = open(&table(&set, &maps), Settings { exclude: vec!["Oz".into()], ..components() });
    let written =
        table(&set, &others).replace("NaN", "n/a").replace("\nT7\t", "\nT3\t").replace("\nP8\t", "\nEEG T6-Ref\t");
    let b = open(&written, Settings { flip: vec![1], ..components() });
    let pair = matched(&a, &b);
    assert_eq!((pair.electrodes, pair.matches.len()), (31, 8));
    assert_eq!((&pair.unmatched_a[..], &pair.unmatched_b[..]), (&[4, 6][..], &[8, 9][..]));
    for one in &pair.matches {
        assert_eq!(order[one.index_b], one.index_a);
        let sign = if (one.index_a % 2 == 0) != (one.index_b == 1) { -1.0 } else { 1.0 };
        assert!(one.correlation * sign > 0.95, "{one:?}");
        assert_eq!(one.cells[3], if sign < 0.0 { "opposite" } else { "same" });
        let common = |values: &[f64]| -> Vec<f64> {
            let kept = set.labels.iter().zip(values).filter(|(label, _)| *label != "Oz").map(|(_, v)| *v);
            let kept: Vec<f64> = kept.collect();
            let mean = kept.iter().sum::<f64>() / 31.0;
            kept.iter().map(|v| v - mean).collect()
        };
        let (x, y) = (common(&maps[one.index_a]), common(&others[one.index_b]));
        let dot = |x: &[f64], y: &[f64]| x.iter().zip(y).map(|(x, y)| x * y).sum::<f64>();
        let r = dot(&x, &y) / (dot(&x, &x) * dot(&y, &y)).sqrt();
        assert!((r.abs() - one.correlation.abs()).abs() < 1e-12);
        let [p, q] = [positions(&a)[one.index_a], positions(&b)[one.index_b]].map(Option::unwrap);
        assert!((one.distance_mm.unwrap() - (p - q).norm()).abs() < 1e-12);
    }
    assert!(pair.matches.is_sorted_by(|x, y| x.correlation.abs() >= y.correlation.abs()));
    let backwards = matched(&b, &a);
    assert!(backwards.matches.iter().zip(&pair.matches).all(|(x, y)| (x.index_a, x.index_b) == (y.index_b, y.index_a)));
    let itself = matched(&a, &a);
    assert!(itself.matches.iter().all(|one| one.index_a == one.index_b && one.distance_mm == Some(0.0)));
    let unknown = a.matches(&b, [&[], &[]], ["a", "b"]).unwrap();
    assert!(unknown.matches.iter().all(|one| one.distance_mm.is_none() && one.cells[4].is_empty()));
}

#[test]
fn rank_deficiency_is_recognised() {
    let (set, mut draw) = (Electrodes::set(32), Draw::from(4));
    let mut noise = |count: usize| -> Vec<Vec<f64>> { (0..count).map(|_| draw.noise(32)).collect() };
    let referenced = |mut map: Vec<f64>| {
        let mean = map.iter().sum::<f64>() / 32.0;
        map.iter_mut().for_each(|v| *v = ((*v - mean) * 1e6).round() / 1e6);
        map
    };
    let interpolated = |mut map: Vec<f64>| {
        map[5] = 0.3 * map[4] + 0.5 * map[6] + 0.2 * map[10];
        map
    };
    let each = |maps: Vec<Vec<f64>>, change: &dyn Fn(Vec<f64>) -> Vec<f64>| maps.into_iter().map(change).collect();
    type Case<'a> = (&'a str, Vec<Vec<f64>>, usize, Option<&'a str>);
    let cases: Vec<Case> = vec![
        ("full", noise(32), 32, None),
        ("fewer than electrodes", noise(20), 20, None),
        ("average reference", each(noise(32), &referenced), 31, Some("one component less than electrodes (32)")),
        ("average reference, one fewer", each(noise(31), &referenced), 31, None),
        ("more than electrodes", noise(36), 32, Some("only 32 electrodes")),
        ("interpolated", each(noise(32), &interpolated), 31, Some("interpolated")),
        ("both", each(noise(32), &|map| interpolated(referenced(map))), 31, Some("interpolated")),
        (
            "interpolated before the reference",
            each(noise(32), &|map| referenced(interpolated(map))),
            30,
            Some("which takes one"),
        ),
    ];
    for (what, maps, rank, said) in cases {
        let report = open(&table(&set, &maps), components()).rank(None);
        assert_eq!(report.rank, Some(rank), "{what}");
        assert_eq!(report.note.is_some(), said.is_some(), "{what}: {report:?}");
        if let (Some(note), Some(said)) = (report.note, said) {
            assert_eq!(note.code.as_str(), "rank-deficient");
            assert!(note.message.contains(said), "{what}: {}", note.message);
        }
    }
    let moments = Settings { columns_are: Some(ColumnsAre::Unrelated), ..Settings::default() };
    assert_eq!(open(&table(&set, &noise(32)), moments).rank(None).rank, None);
    let mut gap = noise(20);
    gap[3][3] = f64::NAN;
    assert_eq!(open(&table(&set, &gap).replace("NaN", "n/a"), components()).rank(None).rank, None);
}

fn decomposition(name: &str, subject: Option<&str>, study: Study) -> Decomposition {
    Decomposition { name: name.into(), subject: subject.map(String::from), information: None, study }
}

fn compared(list: &[Decomposition]) -> Comparison {
    compare(list, &Questions::default(), None).unwrap()
}

#[test]
fn pairs_are_those_of_one_subject_and_not_too_many() {
    let (set, mut draw) = (Electrodes::set(19), Draw::from(6));
    let mut one = |name: &str, subject: Option<&str>| {
        let maps: Vec<Vec<f64>> = (0..2).map(|_| draw.noise(19)).collect();
        decomposition(name, subject, open(&table(&set, &maps), components()))
    };
    let pairs = |comparison: &Comparison| comparison.pairs.iter().map(|pair| [pair.a, pair.b]).collect::<Vec<_>>();
    let list = [one("a", Some("x")), one("b", Some("x")), one("a", Some("y")), one("c", None), one("d", None)];
    assert_eq!(pairs(&compared(&list)), [[0, 1], [3, 4]]);
    assert_eq!(pairs(&compare(&list, &Questions::default(), Some(&[[2, 0]])).unwrap()), [[2, 0]]);
    for wrong in [[0, 5], [1, 1]] {
        let error = compare(&list, &Questions::default(), Some(&[wrong])).unwrap_err();
        assert_eq!(error.finding().code.as_str(), "settings-unknown");
    }
    let many: Vec<Decomposition> = (0..11).map(|_| one("n", None)).collect();
    let comparison = compared(&many);
    let note = comparison.notes.iter().find(|note| note.code.as_str() == "pairs-many").unwrap();
    assert!(comparison.pairs.is_empty() && note.message.contains("55") && note.message.contains("settings.pairs"));
    assert_eq!(pairs(&compared(&many[..10])).len(), 45);
    let few = Electrodes::set(32).only(&(0..12).collect::<Vec<_>>());
    let twelve: Vec<Vec<f64>> = vec![Draw::from(3).noise(12)];
    let apart = few.only(&(3..12).collect::<Vec<_>>());
    let all = Electrodes::set(32);
    let rest: Vec<usize> = (0..32).filter(|k| !few.labels[..3].contains(&all.labels[*k])).collect();
    let rest = all.only(&rest);
    let noise = vec![Draw::from(4).noise(29)];
    assert!(apart.labels.iter().all(|label| rest.labels.contains(label)) && apart.count() == 9);
    let list = [
        decomposition("few", None, open(&table(&few, &twelve), components())),
        decomposition("rest", None, open(&table(&rest, &noise), components())),
    ];
    let comparison = compared(&list);
    let pair = &comparison.pairs[0];
    let error = pair.error.as_ref().unwrap();
    assert_eq!(
        (error.code.as_str(), &pair.unmatched_a[..], &pair.unmatched_b[..]),
        ("electrodes-uncommon", &[0][..], &[0][..])
    );
    assert!(error.message.contains("“few” and “rest” have 9 electrodes"), "{}", error.message);
    assert!(comparison.notes.iter().any(|note| note.code.as_str() == "electrode-sets-differ"));
}

/// Real recordings: independent components against principal ones; `data/open/` names their source.
#[test]
fn independent_components_are_more_dipolar_than_principal_ones() {
    for recording in ["uci_control", "uci_second"] {
        let [ica, pca] = ["ica20", "pca20"].map(|kind| data(&format!("open/{recording}_{kind}.tsv")));
        let list =
            [("ICA", &ica), ("PCA", &pca)].map(|(name, maps)| decomposition(name, None, open(maps, components())));
        let comparison = compared(&list);
        let [first, second] = &comparison.decompositions[..] else { panic!() };
        for (one, maps) in [(first, &ica), (second, &pca)] {
            let alone =
                analyse(&Request { maps: maps.as_bytes(), settings: components(), ..Request::default() }).unwrap();
            assert_eq!((&one.maps, &one.head, &one.electrodes), (&alone.maps, &alone.head, &alone.electrodes));
            println!(
                "{recording} {}: {:?} of {} at most 5, 10, 15 %, median {:.3}, rank {:?}",
                one.name,
                one.near_dipolar.count,
                one.fitted,
                one.median_rv.unwrap(),
                one.rank
            );
        }
        assert!(first.median_rv < second.median_rv);
        if recording == "uci_control" {
            for at in [1, 2] {
                assert!(first.near_dipolar.share[at] > second.near_dipolar.share[at]);
            }
        }
        assert_eq!((first.rank, second.rank), (Some(20), Some(20)));
        let pair = &comparison.pairs[0];
        assert_eq!((pair.electrodes, pair.matches.len()), (61, 20));
        let largest: f64 = pair.matches.iter().map(|one| one.correlation.abs()).sum();
        println!("{recording}: mean |r| of the matched components {:.3}", largest / 20.0);
    }
}
