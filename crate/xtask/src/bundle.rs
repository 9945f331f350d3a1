//! The page's modules joined into one classic script.
//!
//! Only named imports of relative paths and `export` before a declaration are understood; then joining is leaving
//! those words out and putting every module after those it imports. Anything else is refused with its place.

use crate::lexer::{Kind, Token, tokens};
use crate::workspace::{files, read, slashed};
use anyhow::{Context, Result, bail};
use std::collections::BTreeMap;
use std::ops::Range;
use std::path::Path;

/// Names that the build tool defines around the joined modules.
const AMBIENT: [&str; 3] = ["wasmGlue", "wasm_bindgen", "WASM_PACKED"];

/// All modules of a folder by their paths in it.
pub struct Modules(BTreeMap<String, Module>);

/// A module, read.
pub struct Module {
    script: String,
    /// What it imports, in order.
    pub imports: Vec<Import>,
    exports: Vec<String>,
    /// Top-level names with their lines.
    declared: Vec<(String, usize)>,
    /// What is left out when it is joined.
    cuts: Vec<Range<usize>>,
}

/// One import statement.
pub struct Import {
    /// The imported module's path in the folder.
    pub path: String,
    /// The statement's line.
    pub line: usize,
    names: Vec<String>,
}

/// An entry with everything it needs.
pub struct Joined {
    /// A script without imports and exports.
    pub code: String,
    /// What the entry itself exports.
    pub exports: Vec<String>,
}

impl Modules {
    /// Reads every module under a folder.
    pub fn read(folder: &Path) -> Result<Self> {
        let mut sources = BTreeMap::new();
        for path in files(folder)? {
            if path.extension().is_some_and(|extension| extension == "js") {
                sources.insert(slashed(path.strip_prefix(folder)?), read(&path)?);
            }
        }
        Self::parse(sources)
    }

    /// Takes the modules' texts by their paths.
    pub fn parse(sources: BTreeMap<String, String>) -> Result<Self> {
        let mut modules = BTreeMap::new();
        let mut names: BTreeMap<String, String> = BTreeMap::new();
        for (path, script) in sources {
            // The lexer's and parser's errors start with the line.
            let module = Module::parse(&path, script).map_err(|error| anyhow::anyhow!("{path}:{error}"))?;
            for (name, line) in &module.declared {
                let place = format!("{path}:{line}");
                if AMBIENT.contains(&name.as_str()) {
                    bail!("{place}: `{name}` is a name of the build tool");
                }
                if let Some(first) = names.insert(name.clone(), place.clone()) {
                    bail!("{place}: `{name}` is also declared in {first}, and joined they are one script");
                }
            }
            modules.insert(path, module);
        }
        Ok(Self(modules))
    }

    /// The modules by path.
    pub fn iter(&self) -> impl Iterator<Item = (&String, &Module)> {
        self.0.iter()
    }

    /// Joins an entry and what it imports, imported modules first.
    pub fn join(&self, entry: &str) -> Result<Joined> {
        let module = self.0.get(entry).with_context(|| format!("{entry} is missing"))?;
        let mut order = Vec::new();
        self.visit(entry, &mut Vec::new(), &mut order)?;
        let mut code = String::new();
        for path in order {
            code += &format!("// {path}\n{}\n", self.0[path].joined().trim());
        }
        Ok(Joined { code, exports: module.exports.clone() })
    }

    fn visit<'a>(&'a self, path: &'a str, above: &mut Vec<&'a str>, order: &mut Vec<&'a str>) -> Result<()> {
        if order.contains(&path) {
            return Ok(());
        }
        above.push(path);
        for import in &self.0[path].imports {
            let place = format!("{path}:{}", import.line);
            let Some(imported) = self.0.get(&import.path) else { bail!("{place}: {} is missing", import.path) };
            if let Some(name) = import.names.iter().find(|name| !imported.exports.contains(name)) {
                bail!("{place}: {} does not export `{name}`", import.path);
            }
            if let Some(at) = above.iter().position(|&one| one == import.path) {
                bail!("{place}: modules import one another in a circle: {} > {}", above[at..].join(" > "), import.path);
            }
            self.visit(&import.path, above, order)?;
        }
        above.pop();
        order.push(path);
        Ok(())
    }
}

