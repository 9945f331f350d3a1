//! How many of 2,016 mixed maps the engine's search misses, against a dense search that shares nothing with it.
use inward_core::fit::Fitter;
use inward_core::forward::LeadField;
use inward_core::head::Shells;
use inward_tests::{Draw, Electrodes, Mixture, MultiStart, PlainSeries};
use std::thread::scope;

fn main() {
    let reach = 0.98 * 79.0 / 88.0;
    let (mut missed, mut all, mut worst) = (0, 0, f64::MIN);
    for (electrodes, seed) in [(19, 201), (32, 202), (71, 203), (128, 204)] {
        let electrodes = Electrodes::set(electrodes);
        let series = PlainSeries::standard();
        let maps = Mixture::many(&series, &electrodes.directions, reach, 504, &mut Draw::from(seed));
        let fitter = Fitter::new(LeadField::new(&Shells::standard(), 88.0, electrodes.directions.clone()));
        let search = MultiStart::new(series, electrodes.directions.clone(), reach);
        let excess = |map: &Mixture| {
            let fit = fitter.fit(&map.values).expect("the map is no constant");
            fit.residual_variance - search.best(&map.values).0
        };
        let found: Vec<f64> = scope(|scope| {
            let parts: Vec<_> = maps
                .chunks(maps.len().div_ceil(2))
                .map(|part| scope.spawn(|| part.iter().map(excess).collect::<Vec<_>>()))
                .collect();
            parts.into_iter().flat_map(|part| part.join().expect("the search ends")).collect()
        });
        let here = found.iter().filter(|excess| **excess > 1e-6).count();
        println!("{} electrodes: {here} of {} maps", electrodes.count(), found.len());
        (missed, all) = (missed + here, all + found.len());
        worst = found.into_iter().fold(worst, f64::max);
    }
    let share = 100.0 * f64::from(missed as u32) / f64::from(all as u32);
    println!("missed by more than 1e-6 of residual variance: {missed} of {all} maps ({share:.2} %); worst {worst:.1e}");
}
