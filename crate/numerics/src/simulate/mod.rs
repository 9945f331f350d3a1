//! Maps that could have been: of heads that are not quite as modelled, and of sources that are not one dipole.

mod head_errors;
mod population;
mod refits;
mod sources;

pub use head_errors::{Cause, DrawnHead, HeadErrors, displaced, with_skull};
pub use population::{Draw, Kind, Population};
pub use refits::{Noise, Refits, Scatter};
pub use sources::{Background, Orientation, SourceRule};

/// Parts of the simulations, each with random numbers of its own.
mod part {
    pub const ELECTRODES: u64 = 1;
    pub const SKULL: u64 = 2;
    pub const SPHERE: u64 = 3;
    pub const NOISE: u64 = 4;
    /// And the kind of population.
    pub const POPULATION: u64 = 16;
}
