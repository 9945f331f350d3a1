//! Electrode labels and the standard positions that belong to them.

mod label;
mod reading;
mod standard;

pub use label::Label;
pub use reading::{Kind, Landmark, Other, Reading, Second};
pub use standard::{
    Grade, StandardSite, modern_name, nearest_site, site, standard_position, standard_site, standard_sites,
};

/// An electrode as a table gives it.
#[derive(Clone, Debug, PartialEq)]
pub struct Electrode {
    /// Label as written.
    pub label: Label,
    /// Position in the frame and unit of the table, if it has one.
    pub position: Option<crate::math::Vec3>,
    /// Line of the table.
    pub line: usize,
}
