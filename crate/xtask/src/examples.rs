//! The invented maps, with their contents, as the page carries them.

use crate::workspace::read;
use anyhow::{Context, Result, bail};
use serde_json::{Value, json};
use std::path::Path;

/// The list of examples with every named file replaced by its name and content; one example a line.
pub fn examples(folder: &Path) -> Result<String> {
    let list: Value = serde_json::from_str(&read(&folder.join("examples.json"))?).context("in examples.json")?;
    let list = list.as_array().context("examples.json is no list")?;
    let mut lines = Vec::new();
    for example in list {
        let text = |key: &str| {
            example[key].as_str().with_context(|| format!("an example in examples.json without {key}: {example}"))
        };
        let file = |key: &str| -> Result<Value> {
            if example[key].is_null() && key == "electrodes" {
                return Ok(Value::Null);
            }
            let name = text(key)?;
            if Path::new(name).components().count() != 1 {
                bail!("examples.json names {name}, which is not a file beside it");
            }
            Ok(json!({ "name": name, "content": read(&folder.join(name))? }))
        };
        let carried = json!({
            "name": text("name")?,
            "title": text("title")?,
            "line": text("line")?,
            "unit": example["unit"],
            "maps": file("maps")?,
            "electrodes": file("electrodes")?,
        });
        // No text of a table may end the element that carries it.
        lines.push(carried.to_string().replace('<', "\\u003c"));
    }
    Ok(format!("[\n{}\n]", lines.join(",\n")))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn carried(list: &str) -> Result<String> {
        let folder = std::env::temp_dir().join(format!("inward-examples-{}", std::process::id()));
        let folder = folder.join(list.len().to_string());
        std::fs::create_dir_all(&folder)?;
        std::fs::write(folder.join("examples.json"), list)?;
        std::fs::write(folder.join("a.tsv"), "Cz\t1\n</script>\n")?;
        let carried = examples(&folder);
        std::fs::remove_dir_all(&folder)?;
        carried
    }

    #[test]
    fn files_are_carried_with_their_contents() {
        let list = r#"[{"name": "a", "title": "A", "line": "b", "maps": "a.tsv", "electrodes": null}]"#;
        let text = carried(list).unwrap();
        assert!(!text.contains("</"));
        let list: Value = serde_json::from_str(&text).unwrap();
        assert_eq!(list[0]["maps"], json!({ "name": "a.tsv", "content": "Cz\t1\n</script>\n" }));
        assert_eq!(list[0]["electrodes"], Value::Null);
    }

    #[test]
    fn incomplete_lists_are_refused() {
        assert!(carried(r#"[{"name": "a", "title": "A", "maps": "a.tsv"}]"#).is_err());
        assert!(carried(r#"[{"name": "a", "title": "A", "line": "b", "maps": "../a.tsv"}]"#).is_err());
    }
}
