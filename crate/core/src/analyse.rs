//! The whole way of a table of maps in one call.

mod compare;
mod explanations;
mod landscape;
mod methods;
mod response;
mod stability;
mod tables;
mod trust;

pub use compare::{Decomposition, compare};

use crate::assess::{adjusted_residual_variance, degrees_of_freedom};
use crate::electrode::{Label, nearest_site};
use crate::finding::{Code, Error, Finding, Place};
use crate::fit::{BATCH, Fit, Fitter, Stopped};
use crate::forward::LeadField;
use crate::head::{Shells, catalogued};
use crate::map::{MapUnit, average_referenced, hints_at_laplacian};
use crate::math::{Vec3, mean};
use crate::placement::{FEWEST_ELECTRODES, Placed, Placement, Wishes, place};
use crate::read::{Reading, read};
use crate::report::{
    Assessment, CENTRE_MM, ChoiceReport, ElectrodeReport, EquivalentDipole, FittedMap, HeadReport, LabelsReport,
    MapReport, MapRow, Note, Program, Renamed, Report, SearchReport, Settings, Sheet, Site, UnderstoodReport,
};
use crate::scene::{Picture, Raster, Spline};
use crate::understand::{ColumnsAre, Kind, Role, kind_of, role_of_files};
use core::ops::Range;
use std::sync::{Arc, Mutex, OnceLock, PoisonError};
use tables::Tables;
use trust::Simulated;

/// What to analyse.
#[derive(Clone, Debug, Default)]
pub struct Request<'a> {
    /// Content of a table of electrodes; `None` for standard positions by the labels of the maps.
    pub electrodes: Option<&'a [u8]>,
    /// Content of a table of maps.
    pub maps: &'a [u8],
    /// Files by name with their content, told apart by it, in place of electrodes and maps.
    pub files: Vec<(&'a str, &'a [u8])>,
    /// Choices.
    pub settings: Settings,
    /// Short hash of the engine's sources, for the report.
    pub build: Option<&'static str>,
}

/// Whether the content of a file is a table of electrodes or of maps; what cannot be read is taken for maps, so that reading it says what is wrong.
pub fn kind(bytes: &[u8]) -> Kind {
    let files = read("", bytes, |_| Reading::default()).unwrap_or_default();
    kind_of(files.iter().map(|(_, content)| content))
}

/// What a file is by its content.
///
/// # Errors
/// Any of [`crate::read::read`], naming the file.
pub fn role(name: &str, bytes: &[u8]) -> Result<Role, Error> {
    let files = read(name, bytes, |_| Reading::default());
    let files = files.map_err(|error| error.within("file", Some(name)))?;
    Ok(role_of_files(files.iter().map(|(_, content)| content)))
}

/// SHA-256 of a content in hexadecimal, as in a report's `inputs`.
pub fn digest(bytes: &[u8]) -> String {
    tables::sha256(bytes)
}

/// Reads, places, fits every map and reports.
///
/// # Errors
/// Any of [`Study::open`]; if no map can be fitted, the error of the first one.
pub fn analyse(request: &Request) -> Result<Report, Error> {
    let study = Study::open(request)?;
    let outcomes = study.outcomes(0..study.count());
    if let Some(Err(first)) = outcomes.first()
        && outcomes.iter().all(Result::is_err)
    {
        return Err(first.clone());
    }
    let maps = outcomes.into_iter().enumerate().map(|(index, outcome)| study.reported(index, outcome)).collect();
    Ok(Report { maps, ..study.preamble() })
}

/// A table of maps, read and prepared once; maps are fitted one by one when asked for.
#[derive(Clone, Debug)]
pub struct Study {
    tables: Arc<Tables>,
    settings: Settings,
    placement: Placement,
    shells: Shells,
    fitter: Arc<Fitter>,
    notes: Vec<Finding>,
    /// Made when the first picture is asked for.
    spline: OnceLock<Option<Spline>>,
    /// Of the thumbnails that were asked for last.
    raster: Arc<Mutex<Option<Raster>>>,
    simulated: Simulated,
}

