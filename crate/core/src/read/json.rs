use super::content::{Body, Cells, Part, Record, Tree};
use super::scan::Raw;
use super::table::{is_missing, number};
use super::{MOST_ELECTRODES, MOST_MAPS};
use crate::finding::{Code, Error, Finding, Place};
use ndarray::Array2;
use std::borrow::Cow;
use std::collections::HashMap;

/// Lists and objects inside one another that are looked into: a table needs four.
const DEEPEST: usize = 16;

/// Most parts of an object that is no table.
const MOST_PARTS: usize = 4_096;

/// Most keys of the records of a table.
const MOST_KEYS: usize = MOST_MAPS + 8;

/// The parts of a JSON text: a list of lists of numbers is a matrix, a list of objects or an object of equally long
/// lists is a table, any other object has a part for each of its lists and objects.
///
/// Values are pieces of the text until their place says what they are, so that a number is read as the same bits as in
/// any other table and a row knows its line. Each level is passed once more, [`DEEPEST`] times at most.
///
/// # Errors
/// `json-syntax` with line and byte; `json-content` for what is no table, or nested more deeply.
pub(super) fn read_json(text: &str) -> Result<Vec<Part>, Error> {
    let root = Raw::of(text).map_err(|stray| {
        let line = text.bytes().take(stray.at).filter(|byte| *byte == b'\n').count() + 1;
        let place = Place { line: Some(line), byte: Some(stray.at + 1), ..Place::default() };
        Error::from(Finding::new(Code::JsonSyntax).at(place).with("cut_short", stray.is_end))
    })?;
    let breaks = breaks(text);
    let json = Json { text, breaks: &breaks };
    if root.text().starts_with('{') {
        json.object(root, None)
    } else {
        Ok(json.list(root, None)?.into_iter().collect())
    }
}

/// The whole text, to tell where a piece of it stands.
#[derive(Clone, Copy)]
struct Json<'a> {
    text: &'a str,
    /// Line breaks before each block.
    breaks: &'a [u32],
}

impl<'a> Json<'a> {
    /// Line of a piece of the text, counted from the block in which it begins: refusals that are not told in the end and
    /// tables within tables ask for many.
    fn line(self, piece: Raw<'_>) -> usize {
        let at = self.offset(piece);
        let block = at / BLOCK;
        let before = self.breaks.get(block).map_or(0, |&breaks| breaks as usize);
        let between = self.text.as_bytes().get(block * BLOCK..at).unwrap_or_default();
        before + line_breaks(between) + 1
    }

    fn place(self, piece: Raw<'_>) -> Place {
        Place { line: Some(self.line(piece)), byte: Some(self.offset(piece) + 1), ..Place::default() }
    }

    fn offset(self, piece: Raw<'_>) -> usize {
        (piece.text().as_ptr() as usize).saturating_sub(self.text.as_ptr() as usize).min(self.text.len())
    }

    fn refuse(self, piece: Raw<'_>, why: &'static str) -> Error {
        Finding::new(Code::JsonContent).at(self.place(piece)).with("why", why).into()
    }

