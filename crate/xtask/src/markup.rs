//! The answer's elements as data that a script makes them from: packed with it, they take a quarter of the room, and no
//! text is ever read as markup by the page.

use anyhow::{Result, bail};
use serde_json::{Map, Value, json};

/// Elements without content.
const VOID: [&str; 2] = ["br", "input"];

/// Elements and text of a template as JSON: text is a string, an element an array of its name, its attributes and what
/// is in it. Runs of blanks are one, and none stand at the ends of an element.
pub fn markup(template: &str) -> Result<String> {
    let mut open: Vec<(String, Vec<Value>)> = vec![(String::new(), Vec::new())];
    let mut rest = template;
    while !rest.is_empty() {
        let line = template[..template.len() - rest.len()].matches('\n').count() + 1;
        if !rest.starts_with('<') {
            let end = rest.find('<').unwrap_or(rest.len());
            let last = open.len() - 1;
            let children = &mut open[last].1;
            let text = collapsed(&rest[..end]);
            if text.contains(['&', '>']) {
                bail!("answer.html:{line}: `{}` is not understood", text.trim());
            }
            // The name and the attributes stand before.
            let first = children.len() == if last == 0 { 0 } else { 2 };
            children.push(Value::String(if first { text.trim_start().into() } else { text }));
            rest = &rest[end..];
            continue;
        }
        let Some(end) = rest.find('>') else { bail!("answer.html:{line}: a tag does not end") };
        let tag = &rest[1..end];
        rest = &rest[end + 1..];
        if let Some(name) = tag.strip_prefix('/') {
            close(&mut open, name, line)?;
            continue;
        }
        let (name, attributes) = tag.split_once(char::is_whitespace).unwrap_or((tag, ""));
        if !name.bytes().all(|byte| byte.is_ascii_lowercase() || byte.is_ascii_digit()) {
            bail!("answer.html:{line}: `<{tag}>` is not understood");
        }
        let attributes = Value::Object(read_attributes(attributes, line)?);
        open.push((name.to_owned(), vec![json!(name), attributes]));
        if VOID.contains(&name) {
            close(&mut open, name, line)?;
        }
    }
    match &mut open[..] {
        [(_, children)] => {
            trim_end(children);
            children.retain(|part| part.as_str() != Some(""));
            Ok(Value::Array(std::mem::take(children)).to_string())
        }
        _ => bail!("answer.html: <{}> is not closed", open[open.len() - 1].0),
    }
}

/// Ends the element that was opened last.
fn close(open: &mut Vec<(String, Vec<Value>)>, name: &str, line: usize) -> Result<()> {
    let Some((opened, mut content)) = open.pop().filter(|(opened, _)| opened == name) else {
        bail!("answer.html:{line}: </{name}> closes nothing");
    };
    debug_assert_eq!(opened, name);
    trim_end(&mut content);
    content.retain(|part| part.as_str() != Some(""));
    let Some((_, parent)) = open.last_mut() else { bail!("answer.html:{line}: </{name}> closes nothing") };
    parent.push(Value::Array(content));
    Ok(())
}

fn trim_end(content: &mut [Value]) {
    if let Some(Value::String(text)) = content.last_mut() {
        text.truncate(text.trim_end_matches(' ').len());
    }
}

/// `name="value"` and single names, divided by blanks.
fn read_attributes(text: &str, line: usize) -> Result<Map<String, Value>> {
    let mut found = Map::new();
    let mut rest = text.trim();
    while !rest.is_empty() {
        let end = rest.find(['=', ' ']).unwrap_or(rest.len());
        let name = &rest[..end];
        rest = &rest[end..];
        let mut value = "";
        if let Some(after) = rest.strip_prefix("=\"") {
            let Some((inside, left)) = after.split_once('"') else {
                bail!("answer.html:{line}: the value of {name} does not end");
            };
            (value, rest) = (inside, left);
        } else if rest.starts_with('=') {
            bail!("answer.html:{line}: the value of {name} stands in no quotation marks");
        }
        if value.contains('&') || name.starts_with("on") || found.insert(name.to_owned(), json!(value)).is_some() {
            bail!("answer.html:{line}: the attribute {name} is not understood");
        }
        rest = rest.trim_start();
    }
    Ok(found)
}

/// Blanks and line breaks as one blank; one that does not break stays what it is.
fn collapsed(text: &str) -> String {
    let text = text.replace("&nbsp;", "\u{a0}");
    let mut tight = String::new();
    for letter in text.chars() {
        match letter {
            ' ' | '\n' if tight.ends_with(' ') => {}
            '\n' => tight.push(' '),
            other => tight.push(other),
        }
    }
    tight
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn elements_become_arrays() {
        let template = "<p class=\"a b\" hidden>\n  one <b>two</b>\n  <b></b> 3&nbsp;%\n</p>\n<input value=\"1\">\n";
        let made: Value = serde_json::from_str(&markup(template).unwrap()).unwrap();
        let p = json!(["p", { "class": "a b", "hidden": "" }, "one ", ["b", {}, "two"], " ", ["b", {}], " 3\u{a0}%"]);
        assert_eq!(made, json!([p, " ", ["input", { "value": "1" }]]));
    }

    #[test]
    fn what_is_not_understood_is_refused_with_its_line() {
        for (template, why) in [
            ("<p>\n</b>", "answer.html:2: </b>"),
            ("<p>", "<p> is not closed"),
            ("\n<p a=b></p>", "answer.html:2: the value of a"),
            ("<p>a &lt; b</p>", "answer.html:1: `a &lt; b`"),
            ("<p onclick=\"x\"></p>", "answer.html:1: the attribute onclick"),
            ("<!-- a -->", "answer.html:1: `<!-- a -->`"),
            ("</p>", "answer.html:1: </p> closes nothing"),
        ] {
            let error = markup(template).unwrap_err().to_string();
            assert!(error.contains(why), "{template}: {error}");
        }
    }
}