/// Small rasters of maps, without a fit.
#[derive(Clone, Debug, PartialEq)]
pub struct Thumbnails {
    /// Rows and columns of each.
    pub size: usize,
    /// Angle from the top of the head at the rim of the disc.
    pub rim_degrees: f64,
    /// Hull of the used electrodes on the disc.
    pub outline: Vec<[f64; 2]>,
    /// Values over the map's limit as in a [`Picture`]; NaN beyond what is painted, and all over for a map without values.
    pub measured: Vec<Vec<f32>>,
    /// Largest absolute value of each map at the used electrodes; 0 for one that is constant or lacks values.
    pub limit: Vec<f64>,
}

/// Sizes of thumbnails.
pub const THUMBNAIL_SIZES: core::ops::RangeInclusive<usize> = 8..=64;

impl Study {
    /// Reads the inputs, places the electrodes on the head and prepares the search.
    ///
    /// # Errors
    /// Any of [`crate::read::read`], [`crate::understand::understand`], [`Settings::check`], [`Shells::new`] and [`place`].
    pub fn open(request: &Request) -> Result<Self, Error> {
        Self::prepared(Arc::new(Tables::read(request)?), request.settings.clone(), None)
    }

    /// The same files under other settings: understood again only if these mean something for that, and the digits are
    /// those of a new study.
    ///
    /// # Errors
    /// Any of [`crate::understand::understand`], [`Settings::check`], [`Shells::new`] and [`place`].
    pub fn with(&self, settings: Settings) -> Result<Self, Error> {
        let tables = self.tables.with(&settings)?.map_or_else(|| Arc::clone(&self.tables), Arc::new);
        Self::prepared(tables, settings, Some(self))
    }

    /// The same study with its files under other names, each with the one that takes its place: for what is handed on,
    /// since names may tell whose a recording is. A name that no file has is passed over.
    ///
    /// # Errors
    /// As for [`Study::open`].
    pub fn renamed(&self, names: &[(String, String)]) -> Result<Self, Error> {
        let (tables, settings) = self.tables.renamed(&self.settings, names)?;
        Self::prepared(Arc::new(tables), settings, Some(self))
    }

    /// Other files; the search is shared where head and electrodes are the same, and the digits are those of a new study.
    ///
    /// # Errors
    /// As for [`Study::open`].
    pub fn beside(&self, request: &Request) -> Result<Self, Error> {
        Self::prepared(Arc::new(Tables::read(request)?), request.settings.clone(), Some(self))
    }

    fn prepared(tables: Arc<Tables>, settings: Settings, before: Option<&Self>) -> Result<Self, Error> {
        settings.check(&tables.understood.maps.names)?;
        if settings.laplacian == Some(true) {
            let error = Finding::new(Code::MapLaplacian).at(Place::input("maps")).into();
            return Err(tables.understood.in_file(error));
        }
        let head = settings.head.clone().unwrap_or_default();
        let shells = head.shells.map_or_else(|| Ok(Shells::standard()), Shells::new)?;
        let understood = &tables.understood;
        let wishes = Wishes {
            exclude: settings.exclude.iter().map(|label| Label::new(label)).collect(),
            interpolated: settings.interpolated.iter().map(|label| Label::new(label)).collect(),
            bad: understood.bad.clone(),
            other_channels: understood.other_channels.clone(),
            scalp: understood.scalp.clone(),
            axes: settings.axes,
            mirror: settings.mirror,
            landmarks: understood.landmarks.clone(),
            unit: settings.units,
            declared_unit: understood.declared_unit,
            components: understood.columns_are == ColumnsAre::Components,
            centre_mm: head.centre_mm,
            radius_mm: head.radius_mm,
        };
        let placed = place(understood.electrodes.as_deref(), &understood.maps, &wishes);
        let mut placement = placed.map_err(|error| understood.in_file(error))?;
        placement.notes.iter_mut().for_each(|note| understood.name_file(note));
        let radius = placement.sphere.sphere.radius;
        let directions = placement.directions();
        let same_head = |study: &&Self| study.shells == shells && study.placement.sphere.sphere.radius == radius;
        let (fitter, spline) = match before.filter(same_head) {
            Some(study) if study.fitter.field().directions() == directions => {
                (Arc::clone(&study.fitter), study.spline.clone())
            }
            Some(study) => (Arc::new(Fitter::new(study.fitter.field().elsewhere(directions))), OnceLock::new()),
            None => (Arc::new(Fitter::new(LeadField::new(&shells, radius, directions))), OnceLock::new()),
        };
        let notes = tables.understood.notes.iter().chain(&placement.notes).cloned().collect();
        let raster = Arc::default();
        let simulated = Simulated::default();
        let mut study = Self { tables, settings, placement, shells, fitter, notes, spline, raster, simulated };
        if let Some(before) = before {
            study.simulated = Simulated::of(&study, before);
        }
        study.note_the_rest();
        Ok(study)
    }