    fn items(self, list: Raw<'a>) -> Result<Vec<Raw<'a>>, Error> {
        list.items().ok_or_else(|| self.refuse(list, "json-large"))
    }

    fn fields(self, object: Raw<'a>) -> Result<Vec<(Cow<'a, str>, Raw<'a>)>, Error> {
        object.fields().ok_or_else(|| self.refuse(object, "json-large"))
    }

    /// An object: columns of a table, or a part for each key that holds several values, and one for the others.
    fn object(self, object: Raw<'a>, outer: Option<&str>) -> Result<Vec<Part>, Error> {
        let fields = self.fields(object)?;
        if let Some(table) = self.columns(&fields)? {
            return Ok(vec![Part { name: outer.map(String::from), body: Body::Cells(table) }]);
        }
        let mut parts = Vec::new();
        let mut record = Record::new();
        for (key, value) in fields {
            let name = outer.map_or_else(|| key.to_string(), |outer| format!("{outer}.{key}"));
            let nested = match value.text().as_bytes() {
                [b'[', ..] => self.list(value, Some(&name)).ok().flatten().into_iter().collect(),
                [b'{', ..] if outer.is_none() && !is_description(&key) => self.object(value, Some(&name))?,
                _ => Vec::new(),
            };
            let tables = nested.iter().any(|part| !matches!(part.body, Body::Record(_)));
            if tables {
                parts.extend(nested);
            } else {
                record.push((key.into_owned(), self.tree(value, 0)?));
            }
            if parts.len() + record.len() > MOST_PARTS {
                return Err(self.refuse(object, "json-large"));
            }
        }
        if !record.is_empty() {
            parts.push(Part { name: outer.map(String::from), body: Body::Record(record) });
        }
        Ok(parts)
    }

    /// The table of an object whose values are equally long lists without further structure; `None` for other objects.
    fn columns(self, fields: &[(Cow<'a, str>, Raw<'a>)]) -> Result<Option<Cells>, Error> {
        let lists = fields.iter().all(|(_, value)| value.text().starts_with('['));
        if !lists || fields.len() < 2 {
            return Ok(None);
        }
        let columns = fields.iter().map(|(_, value)| self.items(*value)).collect::<Result<Vec<_>, _>>()?;
        let height = columns.first().map_or(0, Vec::len);
        let flat = |column: &Vec<Raw<'_>>| column.len() == height && column.iter().all(|value| value.is_scalar());
        if height < 2 || !columns.iter().all(flat) {
            return Ok(None);
        }
        let mut cells = Cells::new(fields.len()).headed();
        cells.push(1, fields.iter().map(|(key, _)| key.as_ref()));
        for row in 0..height {
            let values: Vec<String> =
                columns.iter().map(|column| column.get(row).map_or_else(String::new, |value| value.word())).collect();
            cells.push(row + 1, values.iter().map(String::as_str));
        }
        Ok(Some(cells))
    }

    /// A list: words, numbers, rows of numbers, rows of fields, or objects with the same keys; `None` if it is empty.
    fn list(self, list: Raw<'a>, name: Option<&str>) -> Result<Option<Part>, Error> {
        if !list.text().starts_with('[') {
            return Err(self.refuse(list, "json-scalar"));
        }
        let items = self.items(list)?;
        let body = match items.first().map(|item| item.text().as_bytes()) {
            None => return Ok(None),
            Some([b'{', ..]) => Body::Cells(self.records(&items)?),
            Some([b'[', ..]) => self.rows(&items)?,
            Some(_) => self.scalars(&items, list)?,
        };
        Ok(Some(Part { name: name.map(String::from), body }))
    }

    fn scalars(self, items: &[Raw<'a>], list: Raw<'a>) -> Result<Body, Error> {
        if let Some(nested) = items.iter().find(|item| !item.is_scalar()) {
            return Err(self.refuse(*nested, "json-mixed"));
        }
        if items.iter().any(|item| item.text().starts_with('"') && !is_missing(&item.word())) {
            return Ok(Body::Words(items.iter().map(|item| item.word()).collect()));
        }
        let column = self.numbers(items)?;
        let count = column.len();
        let matrix = Array2::from_shape_vec((count, 1), column).map_err(|_| self.refuse(list, "json-mixed"))?;
        Ok(Body::Numbers(matrix))
    }

    /// Rows of numbers, or of numbers and words.
    fn rows(self, items: &[Raw<'a>]) -> Result<Body, Error> {
        let mut matrix = Vec::new();
        let mut width = None;
        for (index, item) in items.iter().enumerate() {
            if !item.text().starts_with('[') {
                return Err(self.refuse(*item, "json-mixed"));
            }
            let row = self.items(item.to_owned())?;
            if let Some(nested) = row.iter().find(|value| !value.is_scalar()) {
                return Err(self.refuse(*nested, "json-deep"));
            }
            if row.iter().any(|value| value.text().starts_with('"') && !is_missing(&value.word())) {
                return self.mixed(items);
            }
            let expected = *width.get_or_insert(row.len());
            let line = self.line(item.to_owned());
            if row.len() != expected {
                let place = Place { line: Some(line), ..Place::default() };
                let finding = Finding::new(Code::TableRagged).at(place);
                return Err(finding.with("found", row.len()).with("expected", expected).into());
            }
            if (index > MOST_MAPS)
                || (expected > MOST_MAPS + 1)
                || (index > MOST_ELECTRODES && expected > MOST_ELECTRODES)
            {
                return Err(self.refuse(*item, "json-large"));
            }
            matrix.extend(self.numbers(&row)?);
        }
        let shape = (items.len(), width.unwrap_or(0));
        let first = items.first().copied();
        Array2::from_shape_vec(shape, matrix).map(Body::Numbers).map_err(|_| {
            first.map_or_else(|| Finding::new(Code::JsonContent).into(), |item| self.refuse(item, "json-mixed"))
        })
    }

    fn mixed(self, items: &[Raw<'a>]) -> Result<Body, Error> {
        let mut cells: Option<Cells> = None;
        for item in items {
            let row = self.items(item.to_owned())?;
            if let Some(nested) = row.iter().find(|value| !value.is_scalar()) {
                return Err(self.refuse(*nested, "json-deep"));
            }
            let line = self.line(item.to_owned());
            let cells = cells.get_or_insert_with(|| Cells::new(row.len()));
            if row.len() != cells.width() {
                let place = Place { line: Some(line), ..Place::default() };
                let finding = Finding::new(Code::TableRagged).at(place);
                return Err(finding.with("found", row.len()).with("expected", cells.width()).into());
            }
            let words: Vec<String> = row.iter().map(|value| value.word()).collect();
            cells.push(line, words.iter().map(String::as_str));
        }
        Ok(Body::Cells(cells.unwrap_or_default()))
    }

    /// A table of objects; its columns are the keys of all of them, in the order in which they appear. A list of three
    /// numbers, such as a position, makes the columns x, y, z.
    fn records(self, items: &[Raw<'a>]) -> Result<Cells, Error> {
        let mut names: Vec<Cow<'_, str>> = Vec::new();
        let mut columns: HashMap<Cow<'_, str>, usize> = HashMap::new();
        let mut given = 0;
        for item in items {
            for (name, _) in self.record(item.to_owned())? {
                given += 1;
                if !columns.contains_key(&name) {
                    columns.insert(name.clone(), names.len());
                    names.push(name);
                }
            }
            if names.len() > MOST_KEYS || (names.len() > 2 * MOST_ELECTRODES && items.len() > 2 * MOST_ELECTRODES) {
                return Err(self.refuse(*item, "json-large"));
            }
        }
        // A table of hardly anything but holes is none, and would be far larger than its text.
        if names.len().saturating_mul(items.len()) > 4 * given + 4_096 {
            return Err(items
                .first()
                .map_or_else(|| Finding::new(Code::JsonContent).into(), |first| self.refuse(*first, "json-large")));
        }
        let mut cells = Cells::new(names.len()).headed();
        cells.push(items.first().map_or(1, |first| self.line(first.to_owned())), names.iter().map(AsRef::as_ref));
        let mut words = vec![String::new(); names.len()];
        for item in items {
            words.iter_mut().for_each(String::clear);
            for (name, value) in self.record(item.to_owned())? {
                if let Some(field) = columns.get(&name).and_then(|&column| words.get_mut(column)) {
                    *field = value.word();
                }
            }
            cells.push(self.line(item.to_owned()), words.iter().map(String::as_str));
        }
        Ok(cells)
    }

    /// The fields of an object in a list of them.
    fn record(self, item: Raw<'a>) -> Result<Vec<(Cow<'a, str>, Raw<'a>)>, Error> {
        if !item.text().starts_with('{') {
            return Err(self.refuse(item, "json-mixed"));
        }
        let mut flat = Vec::new();
        for (key, value) in self.fields(item)? {
            let values = if value.text().starts_with('[') { self.items(value)? } else { vec![value] };
            match values.as_slice() {
                [value] if value.is_scalar() => flat.push((key, *value)),
                [x, y, z] if [x, y, z].iter().all(|value| value.is_scalar()) => {
                    flat.extend([("x".into(), *x), ("y".into(), *y), ("z".into(), *z)]);
                }
                _ => return Err(self.refuse(value, "json-deep")),
            }
        }
        Ok(flat)
    }

    fn numbers(self, items: &[Raw<'_>]) -> Result<Vec<f64>, Error> {
        let value = |(index, item): (usize, &Raw<'_>)| {
            if ["null", "NaN"].contains(&item.text()) || item.text().starts_with('"') {
                return Ok(f64::NAN);
            }
            let place = || Place { column: Some(index + 1), ..self.place(item.to_owned()) };
            super::table::expect_number(item.text(), false, place)
        };
        items.iter().enumerate().map(value).collect()
    }

    fn tree(self, value: Raw<'a>, depth: usize) -> Result<Tree, Error> {
        if depth > DEEPEST {
            return Err(self.refuse(value, "json-deep"));
        }
        Ok(match value.text().as_bytes() {
            [b'[', ..] => Tree::List(
                self.items(value)?.into_iter().map(|item| self.tree(item, depth + 1)).collect::<Result<_, _>>()?,
            ),
            [b'{', ..] => {
                let fields = self.fields(value)?.into_iter();
                Tree::Record(
                    fields
                        .map(|(key, item)| Ok((key.into_owned(), self.tree(item, depth + 1)?)))
                        .collect::<Result<_, Error>>()?,
                )
            }
            [b'"', ..] => Tree::Text(value.word()),
            _ => number(value.text()).map_or(Tree::Nothing, Tree::Number),
        })
    }
}

/// Bytes of a block in which line breaks are counted.
const BLOCK: usize = 1024;

fn breaks(text: &str) -> Vec<u32> {
    let mut breaks = 0;
    let before = |block: &[u8]| {
        let before = breaks;
        breaks += u32::try_from(line_breaks(block)).unwrap_or(0);
        before
    };
    text.as_bytes().chunks(BLOCK).map(before).collect()
}

fn line_breaks(bytes: &[u8]) -> usize {
    bytes.iter().filter(|byte| **byte == b'\n').count()
}

/// Objects that describe, and hold no table even if their lists look like columns.
fn is_description(key: &str) -> bool {
    let key = key.to_ascii_lowercase();
    ["coordinates", "landmark", "fiducial"].iter().any(|word| key.contains(word))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn parts(text: &str) -> Vec<Part> {
        read_json(text).map_err(|error| format!("{error:?}")).unwrap_or_default()
    }

    fn rows(part: &Part) -> Vec<Vec<String>> {
        match &part.body {
            Body::Cells(cells) => (0..cells.height()).map(|row| cells.row(row).map(String::from).collect()).collect(),
            _ => Vec::new(),
        }
    }

    #[test]
    fn lists_and_objects_become_tables_matrices_and_words() {
        let matrix = parts("[[1, 2.5],\n [NaN, null]]");
        let Some(Body::Numbers(numbers)) = matrix.first().map(|part| &part.body) else { panic!("{matrix:?}") };
        assert_eq!((numbers.dim(), numbers.iter().filter(|v| v.is_nan()).count()), ((2, 2), 2));
        let expected = [["name", "x", "y"], ["Fz", "1", "-2e-1"], ["Cz NaN", "", "3"]];
        for text in [
            r#"[{"name": "Fz", "x": 1, "y": -2e-1}, {"y": 3, "name": "Cz NaN", "x": null}]"#,
            r#"{"name": ["Fz", "Cz NaN"], "x": [1, null], "y": [-2e-1, 3]}"#,
        ] {
            let found = parts(text);
            assert_eq!(found.iter().map(rows).collect::<Vec<_>>(), [expected], "{text}");
        }
        let several = parts(r#"{"labels": ["Fz", "Cz"], "positions": [[1, 2, 3], [4, 5, 6]], "unit": "mm"}"#);
        let names: Vec<Option<&str>> = several.iter().map(|part| part.name.as_deref()).collect();
        assert_eq!(names, [Some("labels"), Some("positions"), None]);
        let record = vec![("unit".into(), Tree::Text("mm".into()))];
        assert_eq!(several.last().map(|part| &part.body), Some(&Body::Record(record)));
        let positions = parts(r#"[{"label": "Fz", "position": [1, 2, 3]}, {"label": "Cz", "position": [4, 5, 6]}]"#);
        assert_eq!(
            positions.iter().map(rows).collect::<Vec<_>>(),
            [[["label", "x", "y", "z"], ["Fz", "1", "2", "3"], ["Cz", "4", "5", "6"]]]
        );
    }

    #[test]
    fn a_description_keeps_its_lists() {
        let text =
            r#"{"EEGCoordinateUnits": "mm", "AnatomicalLandmarkCoordinates": {"LPA": [1, 2, 3], "NAS": [4, 5, 6]}}"#;
        let found = parts(text);
        assert!(
            matches!(found.as_slice(), [Part { body: Body::Record(record), .. }] if record.len() == 2),
            "{found:?}"
        );
    }

    #[test]
    fn what_is_no_table_is_refused_with_its_place() {
        let place = |text: &str| {
            let error = read_json(text).err().map(|error| error.finding().clone());
            error.map(|finding| (finding.code, finding.place.and_then(|place| Some((place.line?, place.byte)))))
        };
        assert_eq!(place("[[1, 2],\n[3, ]]"), Some((Code::JsonSyntax, Some((2, Some(14))))));
        assert_eq!(place("[[1, 2],"), Some((Code::JsonSyntax, Some((1, Some(9))))));
        assert_eq!(place("[[1, 2],\n[3]]"), Some((Code::TableRagged, Some((2, None)))));
        assert_eq!(place("[[1, 2],\n[3, [4]]]"), Some((Code::JsonContent, Some((2, Some(14))))));
        let deep = "[".repeat(100_000) + &"]".repeat(100_000);
        assert!(place(&deep).is_some());
    }
}
