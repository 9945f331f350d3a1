//! Archives of type zip, after the published description of the format (APPNOTE, PKWARE): what the central directory lists,
//! stored or deflated.

use super::MOST_BYTES;
use super::bytes::{Endian, byte, damaged, no_table, shown, truncated, words};
use crate::finding::{Code, Error, Finding};
use miniz_oxide::inflate::{TINFLStatus, decompress_to_vec_with_limit};

/// What such a file begins with: a file in it, or the end of an empty directory.
pub(super) const MAGICS: [&[u8]; 2] = [b"PK\x03\x04", END];

const END: &[u8] = b"PK\x05\x06";

/// Length of the end of the directory without its comment.
const END_LENGTH: usize = 22;

/// Most files in an archive.
const MOST_FILES: usize = 1_024;

/// The files in an archive with their paths, without folders, hidden files, and what systems add of their own.
///
/// # Errors
/// `input-truncated`, `input-damaged`, `input-zip` for what is encrypted, packed in another way, divided, with 64-bit sizes or
/// too many files, `input-too-large` where the files unpack to more than the limit, `input-no-table` for the packed documents of office
/// programs and archives in this one, `input-empty`.
pub fn read(file: &[u8]) -> Result<Vec<(String, Vec<u8>)>, Error> {
    let end = end_of_directory(file).ok_or_else(|| truncated(file.len(), END_LENGTH, "zip-directory"))?;
    let refused = |at: usize, why: &'static str| Finding::new(Code::InputZip).at(byte(at)).with("why", why);
    let end_field = |at: usize| field(file, end + at, 2).unwrap_or_default();
    let (disk, disks, here, count) = (end_field(4), end_field(6), end_field(8), end_field(10));
    let size = field(file, end + 12, 4).unwrap_or_default();
    let begin = field(file, end + 16, 4).unwrap_or_default();
    if [disk, count].contains(&0xffff) || [size, begin].contains(&0xffff_ffff) {
        return Err(refused(end, "zip-64").into());
    }
    if disk != 0 || disks != 0 || here != count {
        return Err(refused(end, "zip-divided").into());
    }
    if count > MOST_FILES {
        return Err(refused(end, "zip-many").into());
    }
    let mut files = Vec::new();
    let mut room = MOST_BYTES;
    let mut at = begin;
    for _ in 0..count {
        let entry = Entry::read(file, at).ok_or_else(|| damaged(at, shown(file, at), "zip-entry"))?;
        if entry.name == "[Content_Types].xml" || entry.name == "mimetype" {
            return Err(no_table("office"));
        }
        if entry.is_wanted() {
            let why = match entry {
                Entry { encrypted: true, .. } => Some("zip-encrypted"),
                Entry { packed: 0xffff_ffff, .. } | Entry { size: 0xffff_ffff, .. } => Some("zip-64"),
                Entry { method: 0 | 8, .. } => None,
                _ => Some("zip-method"),
            };
            if let Some(why) = why {
                return Err(refused(at, why).with("label", entry.name).into());
            }
            let content = entry.content(file, at, room)?;
            if MAGICS.iter().any(|magic| content.starts_with(magic)) {
                return Err(no_table("archive").inside(&entry.name));
            }
            room -= content.len();
            files.push((entry.name, content));
        }
        at = entry.end;
    }
    if files.is_empty() { Err(Finding::new(Code::InputEmpty).at(byte(end)).into()) } else { Ok(files) }
}

/// Where the end of the directory stands: it is the last thing but for a comment.
fn end_of_directory(file: &[u8]) -> Option<usize> {
    let last = file.len().checked_sub(END_LENGTH)?;
    (last.saturating_sub(0xffff)..=last).rev().find(|&at| {
        file.get(at..).is_some_and(|rest| rest.starts_with(END)) && field(file, at + 20, 2) == Some(last - at)
    })
}