    /// Number of maps.
    pub fn count(&self) -> usize {
        self.tables.understood.maps.names.len()
    }

    /// The head of all fits.
    pub fn head(&self) -> HeadReport {
        let fit = self.placement.sphere;
        let wished = self.settings.head.as_ref();
        HeadReport {
            name: catalogued(&self.shells).map(|head| head.name),
            centre_mm: fit.sphere.centre,
            centre_is_fitted: self.placement.measured && wished.is_none_or(|head| head.centre_mm.is_none()),
            radius_mm: fit.sphere.radius,
            radius_is_fitted: self.placement.measured && wished.is_none_or(|head| head.radius_mm.is_none()),
            fit_rms_mm: fit.rms,
            fit_max_mm: fit.max,
            shells: self.shells.sized(fit.sphere.radius),
            unusual: self.settings.unusual_head,
            axes: self.placement.axes.axes.rows(),
        }
    }

    /// Electrodes with position and value.
    pub fn electrodes(&self) -> Vec<ElectrodeReport> {
        self.placement
            .electrodes
            .iter()
            .map(|e| ElectrodeReport { label: e.label.to_string(), position_mm: e.position_mm, used: e.used })
            .collect()
    }

    /// What was assumed and what did not match.
    pub fn notes(&self) -> Vec<Note> {
        self.notes.iter().map(Note::from).collect()
    }

    /// The report without its maps, with the populations that are kept.
    pub fn preamble(&self) -> Report {
        Report { suspects: self.asked_suspects(), ..self.facts() }
    }

    /// The same without what has to be fitted for it.
    fn facts(&self) -> Report {
        Report {
            format: "inward-report",
            version: 1,
            program: Program { name: "Inward", version: env!("CARGO_PKG_VERSION"), build: self.tables.build },
            inputs: self.tables.inputs.clone(),
            settings: self.settings.clone(),
            head: self.head(),
            electrodes: self.electrodes(),
            maps: Vec::new(),
            populations: self.whole_populations(),
            suspects: Vec::new(),
            notes: self.notes(),
            understood: self.understood(),
        }
    }

    /// What was made of the files.
    pub fn understood(&self) -> UnderstoodReport {
        let understood = &self.tables.understood;
        let labels = &self.placement.labels;
        let renamed = |(from, to): &(String, String)| Renamed { from: from.clone(), to: to.clone() };
        UnderstoodReport {
            files: understood.files.clone(),
            choices: understood.choices.iter().chain(&self.placement.choices).map(ChoiceReport::from).collect(),
            columns_are: understood.columns_are,
            times: understood.moments.clone(),
            labels: LabelsReport {
                matched: labels.matched,
                renamed: labels.renamed.iter().map(renamed).collect(),
                without_value: labels.without_value.clone(),
                without_position: labels.without_position.clone(),
                not_scalp: labels.not_scalp.clone(),
                interpolated: labels.interpolated.clone(),
                reference: labels.reference.clone(),
            },
        }
    }

    /// Fits one map, counted from 0.
    ///
    /// # Errors
    /// `map-index`. A map that cannot be fitted is no error: its report says why.
    pub fn fit(&self, index: usize) -> Result<MapReport, Error> {
        let mut maps = self.fit_range(index..index.saturating_add(1))?;
        maps.pop().ok_or_else(|| self.no_map(index))
    }

