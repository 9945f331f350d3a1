//! What the files hold, read once and understood anew when a setting changes what they mean.

use super::Request;
use crate::finding::{Code, Error, Finding};
use crate::read::{Content, Reading, read};
use crate::report::{Input, Settings};
use crate::understand::{Role, Source, Understood, Wishes, understand};
use sha2::{Digest, Sha256};
use std::collections::HashSet;
use std::sync::Arc;

/// Files of a request with what was read of them.
#[derive(Debug)]
pub(super) struct Tables {
    pub inputs: Vec<Input>,
    pub build: Option<&'static str>,
    files: Vec<File>,
    sources: Vec<Source>,
    wishes: Wishes,
    pub understood: Understood,
}

/// A file as it was given; its bytes are kept if they are text, which settings may read in another way.
#[derive(Clone, Debug)]
struct File {
    name: String,
    role: Option<Role>,
    text: Option<Arc<[u8]>>,
}

impl Tables {
    /// Reads and understands everything.
    pub fn read(request: &Request) -> Result<Self, Error> {
        let given: Vec<(&str, Option<Role>, &[u8])> = match request.files.is_empty() {
            true => {
                let electrodes = request.electrodes.map(|bytes| ("electrodes", Some(Role::Electrodes), bytes));
                electrodes.into_iter().chain([("maps", Some(Role::Maps), request.maps)]).collect()
            }
            false => request.files.iter().map(|(name, bytes)| (*name, None, *bytes)).collect(),
        };
        let mut seen = HashSet::new();
        if let Some((name, ..)) = given.iter().find(|(name, ..)| !seen.insert(*name)) {
            let problem = format!("two files are named `{name}`");
            return Err(Settings::unknown(problem));
        }
        let total: usize = given.iter().map(|(.., bytes)| bytes.len()).sum();
        if total > crate::read::MOST_BYTES * 2 {
            return Err(Finding::new(Code::InputTooLarge).with("most_mib", crate::read::MOST_BYTES >> 20).into());
        }
        let wishes = request.settings.wishes();
        let mut files = Vec::new();
        let mut sources = Vec::new();
        for &(name, role, bytes) in &given {
            let contents = contents(name, role, bytes, &wishes)?;
            let is_text = contents.iter().any(|(_, content)| content.encoding.is_some());
            files.push(File { name: name.into(), role, text: is_text.then(|| bytes.into()) });
            sources.extend(contents.into_iter().map(|(name, content)| Source { name, role, content }));
        }
        let understood = understand(&sources, &wishes)?;
        let inputs = given.iter().map(|(name, _, bytes)| Input { name: (*name).into(), sha256: sha256(bytes) });
        Ok(Self { inputs: inputs.collect(), build: request.build, files, sources, wishes, understood })
    }

    /// The same files under other settings; `None` where these mean the same for them.
    pub fn with(&self, settings: &Settings) -> Result<Option<Self>, Error> {
        let wishes = settings.wishes();
        if wishes == self.wishes {
            return Ok(None);
        }
        let mut sources = self.sources.clone();
        for file in &self.files {
            let Some(bytes) = &file.text else { continue };
            let prefix = format!("{}/", file.name);
            let own = |source: &Source| source.name == file.name || source.name.starts_with(&prefix);
            let changed = sources
                .iter()
                .any(|source| own(source) && reading(&wishes, &source.name) != reading(&self.wishes, &source.name));
            if changed {
                let first = sources.iter().position(own).unwrap_or(sources.len());
                sources.retain(|source| !own(source));
                let contents = contents(&file.name, file.role, bytes, &wishes)?.into_iter();
                let again = contents.map(|(name, content)| Source { name, role: file.role, content });
                sources.splice(first..first, again);
            }
        }
        let understood = understand(&sources, &wishes)?;
        let (inputs, files) = (self.inputs.clone(), self.files.clone());
        Ok(Some(Self { inputs, build: self.build, files, sources, wishes, understood }))
    }

    /// The same files under other names, and the settings under which they mean the same.
    pub fn renamed(&self, settings: &Settings, names: &[(String, String)]) -> Result<(Self, Settings), Error> {
        let mut settings = settings.clone();
        for (name, wishes) in core::mem::take(&mut settings.files) {
            settings.files.insert(renamed(&name, names), wishes);
        }
        let wishes = settings.wishes();
        let (mut inputs, mut files, mut sources) = (self.inputs.clone(), self.files.clone(), self.sources.clone());
        inputs.iter_mut().for_each(|input| input.name = renamed(&input.name, names));
        files.iter_mut().for_each(|file| file.name = renamed(&file.name, names));
        sources.iter_mut().for_each(|source| source.name = renamed(&source.name, names));
        let understood = understand(&sources, &wishes)?;
        Ok((Self { inputs, build: self.build, files, sources, wishes, understood }, settings))
    }
}

/// A file's name, or that of a file within it, with another in its place.
fn renamed(name: &str, names: &[(String, String)]) -> String {
    let own = |from: &str| name.strip_prefix(from).filter(|rest| rest.is_empty() || rest.starts_with('/'));
    // Of two that fit, one within the other, the longer is meant.
    let fitting = names.iter().filter_map(|(from, to)| own(from).map(|rest| (rest, to)));
    fitting.min_by_key(|(rest, _)| rest.len()).map_or_else(|| name.to_owned(), |(rest, to)| format!("{to}{rest}"))
}

/// Hexadecimal.
pub(super) fn sha256(bytes: &[u8]) -> String {
    Sha256::digest(bytes).iter().map(|byte| format!("{byte:02x}")).collect()
}

fn contents(name: &str, role: Option<Role>, bytes: &[u8], wishes: &Wishes) -> Result<Vec<(String, Content)>, Error> {
    let input = match role {
        Some(Role::Electrodes) => "electrodes",
        Some(_) => "maps",
        None => "file",
    };
    let file = Some(name).filter(|_| role.is_none());
    read(name, bytes, |name| reading(wishes, name)).map_err(|error| error.within(input, file))
}

fn reading(wishes: &Wishes, name: &str) -> Reading {
    let wish = wishes.files.get(name);
    Reading {
        encoding: wish.and_then(|wish| wish.encoding),
        delimiter: wish.and_then(|wish| wish.delimiter),
        unused: wish.is_some_and(|wish| wish.role == Some(Role::Unused)),
    }
}
