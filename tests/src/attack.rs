//! What every reader must bear: any bytes. Shared by the tests and the targets of libFuzzer.
use inward_core::Error;
use inward_core::placement::{self, place};
use inward_core::read::{Delimiter, Encoding, Format, Reading, mat, npy, read, signature, zip};
use inward_core::report::{ChoiceReport, ErrorReport, Note};
use inward_core::understand::{Baseline, ColumnsAre, MapsAre, Orientation, Source, Wishes, understand};

/// Stands between files that are given together.
const BETWEEN: u8 = 0x1c;

/// An outcome; of an error the words, which must not stumble over it either.
fn told<T>(outcome: Result<T, Error>) -> Option<T> {
    outcome.map_err(|error| ErrorReport::from(&error)).ok()
}

/// The reader of this name on this file.
pub fn attack(reader: &str, file: &[u8]) {
    match reader {
        "npy" => drop(told(npy::read(file))),
        "mat" => {
            let notes = told(mat::read(file)).unwrap_or_default().1;
            notes.iter().for_each(|note| drop(Note::from(note)));
        }
        "zip" => drop(told(zip::read(file))),
        "text" | "json" => text(file),
        "files" => files(file),
        _ => panic!("there is no reader {reader}"),
    }
}

/// Text, as it is and as if something were said about it.
fn text(file: &[u8]) {
    if matches!(told(signature::container(file)), Some(None)) {
        drop(told(read("file", file, |_| Reading::default())));
        let encoding = Encoding::ALL.get(file.len() % 7).copied();
        let delimiter = Delimiter::ALL.get(file.len() / 7 % 7).copied();
        drop(told(read("file", file, |_| Reading { encoding, delimiter, unused: file.len().is_multiple_of(5) })));
    }
}

/// Several files together, as far as their electrodes stand on a head.
fn files(together: &[u8]) {
    let mut sources = Vec::new();
    for (index, file) in together.split(|byte| *byte == BETWEEN).take(3).enumerate() {
        for (name, content) in told(read(&format!("{index}"), file, |_| Reading::default())).unwrap_or_default() {
            sources.push(Source { name, role: None, content });
        }
    }
    let several = sources.iter().any(|source| source.content.format == Format::Zip);
    let said = Wishes {
        orientation: Some(if several { Orientation::ChannelsInRows } else { Orientation::ChannelsInColumns }),
        maps_are: Some(MapsAre::Unmixing),
        columns_are: Some(ColumnsAre::TimePoints),
        baseline: Some(Baseline { from: -100.0, to: 0.0 }),
        ..Wishes::default()
    };
    for wishes in [Wishes::default(), said] {
        let Some(understood) = told(understand(&sources, &wishes)) else { continue };
        let placed = told(place(understood.electrodes.as_deref(), &understood.maps, &placement::Wishes::default()));
        let (notes, choices) = placed.map_or_else(Default::default, |placed| (placed.notes, placed.choices));
        understood.notes.iter().chain(&notes).for_each(|note| drop(Note::from(note)));
        understood.choices.iter().chain(&choices).for_each(|choice| drop(ChoiceReport::from(choice)));
    }
}