    /// Fits several maps that follow each other, which is quicker than one by one and gives the same digits.
    ///
    /// # Errors
    /// `map-index` if one of them does not exist.
    pub fn fit_range(&self, range: Range<usize>) -> Result<Vec<MapReport>, Error> {
        self.check(&range)?;
        let outcomes = range.clone().zip(self.outcomes(range));
        Ok(outcomes.map(|(index, outcome)| self.reported(index, outcome)).collect())
    }

    /// The same in numbers alone, eight for each map: canonical position in scalp radii, moment with the size and the sign
    /// that the report gives it, residual variance, and 0 for a minimum, 1 on the boundary, 2 for a search that was cut
    /// short. Not a number where a map cannot be fitted.
    ///
    /// # Errors
    /// `map-index` if one of them does not exist.
    pub fn fits(&self, range: Range<usize>) -> Result<Vec<[f64; 8]>, Error> {
        self.check(&range)?;
        Ok(self.batches(range, |index, _, fit| {
            let Some(fit) = fit else { return [f64::NAN; 8] };
            let size = self.strength_factor(index);
            let ([x, y, z], [mx, my, mz]) = (fit.position.0, (fit.moment * (self.sign(index) * size)).0);
            let stopped = match fit.stopped {
                Stopped::Converged => 0.0,
                Stopped::Boundary => 1.0,
                Stopped::IterationLimit => 2.0,
            };
            [x, y, z, mx, my, mz, fit.residual_variance, stopped]
        }))
    }

    /// Adds what `what` names to the fit of one map, besides what the settings name. Populations that are not kept are drawn
    /// first, which takes seconds.
    ///
    /// # Errors
    /// Those of [`Self::fit`].
    pub fn assess(&self, index: usize, what: &[Assessment]) -> Result<MapReport, Error> {
        let mut map = self.fit(index)?;
        if let MapReport::Fitted(map) = &mut map {
            self.assessed(index, map, what);
        }
        Ok(map)
    }

    /// The answer for one map, counted from 0, in words and numbers; `map` is its fit.
    pub fn sheet(&self, index: usize, map: &FittedMap) -> Sheet {
        let mut used = map.measured.iter().zip(&map.projected).map(|(d, p)| (*d, *p));
        let mut left_out = self.left_out(index, map).into_iter();
        let sites: Vec<Site> = self
            .placement
            .electrodes
            .iter()
            .zip(self.directions())
            .map(|(electrode, direction)| {
                let values = if electrode.used { used.next() } else { left_out.next() };
                let (measured, projected) = values.unwrap_or((f64::NAN, f64::NAN));
                Site { label: electrode.label.as_str(), direction, used: electrode.used, measured, projected }
            })
            .collect();
        Sheet::new(map, &self.head(), &sites, self.settings.map_unit)
    }

    /// A fitted map as a line of a table.
    pub fn row(&self, map: &FittedMap) -> MapRow {
        MapRow::new(map, self.placement.sphere.sphere.radius, self.settings.map_unit)
    }

    /// Small rasters of maps as they are measured, signs turned as the settings say, by one matrix for all maps; `None` if
    /// the electrodes cannot carry an interpolation.
    ///
    /// # Errors
    /// `map-index`, and `settings-unknown` for a size beyond [`THUMBNAIL_SIZES`].
    pub fn thumbnails(&self, indexes: &[usize], size: usize) -> Result<Option<Thumbnails>, Error> {
        if let Some(&index) = indexes.iter().find(|index| **index >= self.count()) {
            return Err(self.no_map(index));
        }
        if !THUMBNAIL_SIZES.contains(&size) {
            let [least, most] = [THUMBNAIL_SIZES.start(), THUMBNAIL_SIZES.end()];
            return Err(Settings::unknown(format!("the size of thumbnails is a whole number from {least} to {most}")));
        }
        let Some(spline) = self.spline() else { return Ok(None) };
        let mut kept = self.raster.lock().unwrap_or_else(PoisonError::into_inner);
        let electrodes = || self.placement.electrodes.iter().zip(self.directions()).map(|(e, d)| (d, e.used));
        let raster = match kept.take().filter(|raster| raster.size() == size) {
            Some(raster) => raster,
            None => Raster::new(spline, electrodes(), size),
        };
        let raster = kept.insert(raster);
        let mut thumbnails = Thumbnails {
            size,
            rim_degrees: raster.rim_degrees(),
            outline: raster.outline().to_vec(),
            measured: Vec::new(),
            limit: Vec::new(),
        };
        for &index in indexes {
            let (pixels, limit) = match self.normal(index) {
                Some((map, limit)) => {
                    let sign = self.sign(index);
                    let map: Vec<f64> = map.iter().map(|value| sign * value).collect();
                    (raster.paint(spline, &map), limit)
                }
                None => (vec![f32::NAN; size * size], 0.0),
            };
            thumbnails.measured.push(pixels);
            thumbnails.limit.push(limit);
        }
        Ok(Some(thumbnails))
    }

