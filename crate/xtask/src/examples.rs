//! The invented maps, with their contents, as the page carries them.

use crate::workspace::read;
use anyhow::{Context, Result, bail};
use serde_json::{Value, json};
use std::collections::BTreeMap;
use std::path::Path;

/// `{ files, list }`: the list of examples – maps, further tables of maps `beside`, electrodes – and, by name, the content of every file they name; one file or example a line.
pub fn examples(folder: &Path) -> Result<String> {
    let list: Value = serde_json::from_str(&read(&folder.join("examples.json"))?).context("in examples.json")?;
    let list = list.as_array().context("examples.json is no list")?;
    let mut files = BTreeMap::new();
    let mut lines = Vec::new();
    for example in list {
        let text = |key: &str| {
            example[key].as_str().with_context(|| format!("an example in examples.json without {key}: {example}"))
        };
        let given = |key: &str| (!example[key].is_null()).then(|| text(key)).transpose();
        let beside = example["beside"].as_array().into_iter().flatten().filter_map(Value::as_str);
        for name in [text("maps")?].into_iter().chain(given("electrodes")?).chain(beside) {
            if Path::new(name).components().count() != 1 {
                bail!("examples.json names {name}, which is not a file beside it");
            }
            files.insert(name, read(&folder.join(name))?);
        }
        let carried = json!({
            "name": text("name")?,
            "title": text("title")?,
            "line": text("line")?,
            "unit": example["unit"],
            "maps": example["maps"],
            "beside": example["beside"].as_array().cloned().unwrap_or_default(),
            "electrodes": example["electrodes"],
        });
        lines.push(carried.to_string());
    }
    let files: Vec<String> =
        files.iter().map(|(name, content)| format!("{}: {}", json!(name), json!(content))).collect();
    let carried = format!("{{ \"files\": {{\n{}\n}}, \"list\": [\n{}\n] }}", files.join(",\n"), lines.join(",\n"));
    // No text of a table may end the element that carries it.
    Ok(carried.replace('<', "\\u003c"))
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
        let list =
            r#"[{"name": "a", "title": "A", "line": "b", "maps": "a.tsv", "beside": ["a.tsv"], "electrodes": null}]"#;
        let text = carried(list).unwrap();
        assert!(!text.contains("</"));
        let list: Value = serde_json::from_str(&text).unwrap();
        assert_eq!(list["list"][0]["maps"], "a.tsv");
        assert_eq!(list["files"], json!({ "a.tsv": "Cz\t1\n</script>\n" }));
        assert_eq!(list["list"][0]["electrodes"], Value::Null);
        assert_eq!(list["list"][0]["beside"], json!(["a.tsv"]));
    }

    #[test]
    fn incomplete_lists_are_refused() {
        assert!(carried(r#"[{"name": "a", "title": "A", "maps": "a.tsv"}]"#).is_err());
        assert!(carried(r#"[{"name": "a", "title": "A", "line": "b", "maps": "../a.tsv"}]"#).is_err());
        assert!(
            carried(r#"[{"name": "a", "title": "A", "line": "b", "maps": "a.tsv", "beside": ["b.tsv"]}]"#).is_err()
        );
    }
}
