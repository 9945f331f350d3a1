//! JSON (RFC 8259) cut into values, each still a piece of the text.
//!
//! A library's parser would turn every number into another form, forget where it stood, and weigh more than the rest of
//! the text readers together; what is needed is where values begin and end, and that all between them is well-formed.

use super::MOST_MAPS;
use std::borrow::Cow;

/// Most items of one list or object: the most maps with room for names.
const MOST_ITEMS: usize = MOST_MAPS + 8;

/// A well-formed value as it stands in the text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Raw<'a>(&'a str);

/// Where a text is no JSON.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Stray {
    /// Byte, from 0.
    pub at: usize,
    /// Whether the text ends there.
    pub is_end: bool,
}

impl<'a> Raw<'a> {
    /// The one value of a text.
    pub fn of(text: &'a str) -> Result<Self, Stray> {
        let mut scan = Scan { text: text.as_bytes(), at: 0 };
        let (start, end) = scan.value()?;
        scan.blanks();
        match scan.peek() {
            None => Ok(Self(text.get(start..end).unwrap_or_default())),
            Some(_) => Err(scan.stray()),
        }
    }

    /// Its text.
    pub fn text(self) -> &'a str {
        self.0
    }

    /// Whether it is neither a list nor an object.
    pub fn is_scalar(self) -> bool {
        !self.0.starts_with(['[', '{'])
    }

    /// A value without structure as a field of a table: `null` is missing, numbers stay as they are written.
    pub fn word(self) -> String {
        match self.0 {
            "null" | "NaN" => String::new(),
            plain => self.string().map_or_else(|| plain.into(), |text| text.trim().into()),
        }
    }

    /// Values of a list; `None` for anything else, and for more than a table can have.
    pub fn items(self) -> Option<Vec<Self>> {
        let mut scan = self.inside(b'[')?;
        let mut items = Vec::new();
        while scan.next_item(b']')? {
            items.push(self.cut(scan.value().ok()?));
            if items.len() > MOST_ITEMS {
                return None;
            }
        }
        Some(items)
    }

    /// Keys and values of an object, in their order; `None` for anything else, and for more than a table can have.
    pub fn fields(self) -> Option<Vec<(Cow<'a, str>, Self)>> {
        let mut scan = self.inside(b'{')?;
        let mut fields = Vec::new();
        while scan.next_item(b'}')? {
            let key = self.cut(scan.value().ok()?).string()?;
            scan.blanks();
            scan.at += 1;
            fields.push((key, self.cut(scan.value().ok()?)));
            if fields.len() > MOST_ITEMS {
                return None;
            }
        }
        Some(fields)
    }

    /// The content of a string; `None` for anything else. Half a pair of surrogates becomes the replacement character.
    pub fn string(self) -> Option<Cow<'a, str>> {
        let inside = self.0.strip_prefix('"')?.strip_suffix('"')?;
        if !inside.contains('\\') {
            return Some(inside.into());
        }
        let mut text = String::with_capacity(inside.len());
        let mut units: Vec<u16> = Vec::new();
        let mut rest = inside;
        while let Some(at) = rest.find('\\') {
            let (plain, escape) = rest.split_at_checked(at)?;
            if !plain.is_empty() {
                take(&mut units, &mut text);
                text.push_str(plain);
            }
            let kind = escape.get(1..2)?;
            let length = if kind == "u" { 6 } else { 2 };
            let unit = match kind {
                "u" => u16::from_str_radix(escape.get(2..6)?, 16).ok()?,
                "b" => 8,
                "f" => 12,
                "n" => 10,
                "r" => 13,
                "t" => 9,
                other => other.bytes().next()?.into(),
            };
            units.push(unit);
            rest = escape.get(length..)?;
        }
        take(&mut units, &mut text);
        text.push_str(rest);
        Some(text.into())
    }

    fn inside(self, opening: u8) -> Option<Scan<'a>> {
        let text = self.0.as_bytes();
        (text.first() == Some(&opening)).then_some(Scan { text, at: 1 })
    }

    fn cut(self, (start, end): (usize, usize)) -> Self {
        Self(self.0.get(start..end).unwrap_or_default())
    }
}

