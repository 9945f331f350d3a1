use super::{Kind, Reading};
use core::fmt;

/// An electrode's label: shown as it was written, compared without regard to case.
#[derive(Clone, Debug)]
pub struct Label(String);

impl Label {
    /// A label without the blanks around it.
    pub fn new(text: &str) -> Self {
        Self(text.trim().to_owned())
    }

    /// As it was written.
    pub fn as_str(&self) -> &str {
        &self.0
    }

    /// What electrodes of several tables are compared by: the site that it names, else the name in it.
    pub fn electrode(&self) -> String {
        let reading = Reading::of(self);
        match reading.kind {
            Kind::Site(site) => site.name.to_ascii_lowercase(),
            _ => reading.key,
        }
    }

    /// What labels are compared by.
    pub fn key(&self) -> String {
        self.0.to_ascii_lowercase()
    }
}

impl PartialEq for Label {
    fn eq(&self, other: &Self) -> bool {
        self.key() == other.key()
    }
}

impl Eq for Label {}

impl fmt::Display for Label {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.0)
    }
}
