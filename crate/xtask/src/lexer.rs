//! JavaScript cut into tokens: as much of the grammar as joining and scanning need.

use anyhow::{Result, bail};

/// What a token is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Kind {
    /// A name, a keyword or a number.
    Word,
    /// A quoted string, quotes included.
    Quoted,
    /// A piece of a template between its backticks and `${…}`.
    Template,
    /// A regular expression.
    Pattern,
    /// A single character of punctuation.
    Mark,
}

/// A token with its place.
#[derive(Clone, Copy, Debug)]
pub struct Token<'a> {
    /// What it is.
    pub kind: Kind,
    /// Its text.
    pub text: &'a str,
    /// The byte it starts at.
    pub start: usize,
    /// Its line, from 1.
    pub line: usize,
    /// How many brackets are open around it; a bracket stands outside its own pair.
    pub depth: usize,
}

impl Token<'_> {
    /// The byte after it.
    pub fn end(&self) -> usize {
        self.start + self.text.len()
    }

    /// Whether it is this name or mark (and no string or comment).
    pub fn is(&self, text: &str) -> bool {
        matches!(self.kind, Kind::Word | Kind::Mark) && self.text == text
    }
}

/// Cuts a script into tokens, comments left out. An error names the line.
pub fn tokens(script: &str) -> Result<Vec<Token<'_>>> {
    let mut lexer = Lexer { script, at: 0, line: 1, open: Vec::new(), tokens: Vec::new() };
    while let Some(next) = lexer.peek() {
        lexer.step(next)?;
    }
    match lexer.open.last() {
        Some((bracket, line)) => bail!("{line}: `{bracket}` is never closed"),
        None => Ok(lexer.tokens),
    }
}

/// The script without comments and without blanks that nothing hangs on. An end of a line stays where it may end a
/// statement.
pub fn terse(script: &str) -> Result<String> {
    let mut terse = String::with_capacity(script.len());
    let mut last: Option<Token> = None;
    for token in tokens(script)? {
        let gap = &script[last.map_or(0, |last| last.end())..token.start];
        let opens = last.is_none_or(|last| last.kind == Kind::Mark && "{([,;".contains(last.text));
        if gap.contains('\n') && !opens && !token.text.starts_with('}') {
            terse.push('\n');
        } else if !gap.is_empty() && last.is_some_and(|last| parts(&last, &token)) {
            terse.push(' ');
        }
        terse.push_str(token.text);
        last = Some(token);
    }
    Ok(terse)
}

/// Whether two tokens would become others without a blank between them.
fn parts(last: &Token, next: &Token) -> bool {
    let (end, start) = (last.text.chars().next_back(), next.text.chars().next());
    let word = |character: Option<char>| character.is_some_and(|one| is_word(one) || one == '\\');
    let digits = last.text.starts_with(|one: char| one.is_ascii_digit());
    (word(end) && word(start))
        || (digits && next.is("."))
        || (end == start && last.kind == Kind::Mark && "+-/&|?*<>=!.".contains(last.text))
        || (end == Some('/') || start == Some('/'))
}

struct Lexer<'a> {
    script: &'a str,
    at: usize,
    line: usize,
    /// Open brackets with their lines; `$` is a template's `${`.
    open: Vec<(char, usize)>,
    tokens: Vec<Token<'a>>,
}

impl<'a> Lexer<'a> {
    fn peek(&self) -> Option<char> {
        self.rest().chars().next()
    }