    /// See [`normalise`]; `None` for a map that lacks values, too.
    fn normal(&self, index: usize) -> Option<(Vec<f64>, f64)> {
        normalise(&self.values(index).ok()?)
    }

    fn spline(&self) -> Option<&Spline> {
        self.spline.get_or_init(|| Spline::new(self.fitter.field().directions().to_vec())).as_ref()
    }

    /// The picture of one fitted map; `None` if the electrodes cannot carry an interpolation.
    pub fn picture(&self, map: &FittedMap) -> Option<Picture> {
        let spline = self.spline()?;
        let electrodes = self
            .placement
            .electrodes
            .iter()
            .zip(self.directions())
            .map(|(e, direction)| (e.label.to_string(), direction, e.used))
            .collect();
        let layers = [&map.measured[..], &map.projected, &map.residual];
        let limit = map.scale_limit();
        let position = Some(map.dipole.canonical_mm).filter(|position| position.norm() > CENTRE_MM);
        Some(Picture::new(spline, electrodes, layers, limit, position, map.dipole.canonical_direction))
    }

    /// Unit directions of all electrodes from the centre.
    fn directions(&self) -> Vec<Vec3> {
        let direction = |e: &Placed| self.placement.canonical(e.position_mm).unit().unwrap_or_default();
        self.placement.electrodes.iter().map(direction).collect()
    }

    /// What the map has at the electrodes that are left out, and what the dipole predicts there, both referred to the mean
    /// of the used ones.
    fn left_out(&self, index: usize, map: &FittedMap) -> Vec<(f64, f64)> {
        let Some(values) = self.values(index).ok() else { return Vec::new() };
        let reference = mean(&values);
        let column = self.tables.understood.maps.values.column(index);
        let sign = self.sign(index);
        let out = || self.placement.electrodes.iter().zip(self.directions()).filter(|(e, _)| !e.used);
        let dipole = &map.dipole;
        let unit = self.settings.map_unit.microvolts() * map.activation_sd.unwrap_or(1.0);
        let position = dipole.canonical_mm * (1.0 / self.placement.sphere.sphere.radius);
        let moment = dipole.canonical_direction * (dipole.strength / unit);
        let directions: Vec<Vec3> = out().map(|(_, direction)| direction).collect();
        if directions.is_empty() {
            return Vec::new();
        }
        let predicted = self.fitter.project_elsewhere(directions, position, moment);
        out().zip(predicted).map(|((e, _), predicted)| (sign * (column[e.row] - reference), predicted)).collect()
    }

    /// −1 for a map whose sign is turned.
    fn sign(&self, index: usize) -> f64 {
        if self.settings.flipped(index) { -1.0 } else { 1.0 }
    }

    fn check(&self, range: &Range<usize>) -> Result<(), Error> {
        if range.end > self.count() { Err(self.no_map(range.end.saturating_sub(1))) } else { Ok(()) }
    }

    fn no_map(&self, index: usize) -> Error {
        Finding::new(Code::MapIndex).at(Place::input("maps")).with("index", index).with("count", self.count()).into()
    }

    fn outcomes(&self, range: Range<usize>) -> Vec<Result<FittedMap, Error>> {
        self.batches(range, |index, map, fit| {
            let map = map.as_ref().map_err(Error::clone)?;
            let fit = fit.ok_or_else(|| self.constant(index))?;
            Ok(self.fitted(index, map, &fit))
        })
    }

