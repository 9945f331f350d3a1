use super::{MOST_ELECTRODES, SIZES};
use crate::electrode::{Label, standard_position};
use crate::finding::{Code, Error, Finding, Place};
use std::borrow::Cow;

/// A table of text fields.
#[derive(Clone, Debug, PartialEq)]
pub struct Table<'a> {
    /// Names of the columns, where the first row holds names.
    pub header: Option<Row<'a>>,
    /// Rows of equally many fields.
    pub rows: Vec<Row<'a>>,
    /// Number of columns.
    pub width: usize,
    /// Whether the header bears no usual name and was told by its content.
    pub header_assumed: bool,
}

/// A line of a table.
#[derive(Clone, Debug, PartialEq)]
pub struct Row<'a> {
    /// Line in the text, from 1.
    pub line: usize,
    /// Its fields.
    pub fields: Vec<Field<'a>>,
}

/// A field without the blanks and quotes around it: a piece of the text unless quotes had to be undone.
pub type Field<'a> = Cow<'a, str>;

impl Row<'_> {
    /// The text of a field; empty where the row has none.
    pub fn field(&self, column: usize) -> &str {
        self.fields.get(column).map_or("", AsRef::as_ref)
    }
}

#[derive(Clone, Copy, PartialEq)]
enum Delimiter {
    Mark(char),
    Blanks,
}

impl<'a> Table<'a> {
    /// Splits text into rows and fields. The delimiter is the first of tab, semicolon and comma that stands in every
    /// line of the first twenty outside quotes; otherwise runs of blanks. Empty lines and lines that begin with `#` or
    /// `%` are passed over. The first row is a header when it holds a usual name of the label column; else when it holds
    /// no number, numbers follow, and it does not look like a spoilt row of data.
    ///
    /// # Errors
    /// `electrodes-too-many`; `table-ragged` at the first line with another number of fields than the first one.
    pub fn read(text: &'a str, input: &'static str) -> Result<Self, Error> {
        let lines: Vec<(usize, &'a str)> = text
            .split('\n')
            .flat_map(|line| line.strip_suffix('\r').unwrap_or(line).split('\r'))
            .enumerate()
            .map(|(index, line)| (index + 1, line))
            .filter(|(_, line)| {
                let line = line.trim_start();
                !line.is_empty() && !line.starts_with(['#', '%'])
            })
            .collect();
        // Before anything is split: a row is an electrode, or the header.
        if lines.len() > MOST_ELECTRODES + 1 {
            return Err(Finding::new(Code::ElectrodesTooMany)
                .at(Place::input(input))
                .with("found", lines.len())
                .with("most", MOST_ELECTRODES)
                .into());
        }
        let delimiter = delimiter(&lines);
        let mut rows: Vec<Row> =
            lines.iter().map(|&(line, text)| Row { line, fields: split(text, delimiter) }).collect();
        // A mark at the end of every line begins no column.
        while !rows.is_empty()
            && rows.iter().all(|row| row.fields.len() > 1 && row.fields.last().is_some_and(|field| field.is_empty()))
        {
            rows.iter_mut().for_each(|row| drop(row.fields.pop()));
        }
        let width = rows.first().map_or(0, |row| row.fields.len());
        for row in &rows {
            if row.fields.len() != width {
                return Err(Finding::new(Code::TableRagged)
                    .at(Place::line(input, row.line))
                    .with("found", row.fields.len())
                    .with("expected", width)
                    .into());
            }
        }
        let kind = rows.split_first().map_or(First::Data, |(first, rest)| first_row(first, rest, width));
        let header = (kind != First::Data).then(|| rows.remove(0));
        Ok(Self { header, rows, width, header_assumed: kind == First::Names })
    }

    /// The note that is due where the header had to be guessed.
    pub(super) fn notes(&self, input: &'static str) -> Vec<Finding> {
        let line = self.header.as_ref().map_or(1, |header| header.line);
        let note = Finding::new(Code::HeaderAssumed).at(Place::line(input, line));
        if self.header_assumed { vec![note] } else { Vec::new() }
    }

    /// Number of the column, from 0, whose name is one of `names`, without regard to case.
    pub fn column(&self, names: &[&str]) -> Option<usize> {
        let header = self.header.as_ref()?;
        header.fields.iter().position(|field| names.iter().any(|name| field.eq_ignore_ascii_case(name)))
    }

    /// Number of the column, from 0, that the header names as an axis: `x`, or `x` with a unit such as `x_mm`, `x (m)`.
    pub fn axis(&self, axis: char) -> Option<usize> {
        let named = |field: &Field<'_>| {
            let mut letters = field.chars();
            letters.next().is_some_and(|first| first.eq_ignore_ascii_case(&axis))
                && letters.next().is_none_or(|second| !second.is_alphanumeric())
        };
        self.header.as_ref()?.fields.iter().position(named)
    }