/// A number of two or four bytes.
fn field(file: &[u8], at: usize, length: usize) -> Option<usize> {
    let bytes = file.get(at..at.checked_add(length)?)?;
    if length == 2 { Endian::Little.u16(bytes).map(usize::from) } else { Endian::Little.u32(bytes).map(|n| n as usize) }
}

/// What the directory says of a file.
struct Entry {
    name: String,
    encrypted: bool,
    method: usize,
    checksum: usize,
    packed: usize,
    size: usize,
    /// Where its own header stands.
    local: usize,
    /// Where the next entry begins.
    end: usize,
}

impl Entry {
    fn read(file: &[u8], at: usize) -> Option<Self> {
        const LENGTH: usize = 46;
        let number = |offset: usize, length: usize| field(file, at.checked_add(offset)?, length);
        if number(0, 4)? != 0x0201_4b50 {
            return None;
        }
        let name_end = at + LENGTH + number(28, 2)?;
        Some(Self {
            name: words(file.get(at + LENGTH..name_end)?),
            encrypted: number(8, 2)? & 1 != 0,
            method: number(10, 2)?,
            checksum: number(16, 4)?,
            packed: number(20, 4)?,
            size: number(24, 4)?,
            local: number(42, 4)?,
            end: name_end + number(30, 2)? + number(32, 2)?,
        })
    }

    /// No folder, nothing hidden, nothing that a system keeps for itself.
    fn is_wanted(&self) -> bool {
        let hidden = |part: &str| part.starts_with('.') && ![".", ".."].contains(&part);
        let system = |part: &str| hidden(part) || part == "__MACOSX" || part.eq_ignore_ascii_case("thumbs.db");
        !self.name.ends_with('/') && !self.name.split(['/', '\\']).any(system)
    }

    fn content(&self, file: &[u8], at: usize, room: usize) -> Result<Vec<u8>, Error> {
        const LENGTH: usize = 30;
        let packed = || {
            let number = |offset: usize| field(file, self.local.checked_add(offset)?, 2);
            if field(file, self.local, 4)? != 0x0403_4b50 {
                return None;
            }
            let begin = self.local + LENGTH + number(26)? + number(28)?;
            file.get(begin..begin.checked_add(self.packed)?)
        };
        let packed = packed().ok_or_else(|| damaged(at, self.name.as_str(), "zip-file"))?;
        let too_large = || {
            Finding::new(Code::InputTooLarge).at(byte(at)).with("what", "unpacked").with("most_mib", MOST_BYTES >> 20)
        };
        if self.size > room {
            return Err(too_large().into());
        }
        let content = match self.method {
            0 => packed.to_vec(),
            // One more than it says to hold would be noticed.
            _ => decompress_to_vec_with_limit(packed, self.size).map_err(|error| match error.status {
                TINFLStatus::HasMoreOutput => damaged(at, self.name.as_str(), "zip-size"),
                _ => damaged(at, self.name.as_str(), "packed"),
            })?,
        };
        if content.len() != self.size {
            return Err(damaged(at, self.name.as_str(), "zip-size"));
        }
        if checksum(&content) as usize != self.checksum {
            return Err(damaged(at, self.name.as_str(), "zip-checksum"));
        }
        Ok(content)
    }
}

/// The cyclic redundancy check of zip (ISO 3309).
fn checksum(bytes: &[u8]) -> u32 {
    let table: [u32; 256] = core::array::from_fn(|index| {
        (0..8).fold(index as u32, |value, _| (value >> 1) ^ if value & 1 == 1 { 0xedb8_8320 } else { 0 })
    });
    !bytes
        .iter()
        .fold(!0, |sum, &byte| (sum >> 8) ^ table.get(usize::from(sum as u8 ^ byte)).copied().unwrap_or_default())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn checksum_of_the_standard() {
        assert_eq!(checksum(b"123456789"), 0xcbf4_3926);
    }
}
