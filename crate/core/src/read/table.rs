use super::content::Cells;
use super::decimal::decimal;
use super::{MOST_MAPS, SIZES};
use crate::finding::{Code, Error, Finding, Origin, Place};
use std::borrow::Cow;
use std::collections::BTreeMap;

/// Most rows, and most columns: the most maps with room for names and for columns that are none.
const MOST_ROWS: usize = MOST_MAPS + 1024;

/// Lines that are looked at to tell what divides the fields.
const SAMPLE: usize = 20;

/// What divides the fields of a line.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Delimiter {
    /// A tab.
    Tab,
    /// A semicolon.
    Semicolon,
    /// A comma.
    Comma,
    /// Any number of blanks.
    Blanks,
    /// Nothing but the place in the line: fields stand in columns of characters between which every line is blank.
    Columns,
}

impl Delimiter {
    /// All of them, in the order in which they are looked for.
    pub const ALL: [Self; 5] = [Self::Tab, Self::Semicolon, Self::Comma, Self::Blanks, Self::Columns];

    /// Its name, as settings write it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Tab => "tab",
            Self::Semicolon => "semicolon",
            Self::Comma => "comma",
            Self::Blanks => "blanks",
            Self::Columns => "columns",
        }
    }

    fn mark(self) -> Option<char> {
        match self {
            Self::Tab => Some('\t'),
            Self::Semicolon => Some(';'),
            Self::Comma => Some(','),
            Self::Blanks | Self::Columns => None,
        }
    }
}

/// A table of a text, with what divides its fields and how that was told.
pub(super) struct Delimited {
    pub cells: Cells,
    pub delimiter: Delimiter,
    pub from: Origin,
    /// First and last of the lines before the table that belong to it no more than a title does.
    pub title: Option<(usize, usize)>,
}

/// Splits text into rows and fields, by what is wished or by what divides every one of the first twenty lines: a tab,
/// a semicolon, a comma that is not the decimal mark of most numbers, otherwise blanks. Lines may end in LF, CR or both. Empty lines
/// and lines that begin with `#` or `%` are passed over, unless the last one before the table holds the names of the
/// columns. Quoted fields may hold any of these marks, line breaks and doubled quotes.
///
/// The text is passed once to look and once to split, whatever it holds.
///
/// # Errors
/// `table-ragged` at the first line with another number of fields than most; `table-large`.
pub(super) fn read_table(text: &str, wish: Option<Delimiter>) -> Result<Delimited, Error> {
    let (delimiter, from) = match wish {
        Some(delimiter) => (delimiter, Origin::Setting),
        None => (sniffed(text), Origin::Found),
    };
    let columns = || Some((in_columns(text)?, Delimiter::Columns));
    let (mut rows, delimiter) = match delimiter {
        Delimiter::Columns => {
            columns().unwrap_or((Rows::split(text, Delimiter::Blanks, MOST_ROWS)?, Delimiter::Blanks))
        }
        Delimiter::Blanks if wish.is_none() => {
            let rows = Rows::split(text, delimiter, MOST_ROWS)?;
            let even = rows.counts.iter().all(|count| rows.counts.first() == Some(count));
            if even { (rows, delimiter) } else { columns().unwrap_or((rows, delimiter)) }
        }
        _ => (Rows::split(text, delimiter, MOST_ROWS)?, delimiter),
    };
    rows.drop_empty();
    let title = rows.square()?;
    let remark = rows.remark.take();
    let width = rows.counts.first().map_or(0, |&count| count as usize);
    let mut cells = Cells::from_packed(rows.text, rows.ends, rows.lines, width);
    if let Some((line, remark)) = remark {
        let names = Rows::split(&remark, delimiter, 1)?;
        let fields = || names.fields().map(|(_, field)| field);
        let usual = fields().any(is_label_name) && !cells.row(0).any(is_label_name);
        if usual && fields().count() == width {
            cells.put_first(line, fields());
        }
    }
    Ok(Delimited { cells, delimiter, from, title })
}

/// Names that a column of labels usually bears.
const LABEL_NAMES: [&str; 12] = [
    "label",
    "labels",
    "name",
    "names",
    "electrode",
    "electrodes",
    "channel",
    "channels",
    "site",
    "sensor",
    "chan",
    "ch",
];

