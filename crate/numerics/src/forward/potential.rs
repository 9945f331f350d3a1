use crate::math::Lanes;

/// Derivatives of Φ(u, s) for a block of electrodes, from which the lead field and its first and second derivatives
/// follow.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Potential {
    pub s: Lanes,
    pub u: Lanes,
    pub us: Lanes,
    pub uu: Lanes,
    pub uus: Lanes,
    pub uuu: Lanes,
}

/// The derivatives of Φ up to the third, but for the one by s; those with two or more s follow from Laplace's equation
/// 6Φᵤ + 4uΦᵤᵤ + 4sΦᵤₛ + Φₛₛ = 0.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Terms {
    pub u: Lanes,
    pub ss: Lanes,
    pub us: Lanes,
    pub uu: Lanes,
    pub sss: Lanes,
    pub uss: Lanes,
    pub uus: Lanes,
    pub uuu: Lanes,
}

impl Potential {
    /// At these u and s.
    #[inline]
    pub(super) fn terms(&self, u: f64, s: Lanes) -> Terms {
        let Self { u: du, us, uu, uus, uuu, .. } = *self;
        let u4 = 4.0 * u;
        let s4 = s * 4.0;
        let uss = -(uu * 10.0 + uuu * u4 + uus * s4);
        Terms {
            u: du,
            ss: -(du * 6.0 + uu * u4 + us * s4),
            us,
            uu,
            sss: -(us * 10.0 + uus * u4 + uss * s4),
            uss,
            uus,
            uuu,
        }
    }
}
