//! Files read and understood, without the rest of the way.
use inward_core::Error;
use inward_core::electrode::Electrode;
use inward_core::map::Maps;
use inward_core::read::{Reading, read};
use inward_core::understand::{Role, Source, Understood, Wishes, understand};

/// What files say that are told apart by their content.
pub fn understood(files: &[(&str, &[u8])], wishes: &Wishes) -> Result<Understood, Error> {
    sources(&files.iter().map(|(name, bytes)| (*name, None, *bytes)).collect::<Vec<_>>(), wishes)
}

/// A table of electrodes and one of maps.
pub fn electrodes_and_maps(electrodes: &str, maps: &str) -> (Vec<Electrode>, Maps) {
    let given =
        [("electrodes", Some(Role::Electrodes), electrodes.as_bytes()), ("maps", Some(Role::Maps), maps.as_bytes())];
    let understood = sources(&given, &Wishes::default()).expect("two good tables");
    (understood.electrodes.expect("a table of electrodes"), understood.maps)
}

fn sources(files: &[(&str, Option<Role>, &[u8])], wishes: &Wishes) -> Result<Understood, Error> {
    let mut sources = Vec::new();
    for &(name, role, bytes) in files {
        let how = |name: &str| {
            let wish = wishes.files.get(name);
            let (encoding, delimiter) = wish.map_or((None, None), |wish| (wish.encoding, wish.delimiter));
            Reading { encoding, delimiter, unused: wish.is_some_and(|wish| wish.role == Some(Role::Unused)) }
        };
        let contents = read(name, bytes, how)?.into_iter();
        sources.extend(contents.map(|(name, content)| Source { name, role, content }));
    }
    understand(&sources, wishes)
}