    /// Whether a column counts the rows.
    pub fn counts(&self, column: usize) -> bool {
        let first = self.rows.first().and_then(|row| number(row.field(column)));
        let follows = |(index, row): (usize, &Row<'_>)| number(row.field(column)) == first.map(|f| f + index as f64);
        first.is_some() && self.rows.len() > 2 && self.rows.iter().enumerate().all(follows)
    }

    /// Number of the column, from 0, in which most fields are words: neither a number nor missing. The first of equals.
    pub fn words(&self) -> Option<usize> {
        words(&self.rows, self.width)
    }
}

fn words(rows: &[Row<'_>], width: usize) -> Option<usize> {
    let is_word = |field: &str| !is_missing(field) && number(field).is_none();
    let count = |column: usize| rows.iter().filter(|row| is_word(row.field(column))).count();
    let counts: Vec<usize> = (0..width).map(count).collect();
    let most = counts.iter().copied().max().filter(|&most| most > 0)?;
    counts.iter().position(|&count| count == most)
}

/// The number that a field holds, of whatever size.
pub(super) fn number(field: &str) -> Option<f64> {
    // `parse` also takes words such as "inf" and "nan".
    let plain = field.bytes().all(|b| b.is_ascii_digit() || b"+-.eE".contains(&b));
    field.parse().ok().filter(|_| plain)
}

/// The number that a field must hold, or the error at its place.
pub(super) fn expect_number(field: &str, place: impl FnOnce() -> Place) -> Result<f64, Error> {
    let code = match number(field) {
        Some(value) if SIZES.contains(&value.abs()) => return Ok(value),
        // Zero as written, not a number too small to be held.
        Some(value) if value == 0.0 && !digits(field).any(|digit| digit != b'0') => return Ok(value),
        Some(_) => Code::NumberRange,
        None => Code::NumberExpected,
    };
    Err(Finding::new(code).at(place()).with("found", field).into())
}

/// The digits before the exponent.
fn digits(field: &str) -> impl Iterator<Item = u8> {
    field.bytes().take_while(|byte| !b"eE".contains(byte)).filter(u8::is_ascii_digit)
}

/// Whether a field says that there is no value.
pub(super) fn is_missing(field: &str) -> bool {
    ["", "n/a", "na", "nan", "-"].iter().any(|word| field.eq_ignore_ascii_case(word))
}

/// What a first row is.
#[derive(Clone, Copy, PartialEq)]
enum First {
    /// A row like the others.
    Data,
    /// Names of columns, one of them usual.
    Header,
    /// Names of columns by the look of it.
    Names,
}

fn first_row(first: &Row<'_>, rest: &[Row<'_>], width: usize) -> First {
    if first.fields.iter().any(|field| KNOWN_NAMES.iter().any(|name| field.eq_ignore_ascii_case(name))) {
        return First::Header;
    }
    let numbers = |row: &Row<'_>| row.fields.iter().filter(|field| number(field).is_some()).count();
    if numbers(first) > 0 || rest.iter().all(|row| numbers(row) == 0) {
        return First::Data;
    }
    // A spoilt row of data has the label of a site, or a field that begins like a number.
    let label = Label::new(words(rest, width).map_or("", |column| first.field(column)));
    let like_number = |field: &str| field.trim_start_matches(['+', '-', '.']).starts_with(|c: char| c.is_ascii_digit());
    let spoilt = standard_position(&label).is_some() || first.fields.iter().any(|f| is_missing(f) || like_number(f));
    if spoilt && !label.as_str().is_empty() { First::Data } else { First::Names }
}

/// Names that columns of labels and positions usually bear.
const KNOWN_NAMES: [&str; 8] = ["label", "labels", "name", "electrode", "electrodes", "channel", "channels", "site"];

/// Names of a column of labels.
pub(super) const LABEL_NAMES: &[&str] = &KNOWN_NAMES;

fn delimiter(lines: &[(usize, &str)]) -> Delimiter {
    let divides = |mark: char, line: &str| match line.contains('"') {
        true => split_quoted(line, Delimiter::Mark(mark)).len() > 1,
        false => line.contains(mark),
    };
    ['\t', ';', ',']
        .into_iter()
        .find(|&mark| lines.iter().take(20).all(|(_, line)| divides(mark, line)))
        .map_or(Delimiter::Blanks, Delimiter::Mark)
}

fn split(line: &str, delimiter: Delimiter) -> Vec<Field<'_>> {
    match delimiter {
        _ if line.contains('"') => split_quoted(line, delimiter),
        Delimiter::Mark(mark) => line.split(mark).map(|field| field.trim().into()).collect(),
        Delimiter::Blanks => line.split_whitespace().map(Into::into).collect(),
    }
}

