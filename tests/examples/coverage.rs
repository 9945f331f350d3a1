//! How often regions hold the truth when heads and noise are what they really are; the figures of the README.
use inward_core::fit::Fitter;
use inward_core::forward::LeadField;
use inward_core::head::Shells;
use inward_core::math::{Ellipsoid, Stream, Vec3, dot, f_quantile};
use inward_core::simulate::{Background, Cause, HeadErrors, Noise, Orientation, Refits, SourceRule};
use inward_tests::Electrodes;
use std::time::Instant;

fn main() {
    let trials: u64 = std::env::args().nth(1).map_or(300, |n| n.parse().unwrap());
    let draws: usize = std::env::args().nth(2).map_or(200, |n| n.parse().unwrap());
    let rule = SourceRule { max_eccentricity: 0.9, floor: [-0.5, 0.25], orientation: Orientation::Isotropic };
    let background = Background { sources: 30, rule };
    for electrodes in [19, 71] {
        let directions = Electrodes::set(electrodes).directions;
        let shells = Shells::standard();
        let fitter = Fitter::new(LeadField::new(&shells, 88.0, directions.clone()));
        let errors = HeadErrors {
            shells,
            points: directions,
            electrodes: 5.0 / 88.0,
            skull_ratio: Some([15.0, 40.0]),
            sphere: None,
        };
        let start = Instant::now();
        let refits = Refits::new(&fitter, &errors, background, draws, 1);
        let setup = start.elapsed();
        for (what, noise, db) in [
            ("background", background, 20.0),
            ("background", background, 10.0),
            ("background", background, 5.0),
            ("white", Background { sources: 0, rule }, 10.0),
        ] {
            let (mut a, mut b, mut c, mut prof, mut n) = (0, 0, 0, 0, 0);
            let (mut va, mut vb, mut errs) = (vec![], vec![], vec![]);
            let mut spent = 0.0;
            for trial in 0..trials {
                let mut stream = Stream::new(77, electrodes as u64, trial);
                let (position, moment) = rule.draw(&mut stream);
                let truth = position * fitter.field().brain_ratio();
                let head = errors.draw(&Cause::ALL, fitter.field().reach(), 991, trial);
                let mut map = head.map(truth, moment);
                let noise = noise.draw(&fitter, &mut stream);
                let size = (dot(&map, &map) * 10f64.powf(-db / 10.0)).sqrt();
                map.iter_mut().zip(noise).for_each(|(v, e)| *v += size * e);
                let Some(fit) = fitter.fit(&map) else { continue };
                n += 1;
                let level = fit.residual_variance
                    * (1.0 + 3.0 * f_quantile(0.95, 3.0, electrodes as f64 - 7.0) / (electrodes as f64 - 7.0));
                prof += usize::from(fitter.residual_variance_at(&map, truth).unwrap() <= level);
                let start = Instant::now();
                let tangent = fitter.tangent(&fit);
                let scatter = refits.scatter(&fitter, &fit, &tangent, Noise::FromResidual);
                let points: Vec<Vec3> = scatter.together.iter().map(|fit| fit.position).collect();
                spent += start.elapsed().as_secs_f64();
                let mean = points.iter().fold(Vec3::ZERO, |s, p| s + *p) * (1.0 / points.len() as f64);
                let ea = Ellipsoid::holding(&points, fit.position, 0.95).unwrap();
                let mirrored: Vec<Vec3> = points.iter().map(|p| fit.position * 2.0 - *p).collect();
                let eb = Ellipsoid::holding(&mirrored, fit.position * 2.0 - mean, 0.95).unwrap();
                let ec = Ellipsoid::holding(&points, mean, 0.95).unwrap();
                a += usize::from(ea.holds(truth));
                b += usize::from(eb.holds(truth));
                c += usize::from(ec.holds(truth));
                va.push(ea.volume() * 88f64.powi(3) / 1000.0);
                vb.push(eb.volume() * 88f64.powi(3) / 1000.0);
                errs.push((fit.position - truth).norm() * 88.0);
            }
            let med = |v: &mut Vec<f64>| {
                v.sort_by(f64::total_cmp);
                v[v.len() / 2]
            };
            println!(
                "{electrodes:4} {what:11} {db:3} dB: about fit {:.3} mirrored {:.3} refits' mean {:.3} profile {:.3}; ml {:.1} {:.1}; err {:.1} mm; {:.2} ms a map, setup {:.0} ms",
                a as f64 / n as f64,
                b as f64 / n as f64,
                c as f64 / n as f64,
                prof as f64 / n as f64,
                med(&mut va),
                med(&mut vb),
                med(&mut errs),
                1e3 * spent / n as f64,
                setup.as_secs_f64() * 1e3
            );
        }
    }
}