fn take(units: &mut Vec<u16>, text: &mut String) {
    text.extend(char::decode_utf16(units.drain(..)).map(|unit| unit.unwrap_or(char::REPLACEMENT_CHARACTER)));
}

#[derive(Clone, Copy)]
struct Scan<'a> {
    text: &'a [u8],
    at: usize,
}

impl Scan<'_> {
    fn peek(&self) -> Option<u8> {
        self.text.get(self.at).copied()
    }

    fn stray(&self) -> Stray {
        Stray { at: self.at, is_end: self.at >= self.text.len() }
    }

    fn blanks(&mut self) {
        while self.peek().is_some_and(|byte| b" \t\n\r".contains(&byte)) {
            self.at += 1;
        }
    }

    /// Goes to the next value of a list that is known to be well-formed; false at its end.
    fn next_item(&mut self, closing: u8) -> Option<bool> {
        self.blanks();
        if self.peek()? == b',' {
            self.at += 1;
            self.blanks();
        }
        Some(self.peek()? != closing)
    }

    /// Passes over one value, whatever it holds, and returns where it begins and ends. The open lists and objects are
    /// kept as bits, so that depth costs neither stack nor much memory.
    fn value(&mut self) -> Result<(usize, usize), Stray> {
        self.blanks();
        let start = self.at;
        let mut open: Vec<bool> = Vec::new();
        loop {
            self.blanks();
            let mut closed = true;
            match self.peek() {
                Some(b'"') => self.quoted()?,
                Some(b'-' | b'0'..=b'9') => self.number()?,
                Some(b't') => self.word(b"true")?,
                Some(b'f') => self.word(b"false")?,
                Some(b'n') => self.word(b"null")?,
                // Programs write this although JSON has it not.
                Some(b'N') => self.word(b"NaN")?,
                Some(opening @ (b'[' | b'{')) => {
                    self.at += 1;
                    self.blanks();
                    let is_object = opening == b'{';
                    closed = self.peek() == Some(if is_object { b'}' } else { b']' });
                    if closed {
                        self.at += 1;
                    } else {
                        open.push(is_object);
                        if is_object {
                            self.key()?;
                        }
                    }
                }
                _ => return Err(self.stray()),
            }
            // A value has ended: so may the lists and objects around it.
            while closed {
                let Some(&is_object) = open.last() else { return Ok((start, self.at)) };
                self.blanks();
                match self.peek() {
                    Some(b',') => {
                        self.at += 1;
                        if is_object {
                            self.blanks();
                            self.key()?;
                        }
                        closed = false;
                    }
                    Some(byte) if byte == (if is_object { b'}' } else { b']' }) => {
                        self.at += 1;
                        open.pop();
                    }
                    _ => return Err(self.stray()),
                }
            }
        }
    }

    fn key(&mut self) -> Result<(), Stray> {
        if self.peek() != Some(b'"') {
            return Err(self.stray());
        }
        self.quoted()?;
        self.blanks();
        if self.peek() != Some(b':') {
            return Err(self.stray());
        }
        self.at += 1;
        Ok(())
    }

    fn quoted(&mut self) -> Result<(), Stray> {
        self.at += 1;
        loop {
            match self.peek() {
                Some(b'"') => {
                    self.at += 1;
                    return Ok(());
                }
                Some(b'\\') => {
                    self.at += 1;
                    let digits = match self.peek() {
                        Some(b'u') => 4,
                        Some(b'"' | b'\\' | b'/' | b'b' | b'f' | b'n' | b'r' | b't') => 0,
                        _ => return Err(self.stray()),
                    };
                    self.at += 1;
                    for _ in 0..digits {
                        if !self.peek().is_some_and(|byte| byte.is_ascii_hexdigit()) {
                            return Err(self.stray());
                        }
                        self.at += 1;
                    }
                }
                Some(0..=31) | None => return Err(self.stray()),
                Some(_) => self.at += 1,
            }
        }
    }

    fn digits(&mut self) -> Result<(), Stray> {
        if !self.peek().is_some_and(|byte| byte.is_ascii_digit()) {
            return Err(self.stray());
        }
        while self.peek().is_some_and(|byte| byte.is_ascii_digit()) {
            self.at += 1;
        }
        Ok(())
    }

    fn number(&mut self) -> Result<(), Stray> {
        if self.peek() == Some(b'-') {
            self.at += 1;
        }
        if self.peek() == Some(b'0') {
            self.at += 1;
        } else {
            self.digits()?;
        }
        if self.peek() == Some(b'.') {
            self.at += 1;
            self.digits()?;
        }
        if self.peek().is_some_and(|byte| b"eE".contains(&byte)) {
            self.at += 1;
            if self.peek().is_some_and(|byte| b"+-".contains(&byte)) {
                self.at += 1;
            }
            self.digits()?;
        }
        Ok(())
    }

    fn word(&mut self, word: &[u8]) -> Result<(), Stray> {
        for byte in word {
            if self.peek() != Some(*byte) {
                return Err(self.stray());
            }
            self.at += 1;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn values_are_cut_as_the_standard_has_them() {
        for good in [
            "0",
            "-0.5e+7",
            " [ ] ",
            "{}",
            "[1,[2,{\"a\":[null]}],true]",
            "\"\\u00e9\\n\"",
            "{\"a\":1,\"a\":{}}",
            "NaN",
        ] {
            assert_eq!(Raw::of(good).map(Raw::text), Ok(good.trim()), "{good}");
        }
        for (bad, at) in [
            ("", 0),
            ("[1,]", 3),
            ("01", 1),
            ("1.", 2),
            ("[1 2]", 3),
            ("{\"a\" 1}", 5),
            ("{1:2}", 1),
            ("[1}", 2),
            ("\"\\x\"", 2),
            ("\"\\u12g4\"", 5),
            ("\"a\nb\"", 2),
            ("nul", 3),
            ("[[", 2),
            ("+1", 0),
        ] {
            assert_eq!(Raw::of(bad), Err(Stray { at, is_end: at == bad.len() }), "{bad}");
        }
    }

    #[test]
    fn items_fields_and_strings_come_back() {
        let texts = |raw: Result<Raw<'static>, Stray>| -> Option<Vec<&str>> {
            Some(raw.ok()?.items()?.into_iter().map(Raw::text).collect())
        };
        assert_eq!(texts(Raw::of("[ 1 , [2, 3] ,\"a,]\" ]")), Some(vec!["1", "[2, 3]", "\"a,]\""]));
        assert_eq!(texts(Raw::of("[]")), Some(vec![]));
        assert_eq!(texts(Raw::of("{}")), None);
        let fields = Raw::of("{ \"a b\" : {\"c\": 1} , \"d\\\"\":2}").ok().and_then(Raw::fields).unwrap_or_default();
        let fields: Vec<(&str, &str)> = fields.iter().map(|(key, value)| (key.as_ref(), value.text())).collect();
        assert_eq!(fields, [("a b", "{\"c\": 1}"), ("d\"", "2")]);
        let string = |text: &'static str| Raw::of(text).ok().and_then(Raw::string).map(Cow::into_owned);
        assert_eq!(string("\"a\\t\\u00e9\\ud83d\\ude00\\/\\\\ z\""), Some("a\té😀/\\ z".into()));
        assert_eq!(string("\"\\ud83d!\""), Some("\u{fffd}!".into()));
        assert_eq!(string("7"), None);
        let deep = "[".repeat(100_000) + &"]".repeat(100_000);
        assert!(Raw::of(&deep).is_ok() && Raw::of(deep.split_at(150_000).0).is_err());
    }
}