impl Module {
    fn parse(path: &str, script: String) -> Result<Self> {
        let found = tokens(&script)?;
        let mut module =
            Self { script: String::new(), imports: vec![], exports: vec![], declared: vec![], cuts: vec![] };
        let mut at = 0;
        while let Some(token) = found.get(at) {
            let property = at > 0 && found[at - 1].is(".");
            if token.is("import") && !property {
                at += module.import(path, &found[at..])?;
            } else if token.is("export") && token.depth == 0 {
                module.export(&found[at..])?;
                at += 1;
            } else {
                if token.depth == 0 && starts_statement(&found, at) {
                    module.declare(&found[at..])?;
                }
                at += 1;
            }
        }
        module.script = script;
        Ok(module)
    }

    /// `import { a, b } from "./c.js";` and nothing else; returns the number of tokens.
    fn import(&mut self, path: &str, found: &[Token]) -> Result<usize> {
        let line = found[0].line;
        let refused = || format!("{line}: only `import {{ name, … }} from \"./path.js\";` is understood");
        let length = 1 + found.iter().position(|token| token.is(";")).with_context(refused)?;
        let [_, open, names @ .., close, from, source, end] = &found[..length] else { bail!(refused()) };
        let shaped = found[0].depth == 0 && open.is("{") && close.is("}") && from.is("from");
        if !shaped || source.kind != Kind::Quoted {
            bail!(refused());
        }
        let mut imported = Vec::new();
        for (at, name) in names.iter().enumerate() {
            match (at % 2, name.kind) {
                (0, Kind::Word) => imported.push(name.text.to_owned()),
                (1, Kind::Mark) if name.text == "," => {}
                _ => bail!(refused()),
            }
        }
        let target = resolve(path, source.text.trim_matches(['"', '\''])).with_context(refused)?;
        self.imports.push(Import { path: target, line, names: imported });
        self.cuts.push(found[0].start..end.end());
        Ok(length)
    }

    fn export(&mut self, found: &[Token]) -> Result<()> {
        let [export, next, ..] = found else { bail!("{}: the export is cut short", found[0].line) };
        if !matches!(next.text, "function" | "async" | "class" | "const" | "let") {
            bail!("{}: only `export` before function, class, const or let is understood", export.line);
        }
        self.exports.extend(declared_name(&found[1..])?.map(str::to_owned));
        self.cuts.push(export.start..next.start);
        Ok(())
    }

    fn declare(&mut self, found: &[Token]) -> Result<()> {
        let line = found[0].line;
        if found[0].is("var") {
            bail!("{line}: `var` at the top level; write const or let");
        }
        if let Some(name) = declared_name(found)? {
            self.declared.push((name.to_owned(), line));
        }
        if found[0].is("const") || found[0].is("let") {
            let mut statement = found.iter().take_while(|token| !(token.depth == 0 && token.is(";")));
            if statement.any(|token| token.depth == 0 && token.is(",")) {
                bail!("{line}: one name per declaration at the top level");
            }
        }
        Ok(())
    }

    fn joined(&self) -> String {
        let mut code = String::new();
        let mut from = 0;
        for cut in &self.cuts {
            code += &self.script[from..cut.start];
            from = cut.end;
        }
        code + &self.script[from..]
    }
}

/// The name that a statement declares, if it is a declaration.
fn declared_name<'a>(found: &[Token<'a>]) -> Result<Option<&'a str>> {
    let mut words = found.iter().skip_while(|token| token.is("async") || token.is("export"));
    let Some(keyword) = words.next() else { return Ok(None) };
    if !matches!(keyword.text, "function" | "class" | "const" | "let") {
        return Ok(None);
    }
    match words.find(|token| !token.is("*")) {
        Some(name) if name.kind == Kind::Word => Ok(Some(name.text)),
        _ => bail!("{}: a plain name is needed after `{}` at the top level", keyword.line, keyword.text),
    }
}

fn starts_statement(found: &[Token], at: usize) -> bool {
    let Some(last) = at.checked_sub(1).map(|before| found[before]) else { return true };
    last.is(";") || last.is("}") || last.is("export") || (last.line < found[at].line && last.kind != Kind::Mark)
}

