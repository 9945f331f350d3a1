//! Bytes to tables to electrodes and maps. Every outcome is a value or an error that says where; nothing panics.
#![deny(clippy::unwrap_used, clippy::expect_used, clippy::indexing_slicing)]

mod bytes;
mod content;
mod electrodes;
mod kind;
mod maps;
pub mod mat;
pub mod npy;
pub mod signature;
mod table;
mod text;
pub mod zip;

pub use content::{Body, Cells, Content, Encoding, Format, Part, Record, Tree};
pub use electrodes::read_electrodes;
pub use kind::{Kind, kind};
pub use maps::read_maps;
pub use table::{Field, Row, Table};
pub use text::decode;

/// Largest input in bytes.
pub const MOST_BYTES: usize = 64 << 20;

/// Most electrodes of a table.
pub const MOST_ELECTRODES: usize = 512;

/// Most maps of a table.
pub const MOST_MAPS: usize = 65_536;

/// Sizes that numbers may have: their squares stay inside the range of `f64`.
const SIZES: core::ops::RangeInclusive<f64> = 1e-100..=1e100;

/// Whether a matrix can be a table of electrodes and maps, either way round.
fn within_limits(rows: usize, columns: usize) -> bool {
    rows.min(columns) <= MOST_ELECTRODES && rows.max(columns) <= MOST_MAPS
}