    /// What `make` makes of each map, by its values at the used electrodes and the fit that it may have.
    fn batches<T>(
        &self,
        range: Range<usize>,
        make: impl Fn(usize, &Result<Vec<f64>, Error>, Option<Fit>) -> T,
    ) -> Vec<T> {
        let mut made = Vec::with_capacity(range.len());
        for first in range.clone().step_by(BATCH) {
            let batch = first..range.end.min(first + BATCH);
            let values: Vec<Result<Vec<f64>, Error>> = batch.clone().map(|index| self.values(index)).collect();
            let readable: Vec<&[f64]> = values.iter().flatten().map(Vec::as_slice).collect();
            let mut fits = self.fitter.fit_batch(&readable).into_iter();
            made.extend(batch.zip(&values).map(|(index, map)| {
                let fit = map.as_ref().ok().and_then(|_| fits.next().flatten());
                make(index, map, fit)
            }));
        }
        made
    }

    fn reported(&self, index: usize, outcome: Result<FittedMap, Error>) -> MapReport {
        match outcome {
            Ok(mut map) => {
                self.assessed(index, &mut map, &self.settings.assess);
                MapReport::Fitted(Box::new(map))
            }
            Err(error) => MapReport::Failed {
                name: self.tables.understood.maps.names[index].clone(),
                error: Box::new((&error).into()),
            },
        }
    }

    /// Values of a map at the used electrodes, in its unit.
    fn values(&self, index: usize) -> Result<Vec<f64>, Error> {
        let column = self.tables.understood.maps.values.column(index);
        let values: Vec<f64> = self.placement.used().map(|e| column[e.row]).collect();
        let missing: Vec<String> = self
            .placement
            .used()
            .zip(&values)
            .filter(|(_, value)| value.is_nan())
            .map(|(electrode, _)| electrode.label.to_string())
            .collect();
        if missing.is_empty() {
            return Ok(values);
        }
        let name = &self.tables.understood.maps.names[index];
        let place = Place { label: missing.first().cloned(), map: Some(name.clone()), ..Place::input("maps") };
        let finding = Finding::new(Code::MapIncomplete).at(place).with("map", name.as_str()).with("labels", missing);
        Err(self.tables.understood.in_file(finding.into()))
    }

    fn constant(&self, index: usize) -> Error {
        let name = &self.tables.understood.maps.names[index];
        let place = Place { map: Some(name.clone()), ..Place::input("maps") };
        self.tables.understood.in_file(Finding::new(Code::MapConstant).at(place).with("map", name.as_str()).into())
    }

    /// The map is fitted as it is given; a turned sign turns what comes of it, so that no digit of the position changes.
    fn fitted(&self, index: usize, map: &[f64], fit: &Fit) -> FittedMap {
        let sign = self.sign(index);
        let moment = fit.moment * sign;
        let measured: Vec<f64> = average_referenced(map).into_iter().map(|value| sign * value).collect();
        let projected = self.fitter.project(fit.position, moment);
        let residual = measured.iter().zip(&projected).map(|(d, p)| d - p).collect();
        let activation_sd = self.settings.activation_sd(index);
        FittedMap {
            name: self.tables.understood.maps.names[index].clone(),
            flipped: self.settings.flipped(index),
            activation_sd,
            residual_variance: fit.residual_variance,
            variance_explained: 1.0 - fit.residual_variance,
            adjusted_rv: adjusted_residual_variance(fit.residual_variance, map.len()),
            degrees_of_freedom: degrees_of_freedom(map.len()),
            dipole: self.equivalent_dipole(fit, moment, activation_sd),
            fit: SearchReport { stopped_because: fit.stopped, evaluations: fit.evaluations },
            measured,
            projected,
            residual,
            region: None,
            populations: None,
            verdict: None,
            alternatives: None,
            influence: None,
            what_if: None,
        }
    }

    /// What a moment is multiplied by to be a strength as reports have it.
    fn strength_factor(&self, index: usize) -> f64 {
        self.settings.map_unit.microvolts() * self.settings.activation_sd(index).unwrap_or(1.0)
    }

