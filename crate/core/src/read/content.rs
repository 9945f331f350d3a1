use crate::finding::{Choice, Finding};
use ndarray::Array2;

/// What a file holds, without any meaning: that is for `understand` to find.
#[derive(Clone, Debug, PartialEq)]
pub struct Content {
    /// How the file is written.
    pub format: Format,
    /// How its text is written; `None` for binary files.
    pub encoding: Option<Encoding>,
    /// Its tables and lists, in the order of the file.
    pub parts: Vec<Part>,
    /// What was inferred while reading.
    pub choices: Vec<Choice>,
    /// What is to be said about it.
    pub notes: Vec<Finding>,
}

impl Content {
    /// The parts of a binary file.
    pub fn of(format: Format, parts: Vec<Part>) -> Self {
        Self { format, encoding: None, parts, choices: Vec::new(), notes: Vec::new() }
    }
}

/// A format of files.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum Format {
    /// Lines of fields.
    DelimitedText,
    /// JSON.
    Json,
    /// An array written by NumPy.
    Npy,
    /// MATLAB, level 5.
    Mat,
    /// Several files packed together.
    Zip,
}

/// How characters are written as bytes.
#[derive(Clone, Copy, Debug, PartialEq, Eq, serde::Serialize, serde::Deserialize)]
pub enum Encoding {
    /// UTF-8, of which ASCII is a part.
    #[serde(rename = "utf-8")]
    Utf8,
    /// UTF-16, low byte first.
    #[serde(rename = "utf-16le")]
    Utf16Le,
    /// UTF-16, high byte first.
    #[serde(rename = "utf-16be")]
    Utf16Be,
    /// One byte for each character: Latin-1.
    #[serde(rename = "latin-1")]
    Latin1,
}

/// A table or a list of a file.
#[derive(Clone, Debug, PartialEq)]
pub struct Part {
    /// Its name inside the file: a variable, a key, a field of a structure as `outer.inner`, a file of an archive.
    pub name: Option<String>,
    /// What it holds.
    pub body: Body,
}

/// The content of a part.
#[derive(Clone, Debug, PartialEq)]
pub enum Body {
    /// Fields of text.
    Cells(Cells),
    /// Numbers; a vector is a column, NaN is a missing number.
    Numbers(Array2<f64>),
    /// A list of words.
    Words(Vec<String>),
    /// Keys and values that are no table, such as a description of coordinates.
    Record(Record),
}

/// Keys with their values, in the order of the file.
pub type Record = Vec<(String, Tree)>;

/// A value of a [`Record`].
#[derive(Clone, Debug, PartialEq)]
pub enum Tree {
    /// Nothing, or a truth value, which nothing here asks for.
    Nothing,
    /// A number.
    Number(f64),
    /// A word.
    Text(String),
    /// Several values.
    List(Vec<Tree>),
    /// Keys with values.
    Record(Record),
}

/// Rows of equally many fields of text. The fields stand one behind another in one string: a million of them cost little
/// more than the file.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Cells {
    text: String,
    /// Where each field ends.
    ends: Vec<u32>,
    /// Line of each row in the file, from 1.
    lines: Vec<u32>,
    width: usize,
    headed: bool,
}

impl Cells {
    /// An empty table of so many columns.
    pub fn new(width: usize) -> Self {
        Self { width, ..Self::default() }
    }

    /// The same, whose first row is known to hold the names of the columns.
    pub fn headed(self) -> Self {
        Self { headed: true, ..self }
    }

    /// Whether the first row is known to hold the names of the columns; otherwise it may or may not.
    pub fn is_headed(&self) -> bool {
        self.headed
    }

    /// A table of fields that stand one behind another in a string, by their ends.
    pub(super) fn from_packed(text: String, ends: Vec<u32>, lines: Vec<u32>, width: usize) -> Self {
        Self { text, ends, lines, width, headed: false }
    }

    /// Puts names above the columns.
    pub(super) fn put_first<'a>(&mut self, line: usize, names: impl IntoIterator<Item = &'a str>) {
        let mut first = Self::new(self.width);
        first.push(line, names);
        let moved = first.text.len() as u32;
        self.ends.iter_mut().for_each(|end| *end = end.saturating_add(moved));
        self.ends.splice(..0, first.ends);
        self.lines.splice(..0, first.lines);
        self.text.insert_str(0, &first.text);
        self.headed = true;
    }

    /// Adds a row: missing fields are empty, further ones are dropped.
    pub fn push<'a>(&mut self, line: usize, fields: impl IntoIterator<Item = &'a str>) {
        let mut fields = fields.into_iter();
        for _ in 0..self.width {
            self.text.push_str(fields.next().unwrap_or_default());
            self.ends.push(u32::try_from(self.text.len()).unwrap_or(u32::MAX));
        }
        self.lines.push(u32::try_from(line).unwrap_or(u32::MAX));
    }

    /// Whether any field has this character.
    pub fn contains(&self, character: char) -> bool {
        self.text.contains(character)
    }

    /// Number of columns.
    pub fn width(&self) -> usize {
        self.width
    }

    /// Number of rows.
    pub fn height(&self) -> usize {
        self.lines.len()
    }

    /// The text of a field, counted from 0; empty where there is none.
    pub fn field(&self, row: usize, column: usize) -> &str {
        if column >= self.width {
            return "";
        }
        let at = row * self.width + column;
        let start = at.checked_sub(1).and_then(|before| self.ends.get(before)).map_or(0, |&end| end as usize);
        let end = self.ends.get(at).map_or(start, |&end| end as usize);
        self.text.get(start..end).unwrap_or_default()
    }

    /// The fields of a row.
    pub fn row(&self, row: usize) -> impl Iterator<Item = &str> {
        (0..self.width).map(move |column| self.field(row, column))
    }

    /// Line of a row in the file, from 1.
    pub fn line(&self, row: usize) -> usize {
        self.lines.get(row).map_or(1, |&line| line as usize)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fields_come_back_as_they_were_put() {
        let mut cells = Cells::new(3);
        cells.push(2, ["", "a", ""]);
        cells.push(5, ["é", "1"]);
        cells.push(6, ["x", "y", "z", "more"]);
        assert_eq!((cells.width(), cells.height(), cells.line(1)), (3, 3, 5));
        let rows: Vec<Vec<&str>> = (0..3).map(|row| cells.row(row).collect()).collect();
        assert_eq!(rows, [["", "a", ""], ["é", "1", ""], ["x", "y", "z"]]);
        assert_eq!((cells.field(0, 3), cells.field(9, 0)), ("", ""));
    }
}
