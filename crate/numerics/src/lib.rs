//! What the engine computes with: potentials of dipoles in layered spheres, their fit to maps, surfaces over electrodes.
//!
//! Numbers in, numbers out: no tables, no labels, no words. A package of its own because it is compiled for speed, and
//! what reads tables and writes sentences for size. A module imports only from those listed above it here.

pub mod math;
pub mod shells;

pub mod forward;

pub mod fit;

pub mod simulate;

pub mod scene;
