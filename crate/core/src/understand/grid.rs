use super::Decimal;
use super::positions::is_axis_name;
use super::role::is_head;
use crate::electrode::{Kind, Label, Reading};
use crate::finding::{Error, Origin, Place};
use crate::math::sort_by_number;
use crate::read::{
    Body, Cells, Part, expect_number, has_decimal_comma, is_label_name, is_missing, number, number_with_comma,
};
use core::ops::Range;
use ndarray::ArrayView2;
use std::collections::{HashMap, HashSet};

/// Rows that are looked at to find words.
const SAMPLE: usize = 64;

/// A part of a file as rows and named columns of numbers and words.
#[derive(Clone, Debug)]
pub(super) struct Grid<'a> {
    /// Number of the file.
    pub file: usize,
    /// Name of the part.
    pub part: Option<&'a str>,
    body: Fields<'a>,
    /// Names of the columns that do not stand in a row above them.
    names: Vec<String>,
    pub header: Header,
    pub decimal: Option<(Decimal, Origin)>,
}

#[derive(Clone, Debug)]
enum Fields<'a> {
    /// Fields of text from a row on.
    Text(&'a Cells, usize),
    Numbers(ArrayView2<'a, f64>),
    /// Columns of equally many numbers or words.
    Columns(Vec<Column<'a>>),
    /// Fields of text whose columns, from one on, are the rows here.
    Turned(&'a Cells, usize),
}

#[derive(Clone, Copy, Debug)]
enum Column<'a> {
    Numbers(ArrayView2<'a, f64>),
    Words(&'a [String]),
}

/// Whether names stand above the columns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Header {
    /// No.
    Absent,
    /// Yes: by a usual name, or by the format.
    Found,
    /// Yes, by the look of the first row.
    Assumed,
}

impl<'a> Grid<'a> {
    /// The grids of a file. Columns that its format keeps apart, words and vectors of one length and one outer name, are
    /// put side by side again.
    pub fn of(file: usize, parts: &'a [Part], decimal: Option<Decimal>) -> Vec<Self> {
        let mut together: HashMap<(Option<&str>, usize), Vec<&'a Part>> = HashMap::new();
        for part in parts {
            if let Some(key) = beside_key(part) {
                together.entry(key).or_default().push(part);
            }
        }
        let mut grids = Vec::new();
        for part in parts {
            let group = beside_key(part).and_then(|key| together.get_mut(&key)).filter(|group| group.len() != 1);
            match group.map(std::mem::take) {
                None => grids.extend(Self::single(file, part, decimal)),
                // Where its first one stands.
                Some(beside) if beside.is_empty() => {}
                Some(beside) => grids.push(Self::beside(file, &beside)),
            }
        }
        grids
    }

    fn single(file: usize, part: &'a Part, decimal: Option<Decimal>) -> Option<Self> {
        let name = part.name.as_deref();
        let grid = |body| Self { file, part: name, body, names: Vec::new(), header: Header::Absent, decimal: None };
        Some(match &part.body {
            Body::Record(_) => return None,
            Body::Words(words) => grid(Fields::Columns(vec![Column::Words(words)])),
            Body::Numbers(numbers) => grid(Fields::Numbers(numbers.view())),
            Body::Cells(cells) => {
                let mut grid = grid(Fields::Text(cells, 0));
                // Names above the columns may look like numbers of another kind.
                let found = |first: usize| {
                    let mark = decimal_mark(cells, first..cells.height());
                    decimal.map_or((mark.unwrap_or(Decimal::Point), Origin::Found), |wish| (wish, Origin::Setting))
                };
                grid.decimal = Some(found(1));
                grid.header = grid.first_row(cells);
                if grid.header == Header::Absent {
                    grid.decimal = Some(found(0));
                } else {
                    grid.body = Fields::Text(cells, 1);
                }
                grid.upright(cells)
            }
        })
    }

    /// The same, turned where electrodes lie in its columns: labels alone in one row, or x, y and z below them.
    fn upright(self, cells: &'a Cells) -> Self {
        let site = |name: &str| matches!(Reading::of(&Label::new(name)).kind, Kind::Site(_));
        let words = |row: usize| cells.row(row).all(|field| !is_missing(field) && self.parse(field).is_none());
        if cells.height() == 1
            && cells.width() > 1
            && words(0)
            && 2 * cells.row(0).filter(|n| site(n)).count() > cells.width()
        {
            return Self { body: Fields::Turned(cells, 0), header: Header::Absent, ..self };
        }
        let whole = |first: usize| {
            let value =
                |row: usize, column: usize| is_missing(self.word(row, column)) || self.number(row, column).is_some();
            (first..self.width()).all(|column| !self.name(column).is_empty() && (0..3).all(|row| value(row, column)))
        };
        if self.header == Header::Absent || self.height() != 3 || self.width() < 5 {
            return self;
        }
        let named = ['x', 'y', 'z'].into_iter().enumerate().all(|(row, axis)| is_axis_name(self.word(row, 0), axis));
        if named && whole(1) {
            let names = ["label", "x", "y", "z"].map(String::from).to_vec();
            return Self { names, body: Fields::Turned(cells, 1), header: Header::Found, ..self };
        }
        if !cells.is_headed() || !whole(0) {
            return self;
        }
        let turned = Self { body: Fields::Turned(cells, 0), header: Header::Absent, ..self.clone() };
        if is_head(&turned, [1, 2, 3]) { turned } else { self }
    }

    /// Vectors side by side, named by their parts.
    fn beside(file: usize, parts: &[&'a Part]) -> Self {
        let columns = parts.iter().filter_map(|part| match &part.body {
            Body::Numbers(numbers) => Some(Column::Numbers(numbers.view())),
            Body::Words(words) => Some(Column::Words(words)),
            _ => None,
        });
        let names = parts.iter().map(|part| split_name(part).1.to_owned()).collect();
        let part = parts.first().and_then(|part| split_name(part).0);
        Self { file, part, body: Fields::Columns(columns.collect()), names, header: Header::Found, decimal: None }
    }

    pub fn width(&self) -> usize {
        match &self.body {
            Fields::Text(cells, _) => cells.width(),
            Fields::Numbers(numbers) => numbers.ncols(),
            Fields::Columns(columns) => columns.len(),
            Fields::Turned(cells, _) => cells.height(),
        }
    }

    pub fn height(&self) -> usize {
        match &self.body {
            Fields::Text(cells, first) => cells.height().saturating_sub(*first),
            Fields::Numbers(numbers) => numbers.nrows(),
            Fields::Columns(columns) => columns.first().map_or(0, |column| column.height()),
            Fields::Turned(cells, first) => cells.width().saturating_sub(*first),
        }
    }

    /// Whether it can only hold numbers, so that labels must come from elsewhere.
    pub fn is_numeric(&self) -> bool {
        matches!(self.body, Fields::Numbers(_))
    }

    /// Name of the part, without that of what it stands in.
    pub fn inner_name(&self) -> &str {
        self.part.map_or("", |part| part.rsplit('.').next().unwrap_or(part))
    }

    /// Whether it is a list of words.
    pub fn is_words(&self) -> bool {
        matches!(&self.body, Fields::Columns(columns) if matches!(columns.as_slice(), [Column::Words(_)]))
    }

    pub fn names(&self) -> impl Iterator<Item = &str> {
        (0..self.width()).map(|column| self.name(column))
    }

    pub fn name(&self, column: usize) -> &str {
        match &self.body {
            Fields::Text(cells, 1) => cells.field(0, column),
            _ => self.names.get(column).map_or("", String::as_str),
        }
    }

    /// Name of a column, or its number.
    pub fn written(&self, column: usize) -> String {
        match self.name(column) {
            "" => (column + 1).to_string(),
            name => name.to_owned(),
        }
    }

    /// Line of a row of the file, from 1; the number of the row where there are no lines.
    pub fn line(&self, row: usize) -> usize {
        match &self.body {
            Fields::Text(cells, first) => cells.line(row + first),
            Fields::Turned(cells, _) => cells.line(0),
            _ => row + 1,
        }
    }

    /// Line of the header, or else of the first row.
    pub fn first_line(&self) -> usize {
        match &self.body {
            Fields::Text(cells, _) | Fields::Turned(cells, _) => cells.line(0),
            _ => 1,
        }
    }

    /// The text of a field; empty for numbers of a binary file.
    pub fn word(&self, row: usize, column: usize) -> &str {
        match &self.body {
            Fields::Text(cells, first) => cells.field(row + first, column),
            Fields::Turned(cells, first) => cells.field(column, row + first),
            Fields::Numbers(_) => "",
            Fields::Columns(columns) => match columns.get(column) {
                Some(Column::Words(words)) => words.get(row).map_or("", String::as_str),
                _ => "",
            },
        }
    }

    /// The number of a field, of whatever size.
    pub fn number(&self, row: usize, column: usize) -> Option<f64> {
        let plain = |matrix: &ArrayView2<'_, f64>, column| matrix.get((row, column)).copied().filter(|v| !v.is_nan());
        match &self.body {
            Fields::Text(..) | Fields::Turned(..) => self.parse(self.word(row, column)),
            Fields::Numbers(numbers) => plain(numbers, column),
            Fields::Columns(columns) => match columns.get(column) {
                Some(Column::Numbers(numbers)) => plain(numbers, 0),
                _ => None,
            },
        }
    }

    fn comma(&self) -> bool {
        self.decimal.is_some_and(|(decimal, _)| decimal == Decimal::Comma)
    }

    fn parse(&self, field: &str) -> Option<f64> {
        if self.comma() { number_with_comma(field) } else { number(field) }
    }

    /// The number that a field must hold, NaN where it says that there is none.
    ///
    /// # Errors
    /// `number-expected`, `number-range` at the place.
    pub fn value(&self, row: usize, column: usize, place: impl FnOnce() -> Place) -> Result<f64, Error> {
        match &self.body {
            Fields::Text(..) | Fields::Turned(..) => {
                let field = self.word(row, column);
                if is_missing(field) { Ok(f64::NAN) } else { expect_number(field, self.comma(), place) }
            }
            Fields::Columns(columns) if matches!(columns.get(column), Some(Column::Words(_))) => {
                let word = self.word(row, column);
                if is_missing(word) { Ok(f64::NAN) } else { expect_number(word, false, place) }
            }
            _ => Ok(self.number(row, column).unwrap_or(f64::NAN)),
        }
    }

    /// The column whose name fits.
    pub fn column(&self, fits: impl Fn(&str) -> bool) -> Option<usize> {
        self.names().position(|name| !name.is_empty() && fits(name))
    }

    /// Whether a column holds any number.
    pub fn has_numbers(&self, column: usize) -> bool {
        (0..self.height()).any(|row| self.number(row, column).is_some())
    }

    /// Whether a column counts the rows.
    pub fn counts(&self, column: usize) -> bool {
        let first = self.number(0, column).filter(|first| *first == 0.0 || *first == 1.0);
        let follows = |row: usize| self.number(row, column) == first.map(|first| first + row as f64);
        first.is_some() && self.height() > 2 && (0..self.height()).all(follows)
    }

    /// Whether a column numbers the rows: it counts them, or, before the labels, holds whole numbers that only rise or
    /// only fall, as where rows were picked or sorted.
    pub fn numbers_rows(&self, column: usize, label: Option<usize>) -> bool {
        let number = |row: usize| self.number(row, column).filter(|number| number.fract() == 0.0);
        let ordered = |way: f64| {
            (1..self.height()).all(|row| number(row - 1).zip(number(row)).is_some_and(|(a, b)| way * a < way * b))
        };
        self.counts(column)
            || label.is_some_and(|label| column < label) && self.height() > 2 && (ordered(1.0) || ordered(-1.0))
    }

    /// The first column, where it holds each number from 1, or from 0, once: a table without words may name its electrodes so.
    pub fn numbered(&self) -> Option<usize> {
        let mut numbers: Vec<f64> = (0..self.height()).map_while(|row| self.number(row, 0)).collect();
        let all = numbers.len() == self.height() && self.width() > 1 && self.words().is_none();
        sort_by_number(&mut numbers, |number| *number);
        let first = numbers.first().copied().filter(|first| *first == 0.0 || *first == 1.0)?;
        let counts = numbers.iter().enumerate().all(|(index, number)| *number == first + index as f64);
        (all && counts && numbers.len() > 2).then_some(0)
    }

    fn is_word(&self, row: usize, column: usize) -> bool {
        let word = self.word(row, column);
        !is_missing(word) && self.parse(word).is_none()
    }

    /// The column of labels by its content: the one in which most fields are words; of such, the one with most different
    /// ones; of such, the first.
    pub fn words(&self) -> Option<usize> {
        let rows = self.height().min(SAMPLE);
        let count = |column: usize| (0..rows).filter(|&row| self.is_word(row, column)).count();
        // Beyond the first hundreds only numbers follow; a table on its side is not searched to its end.
        let columns = self.width().min(crate::read::MOST_ELECTRODES);
        let counts: Vec<usize> = (0..columns).map(count).collect();
        let most = counts.iter().copied().max().filter(|&most| most > 0)?;
        let mut best = None;
        for column in (0..columns).filter(|&column| counts.get(column) == Some(&most)) {
            let words: HashSet<&str> = (0..rows).map(|row| self.word(row, column)).collect();
            if best.is_none_or(|(_, different)| words.len() > different) {
                best = Some((column, words.len()));
            }
        }
        best.map(|(column, _)| column)
    }

    /// The column of labels, by name or by content.
    pub fn label_column(&self) -> Option<usize> {
        self.column(is_label_name).or_else(|| self.words())
    }

    /// Whether the first row holds names: when it holds a usual name of the label column, or x, y and z; else when it holds no number,
    /// numbers follow, and it does not look like a spoilt row of data; else when it holds nothing above the labels and
    /// numbers that rise, as programs write that number their columns.
    fn first_row(&self, cells: &'a Cells) -> Header {
        let axes = ['x', 'y', 'z'].into_iter().all(|axis| cells.row(0).any(|name| is_axis_name(name, axis)));
        if cells.is_headed() || axes || cells.row(0).any(is_label_name) {
            return Header::Found;
        }
        let is_number = |field: &str| self.parse(field).is_some();
        let numbers = |row: usize| cells.row(row).any(is_number);
        if !(1..cells.height()).any(numbers) {
            return Header::Absent;
        }
        let mut below = self.clone();
        below.body = Fields::Text(cells, 1);
        if numbers(0) {
            let above: Option<Vec<f64>> = cells.row(0).skip(1).map(|field| self.parse(field)).collect();
            let rises = above.is_some_and(|row| row.windows(2).all(|pair| pair.first() < pair.last()));
            let rises = rises && (cells.width() > 2 || cells.field(0, 1) == "0");
            let corner = cells.field(0, 0).is_empty() && below.words() == Some(0);
            return if corner && rises { Header::Assumed } else { Header::Absent };
        }
        // A spoilt row of data has the label of a site, or a field that begins like a number.
        let label = below.words().map_or("", |column| cells.field(0, column));
        let like_number =
            |field: &str| field.trim_start_matches(['+', '-', '.']).starts_with(|c: char| c.is_ascii_digit());
        let site = matches!(Reading::of(&Label::new(label)).kind, Kind::Site(_));
        let spoilt = site || cells.row(0).any(|field| is_missing(field) && !field.is_empty() || like_number(field));
        if spoilt && !label.is_empty() { Header::Absent } else { Header::Assumed }
    }
}

impl Column<'_> {
    fn height(self) -> usize {
        match self {
            Self::Numbers(numbers) => numbers.nrows(),
            Self::Words(words) => words.len(),
        }
    }
}

/// The outer and the inner name of a part.
fn split_name(part: &Part) -> (Option<&str>, &str) {
    match part.name.as_deref().unwrap_or_default().rsplit_once('.') {
        Some((outer, inner)) => (Some(outer), inner),
        None => (None, part.name.as_deref().unwrap_or_default()),
    }
}

/// What parts have in common that belong side by side: the outer name and the length of vectors.
fn beside_key(part: &Part) -> Option<(Option<&str>, usize)> {
    let length = match &part.body {
        Body::Words(words) => words.len(),
        Body::Numbers(numbers) if numbers.ncols() == 1 => numbers.nrows(),
        _ => return None,
    };
    (length > 1 && part.name.is_some()).then(|| (split_name(part).0, length))
}

/// A comma is the decimal mark where numbers of these rows have commas and none has a point; `None` where none has either.
fn decimal_mark(cells: &Cells, rows: Range<usize>) -> Option<Decimal> {
    if !cells.contains(',') {
        return None;
    }
    let mut commas = None;
    for field in rows.flat_map(|row| cells.row(row)) {
        if field.contains('.') && number(field).is_some() {
            return Some(Decimal::Point);
        }
        commas = commas.or(has_decimal_comma(field).then_some(Decimal::Comma));
    }
    commas
}
