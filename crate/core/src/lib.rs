//! Single-dipole localisation of scalp EEG maps in spherical heads.