    fn equivalent_dipole(&self, found: &Fit, moment: Vec3, activation_sd: Option<f64>) -> EquivalentDipole {
        /// Half the width of the midline.
        const MIDLINE_MM: f64 = 5.0;
        /// Distance from the centre below which the radius is rounding.
        const RADIUS_MM: f64 = 1.0;
        let sphere = self.placement.sphere.sphere;
        let canonical_mm = found.position * sphere.radius;
        let distance = canonical_mm.norm();
        let direction = moment.unit().unwrap_or_default();
        let unit = self.settings.map_unit;
        EquivalentDipole {
            position_mm: self.placement.table(canonical_mm),
            canonical_mm,
            nearest_site: nearest_site(canonical_mm).filter(|_| distance > CENTRE_MM),
            side: match canonical_mm[0] {
                x if x > MIDLINE_MM => "right",
                x if x < -MIDLINE_MM => "left",
                _ => "midline",
            },
            direction: self.placement.axes.axes.to_table(direction),
            canonical_direction: direction,
            polarity: self.settings.polarity,
            strength: moment.norm() * unit.microvolts() * activation_sd.unwrap_or(1.0),
            strength_unit: if unit == MapUnit::Relative { "relative" } else { "nAm" },
            strength_comparable: unit != MapUnit::Relative || activation_sd.is_some(),
            eccentricity: found.position.norm() / self.shells.brain_ratio(),
            depth_mm: self.shells.inner_skull_ratio() * sphere.radius - distance,
            radial_share: canonical_mm.unit().filter(|_| distance > RADIUS_MM).map(|radial| {
                let along: f64 = direction.dot(radial);
                along * along
            }),
            at_boundary: found.at_boundary,
        }
    }

    fn note_the_rest(&mut self) {
        // Row by row, as the values lie in memory; a map that lacks a value is not a number and passes no comparison.
        let mut sums = vec![[0.0f64; 2]; self.count()];
        for electrode in self.placement.used() {
            for ([sum, squares], value) in sums.iter_mut().zip(self.tables.understood.maps.values.row(electrode.row)) {
                *sum += value;
                *squares += value * value;
            }
        }
        let used = self.fitter.field().count() as f64;
        let off = |[sum, squares]: &&[f64; 2]| (sum / used).abs() > 1e-6 * (squares / used).sqrt();
        let referenced = sums.iter().filter(off).count();
        if referenced > 0 {
            self.notes.push(Finding::new(Code::AverageReferenced).with("maps", referenced).with("count", self.count()));
        }
        if let Some(name) = self.tables.understood.maps.names.iter().find(|name| hints_at_laplacian(name))
            && self.settings.laplacian.is_none()
        {
            let place = Place { map: Some(name.clone()), ..Place::input("maps") };
            self.notes.push(Finding::new(Code::LaplacianSuspected).at(place).with("map", name.as_str()));
        }
        if self.settings.unusual_head {
            let given = self.settings.head.as_ref().is_some_and(|head| head.shells.is_some());
            self.notes.push(Finding::new(Code::UnusualHead).with("shells", if given { "given" } else { "standard" }));
        }
        if self.settings.map_unit == MapUnit::Relative {
            let activations = (0..self.count()).filter(|map| self.settings.activation_sd(*map).is_some()).count();
            let note = Finding::new(Code::UnitRelative).with("activations", activations).with("count", self.count());
            self.notes.push(note);
        }
        if self.fitter.field().images().is_none() {
            self.notes.push(Finding::new(Code::SeriesOnly));
        }
    }
}

/// The average-referenced map over its largest absolute value, and that value; `None` for a map that is constant to
/// rounding.
fn normalise(map: &[f64]) -> Option<(Vec<f64>, f64)> {
    /// Of the largest value as given: what no fit takes for a map either.
    const ROUNDING: f64 = 1e-12;
    let largest = |map: &[f64]| map.iter().fold(0.0f64, |most, value| most.max(value.abs()));
    let centred = average_referenced(map);
    let limit = largest(&centred);
    let told = limit > ROUNDING * largest(map) && limit.is_finite();
    told.then(|| (centred.iter().map(|value| value / limit).collect(), limit))
}
