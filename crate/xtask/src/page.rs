//! The page as one sealed file.

use anyhow::{Context, Result, bail};
use base64::prelude::{BASE64_STANDARD, Engine};
use sha2::{Digest, Sha256};

/// What goes into the page's template.
pub struct Parts<'a> {
    /// All style sheets.
    pub style: &'a str,
    /// The script that unpacks and runs the page's own.
    pub loader: &'a str,
    /// The page's own script as it runs.
    pub script: &'a str,
    /// The same, packed.
    pub packed: &'a str,
    /// The worker's script, packed.
    pub worker: &'a str,
    /// The compiled module, packed.
    pub wasm: &'a str,
    /// The licence notices, packed.
    pub notices: &'a str,
}

/// The largest page, in bytes, so that it stays a quick download and a small attachment.
pub const LIMIT: usize = 600_000;

/// Puts the parts where the template's comments ask for them, each alone on its line.
pub fn page(template: &str, parts: &Parts) -> Result<String> {
    let style = element("style", "", parts.style)?;
    let loader = element("script", "", parts.loader)?;
    let policy = policy(&[&content(parts.loader), parts.script], &content(parts.style));
    let filled = [
        ("policy", format!("<meta http-equiv=\"Content-Security-Policy\" content=\"{policy}\">")),
        ("style", style),
        ("wasm", element("script", " type=\"text/plain\" id=\"wasm\"", parts.wasm)?),
        ("worker", element("script", " type=\"text/plain\" id=\"worker\"", parts.worker)?),
        ("notices", element("script", " type=\"text/plain\" id=\"notices-text\"", parts.notices)?),
        ("script", element("script", " type=\"text/plain\" id=\"script\"", parts.packed)?),
        ("loader", loader),
    ];
    let mut page = String::new();
    let mut left: Vec<&str> = filled.iter().map(|(name, _)| *name).collect();
    for (at, line) in template.lines().enumerate() {
        let asked = line.trim().strip_prefix("<!-- inward:").and_then(|rest| rest.strip_suffix(" -->"));
        if let Some(name) = asked {
            let place = left.iter().position(|one| *one == name);
            let place =
                place.with_context(|| format!("index.html:{}: inward:{name} is unknown or used twice", at + 1))?;
            left.remove(place);
            page.extend(filled.iter().filter(|(one, _)| *one == name).map(|(_, text)| text.as_str()));
        } else {
            page += line.trim_start();
        }
        page.push('\n');
    }
    if !left.is_empty() {
        bail!("index.html: <!-- inward:{} --> is missing", left.join(" -->, <!-- inward:"));
    }
    Ok(page)
}

/// What the browser may do with the file: run these very scripts and this very style, compile the module,
/// start the worker from a blob, show and save pictures. No request leaves it.
fn policy(scripts: &[&str], style: &str) -> String {
    let hash = |text: &str| format!("'sha256-{}'", BASE64_STANDARD.encode(Sha256::digest(text)));
    let scripts: Vec<String> = scripts.iter().map(|script| hash(script)).collect();
    format!(
        "default-src 'none'; script-src {} 'wasm-unsafe-eval'; style-src {}; worker-src blob:; \
         img-src data: blob:; base-uri 'none'; form-action 'none'; \
         require-trusted-types-for 'script'; trusted-types page pool",
        scripts.join(" "),
        hash(style)
    )
}

fn content(text: &str) -> String {
    format!("\n{}\n", text.trim_end())
}

/// An element whose content ends where it should.
fn element(tag: &str, attributes: &str, text: &str) -> Result<String> {
    let lower = text.to_lowercase();
    for end in ["</script", "</style", "<!--"] {
        if let Some(at) = lower.find(end) {
            let line = lower[..at].matches('\n').count() + 1;
            bail!("`{end}` inside the page's {tag}{attributes}, line {line}; write it in two pieces");
        }
    }
    Ok(format!("<{tag}{attributes}>{}</{tag}>", content(text)))
}

#[cfg(test)]
mod tests {
    use super::*;

    const PARTS: Parts = Parts {
        style: "a{}\n",
        loader: "a();",
        script: "b();",
        packed: "BB==",
        worker: "c",
        wasm: "AA==",
        notices: "d",
    };
    const TEMPLATE: &str = "<head>\n  <!-- inward:policy -->\n<!-- inward:style -->\n</head>\n\
        <!-- inward:wasm -->\n<!-- inward:worker -->\n<!-- inward:notices -->\n<!-- inward:script -->\n\
        <!-- inward:loader -->\n";

    #[test]
    fn the_policy_holds_the_digests_of_what_runs() {
        let page = page(TEMPLATE, &PARTS).unwrap();
        assert!(page.contains(&BASE64_STANDARD.encode(Sha256::digest(PARTS.script))), "{page}");
        for (open, close) in [("<script>", "</script>"), ("<style>", "</style>")] {
            let text = page.split(open).nth(1).unwrap().split(close).next().unwrap();
            let digest = format!("'sha256-{}'", BASE64_STANDARD.encode(Sha256::digest(text)));
            assert!(page.contains(&digest), "{page}");
        }
        assert!(page.contains("<script type=\"text/plain\" id=\"wasm\">\nAA==\n</script>"));
    }

    #[test]
    fn a_template_asks_for_every_part_once() {
        let error = |template: &str| page(template, &PARTS).unwrap_err().to_string();
        assert!(error(&TEMPLATE.replace("wasm", "else")).starts_with("index.html:5: inward:else"));
        assert!(error(&TEMPLATE.replace("worker", "wasm")).starts_with("index.html:6: inward:wasm"));
        assert!(error(&TEMPLATE.replace("<!-- inward:wasm -->", "")).contains("inward:wasm --> is missing"));
    }

    #[test]
    fn nothing_closes_its_element_early() {
        let error = page(TEMPLATE, &Parts { worker: "\nlet a = '</Script>';", ..PARTS }).unwrap_err();
        assert!(error.to_string().contains("line 2"), "{error}");
    }
}
