/// Derivatives of Φ(u, s) for a block of [`LANES`] electrodes, from which the lead field and its first and second
/// derivatives follow.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Potential {
    pub s: [f64; LANES],
    pub u: [f64; LANES],
    pub us: [f64; LANES],
    pub uu: [f64; LANES],
    pub uus: [f64; LANES],
    pub uuu: [f64; LANES],
}

/// Electrodes are worked on in blocks of this width, so that wide registers can be used; every electrode has its own
/// lane, hence the width changes no digit.
pub(super) const LANES: usize = 4;