/// A relative path as one in the folder; none if it is not relative, leaves the folder or is no script.
fn resolve(from: &str, path: &str) -> Option<String> {
    if !(path.starts_with("./") || path.starts_with("../")) || !path.ends_with(".js") {
        return None;
    }
    let mut parts: Vec<&str> = from.split('/').collect();
    parts.pop();
    for part in path.split('/') {
        match part {
            "." => {}
            ".." => drop(parts.pop()?),
            part => parts.push(part),
        }
    }
    Some(parts.join("/"))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn modules(sources: &[(&str, &str)]) -> Result<Modules> {
        Modules::parse(sources.iter().map(|(path, script)| (path.to_string(), script.to_string())).collect())
    }

    fn refused(sources: &[(&str, &str)]) -> String {
        modules(sources).and_then(|modules| modules.join("a.js")).err().expect("refused").to_string()
    }

    #[test]
    fn imported_modules_come_first_and_once() {
        let joined = modules(&[
            ("a.js", "import { b } from \"./x/b.js\";\nimport {\n  c,\n} from \"./c.js\";\nexport const a = b + c;\n"),
            ("c.js", "export let c = 1; // import\n"),
            ("x/b.js", "import { c } from \"../c.js\";\nexport async function* b() { return { export: c }; }\n"),
        ]);
        let joined = joined.unwrap().join("a.js").unwrap();
        assert_eq!(
            joined.code,
            "// c.js\nlet c = 1; // import\n// x/b.js\nasync function* b() { return { export: c }; }\n// a.js\nconst a = b + c;\n"
        );
        assert_eq!(joined.exports, ["a"]);
    }

    #[test]
    fn what_is_not_a_named_import_is_refused_with_its_place() {
        for statement in [
            "import b from \"./b.js\";",
            "import { b as c } from \"./b.js\";",
            "import * as b from \"./b.js\";",
            "import \"./b.js\";",
            "import { b } from \"b.js\";",
            "import { b } from \"../b.js\";",
            "import { b } from './b.mjs';",
            "const b = await import(\"./b.js\");",
            "function f() { return import.meta; }",
        ] {
            let error = refused(&[("a.js", &format!("\n{statement}\n")), ("b.js", "export const b = 1;")]);
            assert!(error.starts_with("a.js:2: only `import"), "{statement}: {error}");
        }
    }

    #[test]
    fn what_is_not_an_exported_declaration_is_refused_with_its_place() {
        for statement in ["export default 1;", "export { a };", "export * from \"./b.js\";"] {
            let error = refused(&[("a.js", &format!("const a = 1;\n{statement}\n"))]);
            assert!(error.starts_with("a.js:2: only `export`"), "{statement}: {error}");
        }
        assert!(refused(&[("a.js", "export const { a } = {};")]).starts_with("a.js:1: a plain name"));
        assert!(refused(&[("a.js", "let a = 1, b = f(1, 2);")]).starts_with("a.js:1: one name"));
        assert!(refused(&[("a.js", "\nvar a = 1;")]).starts_with("a.js:2: `var`"));
    }

    #[test]
    fn names_are_unique_over_all_modules() {
        let error = refused(&[("a.js", "const x = class y {};"), ("b.js", "const f = 1\nfunction x() {}")]);
        assert!(error.starts_with("b.js:2: `x` is also declared in a.js:1"), "{error}");
        assert!(refused(&[("a.js", "function wasmGlue() {}")]).contains("of the build tool"));
        assert!(modules(&[("a.js", "function f() { const x = 1; }"), ("b.js", "const x = 1;")]).is_ok());
    }

    #[test]
    fn circles_and_missing_names_are_refused_with_their_place() {
        let error = refused(&[
            ("a.js", "import { b } from \"./b.js\";\nexport const a = 1;"),
            ("b.js", "\nimport { a } from \"./a.js\";\nexport const b = 1;"),
        ]);
        assert!(error.starts_with("b.js:2: modules import one another in a circle: a.js > b.js > a.js"), "{error}");
        let error = refused(&[("a.js", "import { b } from \"./b.js\";"), ("b.js", "const b = 1;")]);
        assert!(error.starts_with("a.js:1: b.js does not export `b`"), "{error}");
        assert!(refused(&[("a.js", "import { b } from \"./b.js\";")]).starts_with("a.js:1: b.js is missing"));
    }
}
