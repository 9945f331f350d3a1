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
            page += &settled(line.trim_start()).with_context(|| format!("index.html:{}", at + 1))?;
        }
        page.push('\n');
    }
    if !left.is_empty() {
        bail!("index.html: <!-- inward:{} --> is missing", left.join(" -->, <!-- inward:"));
    }
    with_sum(&page)
}

/// The page with its own check sum, in the form in which a browser writes a document that its last script looks at:
/// `<!doctype html>`, an end of line and the document's outer markup are the file again, and the page can tell its own
/// digest. The sum is the digest of the page without the sum, and tells whether something changed the document before.
fn with_sum(page: &str) -> Result<String> {
    let (head, rest) = page.split_once("\n<head>").context("index.html: <head> begins no line")?;
    let body = rest.strip_suffix("</script>\n</body>\n</html>\n").context("index.html: the loader is not the last")?;
    // What stands between these belongs to no element, or to another one than it seems.
    let page = format!("{head}<head>{body}</script></body></html>");
    let head =
        format!("<!doctype html>\n{}", head.strip_prefix("<!doctype html>\n").context("index.html: no doctype")?);
    if head.matches('\n').count() != 1 || page.contains('\r') {
        bail!("index.html: an end of line that a browser leaves out");
    }
    let sum: String = Sha256::digest(&page).iter().map(|byte| format!("{byte:02x}")).collect();
    if head.matches("data-sum=\"\"").count() != 1 {
        bail!("index.html: no place for the sum");
    }
    Ok(page.replacen("data-sum=\"\"", &format!("data-sum=\"{sum}\""), 1))
}

/// A line of markup as browsers write it: every attribute has a value in quotes, and only what must be is escaped.
fn settled(line: &str) -> Result<String> {
    let mut settled = String::new();
    let mut rest = line;
    while let Some(start) = rest.find('<') {
        text_settled(&rest[..start])?;
        let end = start + rest[start..].find('>').context("a tag goes over the end of the line")?;
        settled += &rest[..start];
        settled += &tag_settled(&rest[start + 1..end])?;
        rest = &rest[end + 1..];
    }
    text_settled(rest)?;
    Ok(settled + rest)
}

fn text_settled(text: &str) -> Result<()> {
    let plain = ["&amp;", "&lt;", "&gt;", "&nbsp;"].iter().fold(text.to_owned(), |text, one| text.replace(one, ""));
    match plain.find(['&', '>', '\u{a0}']) {
        Some(at) => bail!("browsers write `{}` otherwise", &plain[at..]),
        None => Ok(()),
    }
}

fn tag_settled(tag: &str) -> Result<String> {
    if tag.starts_with(['/', '!']) {
        return Ok(format!("<{tag}>"));
    }
    let (name, mut rest) = tag.split_once(' ').unwrap_or((tag, ""));
    let mut settled = format!("<{name}");
    while !rest.trim_start().is_empty() {
        rest = rest.trim_start();
        let end = rest.find(['=', ' ']).unwrap_or(rest.len());
        let (attribute, after) = rest.split_at(end);
        let (value, after) = match after.strip_prefix("=\"") {
            Some(quoted) => quoted.split_once('"').context("quotes are not closed")?,
            None if after.starts_with('=') => bail!("`{tag}`: values stand in double quotes"),
            None => ("", after),
        };
        if value.contains(['&', '<', '\u{a0}']) || format!("{name}{attribute}").contains(|one: char| one.is_uppercase())
        {
            bail!("browsers write `{tag}` otherwise");
        }
        settled += &format!(" {attribute}=\"{value}\"");
        rest = after;
    }
    Ok(settled + ">")
}

/// What the browser may do with the file: run these very scripts and this very style, compile the module,
/// start the worker from a blob, show and save pictures. No request leaves it.
fn policy(scripts: &[&str], style: &str) -> String {
    let scripts: Vec<String> = scripts.iter().map(|script| digest(script)).collect();
    format!(
        "default-src 'none'; script-src {} 'wasm-unsafe-eval'; style-src {}; worker-src blob:; \
         img-src data: blob:; base-uri 'none'; form-action 'none'; \
         require-trusted-types-for 'script'; trusted-types page pool",
        scripts.join(" "),
        digest(style)
    )
}

/// A text as a policy names it.
pub fn digest(text: &str) -> String {
    format!("'sha256-{}'", BASE64_STANDARD.encode(Sha256::digest(text)))
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
    const TEMPLATE: &str = "<!doctype html>\n<html data-sum=\"\">\n<head>\n  <!-- inward:policy -->\n<!-- inward:style -->\n</head>\n\
        <!-- inward:wasm -->\n<!-- inward:worker -->\n<!-- inward:notices -->\n<!-- inward:script -->\n\
        <!-- inward:loader -->\n</body>\n</html>\n";

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
        assert!(error(&TEMPLATE.replace("wasm", "else")).starts_with("index.html:7: inward:else"));
        assert!(error(&TEMPLATE.replace("worker", "wasm")).starts_with("index.html:8: inward:wasm"));
        assert!(error(&TEMPLATE.replace("<!-- inward:wasm -->", "")).contains("inward:wasm --> is missing"));
    }

    #[test]
    fn a_page_is_as_browsers_write_it() {
        assert_eq!(
            settled("<input id=\"a\" hidden> a&nbsp;b <br>").unwrap(),
            "<input id=\"a\" hidden=\"\"> a&nbsp;b <br>"
        );
        for other in ["a & b", "a > b", "a\u{a0}b", "<a b='c'>", "<a b=\"&amp;\">", "<svg viewBox=\"0\">", "<a b"] {
            assert!(settled(other).is_err(), "{other}");
        }
        let page = page(TEMPLATE, &PARTS).unwrap();
        assert!(page.ends_with("</script></body></html>"), "{page}");
        let (before, after) = page.split_once("data-sum=\"").unwrap();
        let (sum, after) = after.split_once('"').unwrap();
        let bare = Sha256::digest(format!("{before}data-sum=\"\"{after}"));
        assert_eq!(sum, bare.iter().map(|byte| format!("{byte:02x}")).collect::<String>());
        assert!(super::page(&TEMPLATE.replace("<html data-sum=\"\">\n", "<html data-sum=\"\">\n\n"), &PARTS).is_err());
        assert!(super::page(&TEMPLATE.replace("</body>\n", "<p>\n</body>\n"), &PARTS).is_err());
    }

    #[test]
    fn nothing_closes_its_element_early() {
        let error = page(TEMPLATE, &Parts { worker: "\nlet a = '</Script>';", ..PARTS }).unwrap_err();
        assert!(error.to_string().contains("line 2"), "{error}");
    }
}
