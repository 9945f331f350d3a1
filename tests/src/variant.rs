//! Changed copies of the delivered page, for checks of what happens when something in it goes wrong.
use crate::folder::Folder;
use crate::packed::{packed, unpacked};
use crate::place::dist_file;
use base64::Engine;
use base64::engine::general_purpose::STANDARD;
use sha2::{Digest, Sha256};
use std::path::PathBuf;

/// The text of the page with changes made to it.
pub struct Variant(String);

impl Variant {
    /// The page as it was built.
    pub fn delivered() -> Self {
        Self(std::fs::read_to_string(dist_file("inward.html")).expect("the page is text"))
    }

    /// The text.
    pub fn text(&self) -> &str {
        &self.0
    }

    /// Puts script text in front of the workers' script.
    pub fn before_worker(self, script: &str) -> Self {
        let (start, end) = self.carried("worker");
        let packed = packed(&format!("{script}\n{}", self.worker()));
        Self(format!("{}{packed}{}", &self.0[..start], &self.0[end..]))
    }

    /// Changes the page's packed script without telling the policy.
    pub fn with_unannounced_packed_script(self) -> Self {
        let (start, end) = self.carried("script");
        let packed = packed(&format!("{}\n//\n", self.script()));
        Self(format!("{}{packed}{}", &self.0[..start], &self.0[end..]))
    }

    /// Adds script text to the one that loads the page's and admits the longer script in the policy.
    pub fn with_script(self, added: &str) -> Self {
        let start = self.loader_start();
        let end = start + self.0[start..].find("</script>").expect("the page's script ends");
        let old = &self.0[start..end];
        let new = format!("{old}\n{added}\n");
        let (before, after) = (hash(old), hash(&new));
        assert!(self.0.contains(&before), "the policy admits the script by its hash");
        let text = format!("{}{new}{}", &self.0[..start], &self.0[end..]);
        Self(text.replace(&before, &after))
    }

    /// Changes the script that loads the page's without telling the policy.
    pub fn with_unannounced_script(self) -> Self {
        let start = self.loader_start();
        Self(format!("{}\n//\n{}", &self.0[..start], &self.0[start..]))
    }

    /// Puts other words in place of some of the policy's.
    pub fn with_policy(self, from: &str, to: &str) -> Self {
        let start = self.0.find("<meta http-equiv=\"Content-Security-Policy\"").expect("the page holds a policy");
        let end = start + self.0[start..].find('>').expect("a tag ends");
        let policy = &self.0[start..end];
        assert!(policy.contains(from), "{from} stands in {policy}");
        Self(format!("{}{}{}", &self.0[..start], policy.replace(from, to), &self.0[end..]))
    }

    /// Takes the policy away.
    pub fn without_policy(self) -> Self {
        let start = self.0.find("<meta http-equiv=\"Content-Security-Policy\"").expect("the page holds a policy");
        let end = start + self.0[start..].find('>').expect("a tag ends") + 1;
        Self(format!("{}{}", &self.0[..start], &self.0[end..]))
    }

    /// Writes the page into a folder and returns its path.
    pub fn write(&self, folder: &Folder) -> PathBuf {
        folder.write("inward.html", &self.0)
    }

    /// The script that loads the page's is the last one; those before it carry data.
    fn loader_start(&self) -> usize {
        let tag = self.0.rfind("<script").expect("the page has a script");
        tag + self.0[tag..].find('>').expect("a tag ends") + 1
    }

    /// Where what the page carries packed under this id starts and ends.
    fn carried(&self, id: &str) -> (usize, usize) {
        let tag = self.0.find(&format!("id=\"{id}\">")).expect("the page carries that");
        let start = tag + self.0[tag..].find('>').expect("a tag ends") + 1;
        (start, start + self.0[start..].find('<').expect("the script ends"))
    }

    /// The page's script.
    pub fn script(&self) -> String {
        let (start, end) = self.carried("script");
        unpacked(&self.0[start..end])
    }

    /// The worker's script.
    pub fn worker(&self) -> String {
        let (start, end) = self.carried("worker");
        unpacked(&self.0[start..end])
    }
}

/// A script's hash as a policy writes it.
fn hash(script: &str) -> String {
    format!("sha256-{}", STANDARD.encode(Sha256::digest(script.as_bytes())))
}