/// Whether a column of this name usually holds labels: `Channel`, `Electrode name`, `ch_names`.
pub fn is_label_name(field: &str) -> bool {
    let usual = |word: &str| LABEL_NAMES.iter().any(|name| word.eq_ignore_ascii_case(name));
    field.len() < 32 && field.split([' ', '_', '-']).all(usual)
}

/// Whether a field says that there is no value.
pub fn is_missing(field: &str) -> bool {
    field.len() <= 4 && ["", "n/a", "na", "nan", "-", "null"].iter().any(|word| field.eq_ignore_ascii_case(word))
}

/// The number that a field holds, of whatever size, written with a decimal point.
pub fn number(field: &str) -> Option<f64> {
    // The minus sign of typesetters.
    if let Some(rest) = field.strip_prefix('\u{2212}') {
        return number(rest).filter(|_| rest.starts_with(|c: char| c == '.' || c.is_ascii_digit())).map(|value| -value);
    }
    decimal(field)
}

/// The same with a decimal comma.
pub fn number_with_comma(field: &str) -> Option<f64> {
    match field.split_once(',') {
        None => number(field),
        Some(_) if field.contains('.') => None,
        Some((whole, decimals)) => number(&[whole, decimals].join(".")),
    }
}

/// The number that a field must hold, or the error at its place.
///
/// # Errors
/// `number-expected`, `number-range`.
pub fn expect_number(field: &str, decimal_comma: bool, place: impl FnOnce() -> Place) -> Result<f64, Error> {
    let found = if decimal_comma { number_with_comma(field) } else { number(field) };
    let code = match found {
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
    field.bytes().take_while(|byte| !matches!(byte, b'e' | b'E')).filter(u8::is_ascii_digit)
}

/// Whether a field is a number only if its comma is a decimal mark: `-1,5`, `,5`, `1,5e-3`.
pub fn has_decimal_comma(field: &str) -> bool {
    field.contains(',') && number_with_comma(field).is_some()
}

fn sniffed(text: &str) -> Delimiter {
    let [tab, semicolon, comma, blanks, ..] = Delimiter::ALL;
    let sample = |delimiter| Rows::split(text, delimiter, SAMPLE).unwrap_or_default();
    let counts = |rows: &Rows| rows.counts.iter().skip(rows.titles()).copied().collect::<Vec<_>>();
    let even = |counts: &[u32]| counts.windows(2).all(|pair| pair.first() == pair.last());
    // The first mark that divides every line, unless another one divides them evenly into more, if the first does not, or
    // into more than twice as many; one after which quotes hold together what stands between them before one that tears it.
    // Wide lines are long: one way of dividing them is held at a time.
    let mut found: Option<(Delimiter, bool, Vec<u32>)> = None;
    for delimiter in [tab, semicolon, comma, blanks] {
        let rows = sample(delimiter);
        let (stray, counts) = (rows.stray, counts(&rows));
        if counts.is_empty() || counts.contains(&1) || counts.contains(&0) {
            continue;
        }
        let better = found.as_ref().is_none_or(|(_, torn, known)| {
            let times = if even(known) { 2 } else { 1 };
            let more = counts.iter().max() > known.iter().max().map(|most| most * times).as_ref();
            *torn && !stray || delimiter != blanks && even(&counts) && more
        });
        if better {
            found = Some((delimiter, stray, counts));
        }
    }
    let (delimiter, _, commas) = found.unwrap_or((blanks, false, Vec::new()));
    if delimiter != comma {
        return delimiter;
    }
    // Commas may be decimal marks between blanks, or of one number in each line unless what stands before them counts the
    // lines. Names in the first line tell nothing of that.
    let apart = sample(blanks);
    let names = usize::from(apart.counts.len() > 1);
    let whole = |row: &str| number(row.split(',').next().unwrap_or_default());
    let before: Vec<Option<f64>> = apart.fields().map(|(_, field)| whole(field)).collect();
    let counted = before.windows(2).all(|pair| matches!(pair, [Some(one), Some(next)] if *next == one + 1.0));
    let below = || apart.counts.iter().skip(names);
    let may_be = below().all(|&count| count > 1) || below().all(|&count| count == 1) && !counted;
    let is_decimal = |field: &&str| has_decimal_comma(field) && !field.ends_with(',');
    let with_comma = || apart.fields().filter(|(row, field)| *row >= names && field.contains(',')).map(|(_, f)| f);
    let (decimals, all) = (with_comma().filter(is_decimal).count(), with_comma().count());
    let are = match (even(&commas), even(&counts(&apart))) {
        (true, true) => decimals == all,
        (true, false) => 4 * decimals >= 3 * all && decimals >= 2 * below().count(),
        (false, _) => 4 * decimals >= 3 * all,
    };
    if may_be && are { blanks } else { delimiter }
}

/// Rows of any number of fields, which stand one behind another in one string.
#[derive(Debug, Default)]
struct Rows {
    text: String,
    ends: Vec<u32>,
    counts: Vec<u32>,
    lines: Vec<u32>,
    /// The last line passed over before the first row, without its mark.
    remark: Option<(usize, String)>,
    /// Whether more than the mark followed a quoted field.
    stray: bool,
}

impl Rows {
    fn split(text: &str, delimiter: Delimiter, most: usize) -> Result<Self, Error> {
        let mut rows = Self::default();
        if most > SAMPLE {
            // Exactly what is needed, so that memory stays within a few times the file.
            let breaks = text.bytes().filter(is_break).count() + 1;
            let fields = match delimiter.mark() {
                Some(mark) => text.bytes().filter(|byte| char::from(*byte) == mark).count() + breaks,
                None => text.len() / 2 + 1,
            };
            rows.ends.reserve_exact(fields);
            rows.text.reserve_exact(text.len());
        }
        let quotes = text.contains('"');
        let (mut rest, mut line, mut open) = (text, 1, false);
        while !rest.is_empty() && rows.counts.len() < most {
            let end = rest.bytes().position(|byte| is_break(&byte)).unwrap_or(rest.len());
            let (content, _) = rest.split_at_checked(end).unwrap_or((rest, ""));
            let begun = content.trim_start();
            let mut used = content.len();
            if let Some(remark) = begun.strip_prefix(['#', '%']) {
                if rows.counts.is_empty() {
                    rows.remark = Some((line, remark.trim_start_matches(['#', '%']).trim().to_owned()));
                }
            } else if line == 1 && begun.starts_with("sep=") && begun.trim_end().len() <= 5 {
                // Tells a spreadsheet what divides the fields.
            } else if !begun.trim_end_matches('\u{1a}').is_empty() {
                let before = rows.ends.len();
                if quotes && content.contains('"') {
                    used = rows.quoted(rest, delimiter, &mut open);
                } else {
                    match delimiter.mark() {
                        Some(mark) => content.split(mark).for_each(|field| rows.field(field)),
                        None => content.split_whitespace().for_each(|field| rows.field(field)),
                    }
                }
                let count = rows.ends.len() - before;
                if count > MOST_ROWS && most > SAMPLE {
                    return Err(Finding::new(Code::TableLarge)
                        .at(Place { line: Some(line), ..Place::default() })
                        .with("found", count)
                        .with("most", MOST_MAPS)
                        .into());
                }
                rows.counts.push(u32::try_from(count).unwrap_or(u32::MAX));
                rows.lines.push(u32::try_from(line).unwrap_or(u32::MAX));
            }
            let (passed, after) = rest.split_at_checked(used).unwrap_or((rest, ""));
            // Only quotes hold line breaks.
            line += if used > content.len() { line_breaks(passed) } else { 0 } + 1;
            rest = after.strip_prefix("\r\n").or_else(|| after.strip_prefix(['\n', '\r'])).unwrap_or(after);
        }
        if most > SAMPLE && rows.counts.len() >= most {
            return Err(Finding::new(Code::TableLarge)
                .at(Place { line: Some(line), ..Place::default() })
                .with("found", most)
                .with("most", MOST_MAPS)
                .into());
        }
        Ok(rows)
    }

    fn field(&mut self, field: &str) {
        let plain = |end: Option<&u8>| end.is_some_and(|byte| byte.is_ascii_graphic() && *byte != b'\'');
        if plain(field.as_bytes().first()) && plain(field.as_bytes().last()) {
            self.text.push_str(field);
        } else {
            let field = field.trim();
            let inner = field.strip_prefix('\'').and_then(|field| field.strip_suffix('\''));
            self.text.push_str(inner.unwrap_or(field));
        }
        self.ends.push(u32::try_from(self.text.len()).unwrap_or(u32::MAX));
    }

    /// Takes one row with quotes off the beginning of a text and returns how many bytes it had. `open` tells that a
    /// quote was met that nothing closes: such a one is a character like others, and there is no use in looking again.
    fn quoted(&mut self, text: &str, delimiter: Delimiter, open: &mut bool) -> usize {
        let ends_field = |c: char| delimiter.mark().map_or(c.is_whitespace(), |mark| c == mark);
        let mut at = 0;
        loop {
            let rest = text.get(at..).unwrap_or_default();
            let blanks: usize = rest
                .chars()
                .take_while(|&c| is_blank(c) && (delimiter == Delimiter::Blanks || !ends_field(c)))
                .map(char::len_utf8)
                .sum();
            let rest = rest.get(blanks..).unwrap_or_default();
            at += blanks;
            if delimiter == Delimiter::Blanks && (rest.is_empty() || rest.starts_with(['\n', '\r'])) {
                return at;
            }
            let mut field: Cow<'_, str> = "".into();
            if let Some(inside) = rest.strip_prefix('"').filter(|_| !*open) {
                match closed(inside) {
                    Some((content, used)) => {
                        field = content;
                        at += 1 + used;
                    }
                    None => *open = true,
                }
            }
            let rest = text.get(at..).unwrap_or_default();
            let length = rest.find(|c: char| ends_field(c) || c == '\n' || c == '\r').unwrap_or(rest.len());
            let tail = rest.get(..length).unwrap_or_default().trim();
            match (field.is_empty(), tail.is_empty()) {
                (true, _) => self.field(tail),
                (false, true) => self.field(&field),
                (false, false) => {
                    self.stray = true;
                    self.field(&[&*field, tail].concat());
                }
            }
            at += length;
            match rest.get(length..).and_then(|rest| rest.chars().next()) {
                Some(c) if ends_field(c) && c != '\n' && c != '\r' => at += c.len_utf8(),
                _ => return at,
            }
        }
    }

    /// Every field with the number of its row.
    fn fields(&self) -> impl Iterator<Item = (usize, &str)> {
        let rows = self.counts.iter().enumerate().flat_map(|(row, &count)| (0..count).map(move |_| row));
        let mut start = 0;
        rows.zip(&self.ends).map(move |(row, &end)| {
            let field = self.text.get(start..end as usize).unwrap_or_default();
            start = end as usize;
            (row, field)
        })
    }

    /// Takes out rows of which every field is empty, as spreadsheets leave them; among rows of numbers alone they have their
    /// place, unless they come last.
    fn drop_empty(&mut self) {
        let empty: Vec<bool> = self.empty_ends().iter().zip(&self.counts).map(|(e, count)| e == count).collect();
        if !empty.contains(&true) {
            return;
        }
        let is_word = |field: &str| !is_missing(field) && number_with_comma(field).is_none();
        let last = empty.iter().rposition(|empty| !empty).map_or(0, |last| last + 1);
        let worded = self.fields().skip_while(|(row, _)| *row == 0).any(|(_, field)| is_word(field));
        let mut row = 0;
        let goes: Vec<bool> = empty
            .iter()
            .map(|empty| {
                row += 1;
                *empty && (worded || row > last)
            })
            .collect();
        let mut of_fields = self.counts.iter().zip(&goes).flat_map(|(&count, &goes)| (0..count).map(move |_| goes));
        self.ends.retain(|_| !of_fields.next().unwrap_or(false));
        for list in [&mut self.counts, &mut self.lines] {
            let mut goes = goes.iter();
            list.retain(|_| !goes.next().copied().unwrap_or(false));
        }
    }

    /// Gives every row as many fields as most have. Marks at the end of a line begin no column, names of columns may lack the one above the
    /// labels, and a few lines of one field each before the table are its title, whose lines are returned.
    fn square(&mut self) -> Result<Option<(usize, usize)>, Error> {
        let mut frequency: BTreeMap<u32, usize> = BTreeMap::new();
        for &count in &self.counts {
            *frequency.entry(count).or_default() += 1;
        }
        // Of equally frequent ones the narrowest.
        let more =
            |best: (u32, usize), (&count, &rows): (&u32, &usize)| if rows > best.1 { (count, rows) } else { best };
        let usual = frequency.iter().fold((0, 0), more);
        let width = usual.0;
        let titles = if width > 1 && usual.1 >= 3 { self.titles() } else { 0 };
        let title = self.title(titles);

        if titles == 0 && width > 1 && self.counts.first() == Some(&(width - 1)) && usual.1 >= 2 {
            let names = self.fields().take_while(|(row, _)| *row == 0).all(|(_, field)| number(field).is_none());
            if names {
                self.ends.insert(0, 0);
                self.counts.iter_mut().take(1).for_each(|count| *count += 1);
            }
        }
        if self.is_even(width) {
            return Ok(title);
        }
        let empty = self.empty_ends();
        let surplus = |row: usize, count: u32| count > width && count - width <= empty.get(row).copied().unwrap_or(0);
        let counts = self.counts.iter().enumerate();
        if let Some((row, &count)) = counts.clone().find(|&(row, &count)| count != width && !surplus(row, count)) {
            let line = self.lines.get(row).map_or(1, |&line| line as usize);
            return Err(Finding::new(Code::TableRagged)
                .at(Place { line: Some(line), ..Place::default() })
                .with("found", count as usize)
                .with("expected", width as usize)
                .into());
        }
        let spare = counts
            .map(|(row, &count)| empty.get(row).copied().unwrap_or(0).saturating_sub(count.saturating_sub(width)));
        let kept = width - spare.min().unwrap_or(0).min(width.saturating_sub(1));
        if kept != width || self.counts.iter().any(|&count| count != width) {
            let mut position = 0;
            let mut counts = self.counts.iter().flat_map(|&count| (0..count).map(move |column| column < kept));
            self.ends.retain(|_| {
                position += 1;
                counts.next().unwrap_or(false)
            });
            self.counts.iter_mut().for_each(|count| *count = kept);
        }
        Ok(title)
    }

    /// How many rows of one field, three at most, stand above at least three others.
    fn titles(&self) -> usize {
        let titles = self.counts.iter().take_while(|count| **count == 1).count();
        if titles <= 3 && self.counts.len() >= titles + 3 { titles } else { 0 }
    }

    /// Takes rows of one field off the beginning; their first and last line.
    fn title(&mut self, rows: usize) -> Option<(usize, usize)> {
        let lines = self.lines.get(..rows).filter(|lines| !lines.is_empty())?;
        let title = (*lines.first()? as usize, *lines.last()? as usize);
        let length = rows.checked_sub(1).and_then(|last| self.ends.get(last)).map_or(0, |&end| end as usize);
        self.text.drain(..length);
        self.ends.drain(..rows);
        self.ends.iter_mut().for_each(|end| *end -= length as u32);
        self.counts.drain(..rows);
        self.lines.drain(..rows);
        self.remark = None;
        Some(title)
    }

    /// Whether every row has so many fields and the last one of the first is not empty, so that nothing is to be taken off.
    fn is_even(&self, width: u32) -> bool {
        let end = |field: u32| (field as usize).checked_sub(1).and_then(|field| self.ends.get(field)).copied();
        self.counts.iter().all(|count| *count == width) && width > 0 && end(width) != end(width - 1)
    }

    /// How many fields at the end of each row are empty.
    fn empty_ends(&self) -> Vec<u32> {
        let mut empty = vec![0; self.counts.len()];
        for (row, field) in self.fields() {
            if let Some(count) = empty.get_mut(row) {
                *count = if field.is_empty() { *count + 1 } else { 0 };
            }
        }
        empty
    }
}

fn is_blank(c: char) -> bool {
    c.is_whitespace() && c != '\n' && c != '\r'
}

fn is_break(byte: &u8) -> bool {
    matches!(byte, b'\n' | b'\r')
}

fn line_breaks(text: &str) -> usize {
    let breaks = text.bytes().filter(is_break).count();
    breaks - text.matches("\r\n").count()
}

/// What stands before the quote that closes a field, and how many bytes that and the quote had; a doubled quote is one
/// of the content.
fn closed(text: &str) -> Option<(Cow<'_, str>, usize)> {
    let mut from = 0;
    loop {
        let at = from + text.get(from..)?.find('"')?;
        if !text.get(at + 1..)?.starts_with('"') {
            let content = text.get(..at)?;
            let content = if from > 0 { content.replace("\"\"", "\"").into() } else { content.into() };
            return Some((content, at + 1));
        }
        from = at + 2;
    }
}

/// Rows by the place in the line: wherever every line is blank, or ended, one column ends. A column that only the first
/// line has belongs to the name before it. `None` if no columns are evident or a tab makes places uncertain.
fn in_columns(text: &str) -> Option<Rows> {
    let lines = || {
        text.split('\n').flat_map(|line| line.strip_suffix('\r').unwrap_or(line).split('\r')).enumerate().filter(
            |(_, line)| {
                let begun = line.trim_start();
                !begun.is_empty() && !begun.starts_with(['#', '%'])
            },
        )
    };
    // How many lines have a character here, and whether another than the first has.
    let mut used: Vec<(bool, bool)> = Vec::new();
    for (index, (_, line)) in lines().enumerate() {
        if line.contains('\t') || line.len() > 1 << 16 || index > MOST_ROWS {
            return None;
        }
        for (column, character) in line.chars().enumerate() {
            if column >= used.len() {
                used.push((false, false));
            }
            if let Some((any, later)) = used.get_mut(column).filter(|_| !character.is_whitespace()) {
                *any = true;
                *later |= index > 0;
            }
        }
    }
    let mut starts: Vec<usize> = Vec::new();
    let mut column = 0;
    for run in used.chunk_by(|a, b| a.0 == b.0) {
        let is_used = run.first().is_some_and(|(any, _)| *any);
        if is_used && (starts.is_empty() || run.iter().any(|(_, later)| *later)) {
            starts.push(if starts.is_empty() { 0 } else { column });
        }
        column += run.len();
    }
    if starts.len() < 2 {
        return None;
    }
    let mut rows = Rows::default();
    for (line, content) in lines() {
        let mut characters = content.chars();
        for (index, start) in starts.iter().enumerate() {
            let field: String = match starts.get(index + 1) {
                Some(next) => characters.by_ref().take(next - start).collect(),
                None => characters.by_ref().collect(),
            };
            rows.field(&field);
        }
        rows.counts.push(u32::try_from(starts.len()).ok()?);
        rows.lines.push(u32::try_from(line + 1).ok()?);
    }
    // Evident only where most lines fill all columns, with blanks within one field at most.
    let mut loose = vec![0; rows.counts.len()];
    for (row, field) in rows.fields() {
        if let Some(loose) = loose.get_mut(row) {
            *loose += if field.is_empty() { 2 } else { usize::from(field.contains(char::is_whitespace)) };
        }
    }
    let full = loose.iter().skip(1).filter(|loose| **loose < 2).count();
    (2 * full >= rows.counts.len()).then_some(rows)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table(text: &str) -> Vec<Vec<String>> {
        let table = read_table(text, None).map_err(|error| format!("{error:?}")).map(|table| table.cells);
        let cells = table.unwrap_or_else(|error| panic!("{text:?}: {error}"));
        (0..cells.height()).map(|row| cells.row(row).map(String::from).collect()).collect()
    }

    #[test]
    fn splits_by_what_stands_in_every_line() {
        for text in [
            "a\t1\t2\nb\t3\t4",
            "a;1;2\r\nb;3;4\r\n",
            "a, 1,2\nb,3 ,4\n\n",
            "  a   1 2\n# note\nb 3\t4 ",
            "a,1,2\rb,3,4\r",
            "\"a\",\"1\",2\n'b',3,\"4\"\n\u{1a}",
            "a;1;2;\nb;3;4\n",
            "a,1,2,,\nb,3,4,,\n",
            "A title\nfor three\na\t1\t2\nb\t3\t4\nc\t5\t6",
        ] {
            let found = table(text);
            assert_eq!(
                found.get(..2),
                Some(&[["a", "1", "2"].map(String::from).to_vec(), ["b", "3", "4"].map(String::from).to_vec()][..]),
                "{text:?}"
            );
        }
        let delimiter = |text: &str| read_table(text, None).map(|table| table.delimiter).ok();
        assert_eq!(delimiter("Fz 1,5 2,5\nCz 0,5 -2,5"), Some(Delimiter::Blanks));
        assert_eq!(delimiter("1,5;2,5\n3,5;4,5"), Some(Delimiter::Semicolon));
        assert_eq!(delimiter("Fz, 1.5\nCz, 2.5"), Some(Delimiter::Comma));
        // A column of values, and one whose rows are counted.
        assert_eq!(delimiter("1,2\n3,4"), Some(Delimiter::Blanks));
        assert_eq!(delimiter("1,2\n2,4\n3,1"), Some(Delimiter::Comma));
        assert_eq!(delimiter("1,-2\n3,-4"), Some(Delimiter::Comma));
    }

    #[test]
    fn quotes_hold_marks_line_breaks_and_doubled_quotes() {
        let rows = table("\"a, \"\"b\"\"\",1\n\"c\r\nd\" ,2\n\"open,3");
        assert_eq!(rows, [["a, \"b\"", "1"], ["c\r\nd", "2"], ["\"open", "3"]]);
        let lines = read_table("\"a\nb\",1\nc,2", None).map(|table| table.cells.line(1));
        assert_eq!(lines.ok(), Some(3));
        assert_eq!(table("\"left ear\" 1\n\"b\" 2"), [["left ear", "1"], ["b", "2"]]);
    }

    #[test]
    fn columns_of_characters_keep_empty_fields() {
        let text = "Electrode name    x     y   z\n\
                    Fz               0.0   1.5  2\n\
                    A1\n\
                    C3              -1.0   2    3\n\
                    C4               1.0        3\n\
                    Cz               7     8.5  9\n";
        let expected = [
            ["Electrode name", "x", "y", "z"],
            ["Fz", "0.0", "1.5", "2"],
            ["A1", "", "", ""],
            ["C3", "-1.0", "2", "3"],
            ["C4", "1.0", "", "3"],
            ["Cz", "7", "8.5", "9"],
        ];
        assert_eq!(table(text), expected);
    }

    #[test]
    fn names_may_stand_in_a_remark_or_lack_the_corner() {
        assert_eq!(table("# measured\n# label x\nFz 1\nCz 2"), [["label", "x"], ["Fz", "1"], ["Cz", "2"]]);
        assert_eq!(table("a\tb\nFz\t1\t2\nCz\t3\t4"), [["", "a", "b"], ["Fz", "1", "2"], ["Cz", "3", "4"]]);
    }

    #[test]
    fn rows_of_another_length_are_named() {
        let line = |text: &str| read_table(text, None).err()?.finding().place.as_ref()?.line;
        assert_eq!(line("a,1,2\nb,3,4\n\nc,5\nd,6,7"), Some(4));
        assert_eq!(line("a 1 2\nb 3 4\nc 5 6 7"), Some(3));
        assert_eq!(line(&"1\n".repeat(MOST_ROWS + 1)), Some(MOST_ROWS + 1));
        assert_eq!(line(&",".repeat(MOST_ROWS + 1)), Some(1));
    }

    #[test]
    fn numbers_are_plain_and_of_a_size_to_compute_with() {
        assert_eq!(number("-1.5e-3"), Some(-0.0015));
        let code =
            |field: &str, comma| expect_number(field, comma, Place::default).map_err(|error| error.finding().code);
        assert_eq!(code("-0.000e7", false), Ok(-0.0));
        for field in ["1e999", "-1e101", "1e-101", "1e-400"] {
            assert_eq!(code(field, false), Err(Code::NumberRange), "{field}");
        }
        assert_eq!(code("1,5", false), Err(Code::NumberExpected));
        assert_eq!(code("-1,5e1", true), Ok(-15.0));
        assert_eq!(code("1.000,5", true), Err(Code::NumberExpected));
        assert_eq!(number("\u{2212}0.66"), Some(-0.66));
        for not in ["inf", "NaN", "1,5", "0x10", "", "-", "\u{2212}", "\u{2212}-5"] {
            assert_eq!(number(not), None, "{not}");
        }
    }
}