    fn rest(&self) -> &'a str {
        &self.script[self.at..]
    }

    fn step(&mut self, next: char) -> Result<()> {
        let rest = self.rest();
        if next.is_whitespace() {
            self.skip(next.len_utf8());
        } else if rest.starts_with("//") {
            self.skip(rest.find('\n').unwrap_or(rest.len()));
        } else if rest.starts_with("/*") {
            match rest.find("*/") {
                Some(end) => self.skip(end + 2),
                None => bail!("{}: the comment is never closed", self.line),
            }
        } else if is_word(next) {
            let length = rest.find(|character| !is_word(character)).unwrap_or(rest.len());
            self.push(Kind::Word, length);
        } else if next == '"' || next == '\'' {
            let length = self.closed_by(&[next], 1)?;
            self.push(Kind::Quoted, length);
        } else if next == '`' {
            self.template()?;
        } else if next == '/' && self.pattern_may_start() {
            let length = self.pattern()?;
            self.push(Kind::Pattern, length);
        } else {
            self.mark(next)?;
        }
        Ok(())
    }

    fn mark(&mut self, next: char) -> Result<()> {
        match next {
            '{' | '(' | '[' => {
                self.push(Kind::Mark, 1);
                self.open.push((next, self.line));
            }
            '}' | ')' | ']' => match (self.open.pop(), next) {
                (Some(('$', _)), '}') => self.template()?,
                (Some(('{', _)), '}') | (Some(('(', _)), ')') | (Some(('[', _)), ']') => self.push(Kind::Mark, 1),
                _ => bail!("{}: `{next}` closes nothing", self.line),
            },
            _ => self.push(Kind::Mark, next.len_utf8()),
        }
        Ok(())
    }

    /// A piece of a template: from a backtick or the end of `${…}` to the next of them.
    fn template(&mut self) -> Result<()> {
        let mut length = 1;
        loop {
            length = self.closed_by(&['`', '$'], length)?;
            let so_far = &self.rest()[..length];
            if so_far.ends_with('`') {
                self.push(Kind::Template, length);
                return Ok(());
            }
            if self.rest()[length..].starts_with('{') {
                self.push(Kind::Template, length + 1);
                self.open.push(('$', self.line));
                return Ok(());
            }
        }
    }

    /// The length up to the first of these characters that no backslash escapes.
    fn closed_by(&self, closers: &[char], from: usize) -> Result<usize> {
        let mut escaped = false;
        for (at, character) in self.rest()[from..].char_indices() {
            if escaped {
                escaped = false;
            } else if character == '\\' {
                escaped = true;
            } else if closers.contains(&character) {
                return Ok(from + at + character.len_utf8());
            } else if character == '\n' && !closers.contains(&'`') {
                break;
            }
        }
        bail!("{}: the string is never closed", self.line)
    }

    fn pattern(&self) -> Result<usize> {
        let (mut escaped, mut in_class) = (false, false);
        for (at, character) in self.rest().char_indices().skip(1) {
            match character {
                '\n' => break,
                _ if escaped => escaped = false,
                '\\' => escaped = true,
                '[' => in_class = true,
                ']' => in_class = false,
                '/' if !in_class => return Ok(at + 1),
                _ => {}
            }
        }
        bail!("{}: the regular expression is never closed", self.line)
    }

    /// A slash after a value divides; anywhere else it starts a regular expression.
    fn pattern_may_start(&self) -> bool {
        let Some(last) = self.tokens.last() else { return true };
        match last.kind {
            Kind::Mark => !matches!(last.text, ")" | "]" | "}"),
            Kind::Word => matches!(
                last.text,
                "return"
                    | "typeof"
                    | "case"
                    | "in"
                    | "of"
                    | "delete"
                    | "void"
                    | "throw"
                    | "new"
                    | "else"
                    | "yield"
                    | "await"
            ),
            Kind::Template => last.text.ends_with("${"),
            Kind::Quoted | Kind::Pattern => false,
        }
    }

    fn push(&mut self, kind: Kind, length: usize) {
        let text = &self.rest()[..length];
        let token = Token { kind, text, start: self.at, line: self.line, depth: self.open.len() };
        self.tokens.push(token);
        self.skip(length);
    }

    fn skip(&mut self, length: usize) {
        self.line += self.rest()[..length].matches('\n').count();
        self.at += length;
    }
}

fn is_word(character: char) -> bool {
    character.is_alphanumeric() || matches!(character, '_' | '$' | '#')
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(script: &str) -> Vec<&str> {
        tokens(script).unwrap().iter().map(|token| token.text).collect()
    }

    #[test]
    fn strings_comments_and_patterns_are_told_apart() {
        assert_eq!(texts("a / b / c"), ["a", "/", "b", "/", "c"]);
        assert_eq!(texts("x = /[/\"]}/u; // }\ny"), ["x", "=", "/[/\"]}/", "u", ";", "y"]);
        assert_eq!(texts(r#"f("\"}", '{') /* ( */"#), ["f", "(", r#""\"}""#, ",", "'{'", ")"]);
        assert_eq!(texts("return /a/"), ["return", "/a/"]);
    }

    #[test]
    fn templates_hold_expressions() {
        assert_eq!(texts("`a${ {b: `$${c}`} }\\`$d`"), ["`a${", "{", "b", ":", "`$${", "c", "}`", "}", "}\\`$d`"]);
    }

    #[test]
    fn terse_scripts_keep_gaps_strings_and_ends_of_lines() {
        let script = "// first\nlet a = /* b */ 1 // c\n  let  d = `// ${ a /* e\n */ }\n  `;\n\n";
        assert_eq!(terse(script).unwrap(), "let a=1\nlet d=`// ${a}\n  `;");
        for (script, short) in [
            ("a + +b - -c", "a+ +b- -c"),
            ("return /x/u .test (y)", "return /x/u.test(y)"),
            ("if (a) {\n  b();\n}\nc\n(d)", "if(a){b();}\nc\n(d)"),
            ("1 .toString()", "1 .toString()"),
            ("a / b / c", "a / b / c"),
            ("x = (a, b) => ({ ...a, b: `${ c } d` });", "x=(a,b)=>({...a,b:`${c} d`});"),
            ("class A {\n  #b = 1;\n  static c\n  d() {}\n}", "class A{#b=1;static c\nd(){}}"),
            ("typeof 'x' in y", "typeof'x'in y"),
        ] {
            assert_eq!(terse(script).unwrap(), short);
        }
    }

    #[test]
    fn places_count_lines_and_brackets() {
        let found = tokens("a\n`\n` {\n b }").unwrap();
        let b = found.iter().find(|token| token.is("b")).unwrap();
        assert_eq!((b.line, b.depth), (4, 1));
    }

    #[test]
    fn what_does_not_balance_is_refused_with_its_line() {
        for (script, line) in [("\n{", "2:"), ("(\n]", "2:"), ("\n\n'a", "3:"), ("/* a", "1:"), ("`${a", "1:")] {
            let error = tokens(script).unwrap_err().to_string();
            assert!(error.starts_with(line), "{script}: {error}");
        }
    }
}