fn split_quoted(line: &str, delimiter: Delimiter) -> Vec<Field<'_>> {
    let mut fields = Vec::new();
    let (mut field, mut quoted, mut begun) = (String::new(), false, false);
    let mut characters = line.chars().peekable();
    while let Some(character) = characters.next() {
        let ends = !quoted
            && match delimiter {
                Delimiter::Mark(mark) => character == mark,
                Delimiter::Blanks => character.is_whitespace(),
            };
        if ends {
            if begun || delimiter != Delimiter::Blanks {
                fields.push(core::mem::take(&mut field).trim().to_owned().into());
            }
            begun = false;
        } else if character == '"' && quoted && characters.peek() == Some(&'"') {
            characters.next();
            field.push('"');
        } else if character == '"' && (quoted || field.trim().is_empty()) {
            (quoted, begun) = (!quoted, true);
        } else {
            begun |= !character.is_whitespace();
            field.push(character);
        }
    }
    if begun || delimiter != Delimiter::Blanks {
        fields.push(field.trim().to_owned().into());
    }
    fields
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn splits_by_what_stands_in_every_line() {
        for text in ["a\t1\t2\nb\t3\t4", "a;1;2\r\nb;3;4\r\n", "a, 1,2\nb,3 ,4\n\n", "  a   1 2\n# note\nb 3\t4 "] {
            let table = Table::read(text, "maps").ok().filter(|t| t.header.is_none());
            let fields: Option<Vec<Vec<String>>> = table
                .map(|table| table.rows.iter().map(|row| row.fields.iter().map(|f| f.to_string()).collect()).collect());
            assert_eq!(
                fields,
                Some(vec![vec!["a".into(), "1".into(), "2".into()], vec!["b".into(), "3".into(), "4".into()]]),
                "{text:?}"
            );
        }
    }

    #[test]
    fn a_header_may_name_maps_by_numbers_but_never_has_to_be_there() {
        let header = |text: &str| Table::read(text, "maps").ok().map(|table| table.header.is_some());
        assert_eq!(header("Label,0,1\nCz,3,4"), Some(true));
        assert_eq!(header(",a,b\nCz,3,4"), Some(true));
        assert_eq!(header("Fz,1,2\nCz,3,4"), Some(false));
        assert_eq!(header("Fz\nCz"), Some(false));
        assert_eq!(header("site A,left,right\nCz,3,4"), Some(true));
        for spoilt in ["Fz,1;5,2", "X1,12uV,2uV", "X1,1.2.3,n/a", "Fz,a,b"] {
            assert_eq!(header(&format!("{spoilt}\nCz,3,4\nPz,5,6")), Some(false), "{spoilt}");
        }
    }

    #[test]
    fn marks_at_the_end_begin_no_column_and_axes_may_bear_units() {
        let table = |text: &'static str| Table::read(text, "maps").ok();
        assert_eq!(table("Cz,1,,\nFz,2,,").map(|table| table.width), Some(2));
        let axes = table("label,x_mm,Y (mm),z,zone\nCz,1,2,3,4");
        assert_eq!(
            axes.map(|table| ['x', 'y', 'z', 'l'].map(|axis| table.axis(axis))),
            Some([Some(1), Some(2), Some(3), None])
        );
        assert_eq!(table("7,Cz\n8,Fz\n9,Oz").map(|table| table.counts(0)), Some(true));
    }

    #[test]
    fn quotes_hold_delimiters_and_doubled_quotes() {
        let split = split("\"a, \"\"b\"\"\",1", Delimiter::Mark(','));
        assert_eq!(split, ["a, \"b\"", "1"]);
    }

    #[test]
    fn numbers_are_plain_and_of_a_size_to_compute_with() {
        assert_eq!(number("-1.5e-3"), Some(-0.0015));
        let code = |field: &str| expect_number(field, Place::default).map_err(|error| error.finding().code);
        assert_eq!(code("-0.000e7"), Ok(-0.0));
        for field in ["1e999", "-1e101", "1e-101", "1e-400"] {
            assert_eq!(code(field), Err(Code::NumberRange), "{field}");
        }
        assert_eq!(code("1,5"), Err(Code::NumberExpected));
        for not in ["inf", "NaN", "1,5", "0x10", "", "-"] {
            assert_eq!(number(not), None, "{not}");
        }
    }
}
