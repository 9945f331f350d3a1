use crate::math::Lanes;

/// Derivatives of Φ(u, s) for a block of electrodes, from which the lead field and its first and second derivatives
/// follow.
#[derive(Clone, Copy, Debug, Default)]
pub(crate) struct Potential<L> {
    pub s: L,
    pub u: L,
    pub us: L,
    pub uu: L,
    pub uus: L,
    pub uuu: L,
}

/// The derivatives of Φ up to the third, but for the one by s; those with two or more s follow from Laplace's equation
/// 6Φᵤ + 4uΦᵤᵤ + 4sΦᵤₛ + Φₛₛ = 0.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Terms<L> {
    pub u: L,
    pub ss: L,
    pub us: L,
    pub uu: L,
    pub sss: L,
    pub uss: L,
    pub uus: L,
    pub uuu: L,
}

impl<L: Lanes> Potential<L> {
    /// At these u and s; u four times.
    #[inline(always)]
    pub(crate) fn terms(&self, u4: L, s: L) -> Terms<L> {
        let Self { u: du, us, uu, uus, uuu, .. } = *self;
        let s4 = s * L::splat(4.0);
        let (six, ten) = (L::splat(6.0), L::splat(10.0));
        let uss = -(uu * ten + uuu * u4 + uus * s4);
        Terms {
            u: du,
            ss: -(du * six + uu * u4 + us * s4),
            us,
            uu,
            sss: -(us * ten + uus * u4 + uss * s4),
            uss,
            uus,
            uuu,
        }
    }

    /// Kept where the factor is 1, zero where it is 0.
    pub(super) fn masked(self, by: L) -> Self {
        let Self { s, u, us, uu, uus, uuu } = self;
        Self { s: s * by, u: u * by, us: us * by, uu: uu * by, uus: uus * by, uuu: uuu * by }
    }
}
