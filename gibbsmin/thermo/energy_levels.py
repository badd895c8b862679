"""Energy levels that are summed one by one: the real diatomic, the hindered inner rotation.

Energies are wavenumbers E/(hc) in 1/cm above the lowest level.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import BOLTZMANN_CONSTANT, PLANCK_CONSTANT, SPEED_OF_LIGHT
from gibbsmin.errors import InputError

KELVIN_PER_WAVENUMBER: Final = 100.0 * PLANCK_CONSTANT * SPEED_OF_LIGHT / BOLTZMANN_CONSTANT
"""hc/k of 1/cm, K."""

HIGHEST: Final = 6000.0
"""K, up to which sums over levels are complete."""

_TOP: Final = 45.0 * HIGHEST / KELVIN_PER_WAVENUMBER
"""1/cm; levels above weigh less than 1e-19 at the highest temperature."""

_MOST_VIBRATIONS: Final = 300
_MOST_WAVES: Final = 1500


@dataclass(frozen=True)
class Diatomic:
    """Spectroscopic constants of a diatomic molecule about its minimum, all in 1/cm.

    With w = v + ½ and j = J (J + 1),

        E(v, J) = ωe w − ωexe w² + ωeye w³ + (Be − αe w) j − (De + βe w) j² + He j³
        βe = De (8 ωexe/ωe − 5 αe/Be − αe² ωe/(24 Be³)),  He = 2 De (12 Be² − αe ωe)/(3 ωe²)

    References
    ----------
    G. Herzberg, Molecular Spectra and Molecular Structure I: Spectra of Diatomic Molecules, 2nd
    ed., van Nostrand (1950), chapter III, whose letters are used; the formulas for βe and He are
    recalled from there.
    """

    we: float
    wexe: float
    Be: float
    alpha_e: float
    De: float
    weye: float = 0.0

    def levels(self) -> tuple[FloatArray, FloatArray]:
        """Energies above v = 0, J = 0, and degeneracies 2 J + 1, of all levels that count.

        Each ladder, in v and in J, ends before the first level that would lie lower than the
        one under it, which is near dissociation.
        """
        w = np.arange(_MOST_VIBRATIONS)[:, np.newaxis] + 0.5
        J = np.arange(int(np.sqrt(2 * _TOP / self.Be)) + 2)
        j = J * (J + 1.0)
        vibration = self.we * w - self.wexe * w**2 + self.weye * w**3
        B = self.Be - self.alpha_e * w
        D = self.De + self._beta_e * w
        energy = vibration + B * j - D * j**2 + self._He * j**3
        energy = energy - energy[0, 0]
        kept = _rising(energy, axis=1) & _rising(energy[:, :1], axis=0) & (energy < _TOP)
        return energy[kept], np.broadcast_to(2 * J + 1.0, energy.shape)[kept]

    @property
    def _beta_e(self) -> float:
        bracket = (
            8 * self.wexe / self.we
            - 5 * self.alpha_e / self.Be
            - self.alpha_e**2 * self.we / (24 * self.Be**3)
        )
        return self.De * bracket

    @property
    def _He(self) -> float:
        return 2 * self.De * (12 * self.Be**2 - self.alpha_e * self.we) / (3 * self.we**2)


def _rising(energy: FloatArray, axis: int) -> BoolArray:
    """Whether the ladder has risen all the way up to each level."""
    steps = np.diff(energy, axis=axis, prepend=-np.inf)
    return np.asarray(np.logical_and.accumulate(steps > 0, axis=axis))


def hindered_levels(constant: float, barrier: float, fold: int) -> FloatArray:
    """Energies of an inner rotation about one bond, in 1/cm above the lowest.

    −F ψ″ + ½ V (1 − cos n φ) ψ = E ψ, solved in the basis of free rotors exp(i m φ), in which the
    potential couples m with m ± n by −V/4.

    Parameters
    ----------
    constant
        F = h/(8π² c I) of the reduced moment of inertia I, 1/cm.
    barrier
        V, 1/cm.
    fold
        n.

    References
    ----------
    J. D. Lewis, T. B. Malloy, T. H. Chao, J. Laane, J. Mol. Struct. 12 (1972) 427.  The functions
    of the same levels are tabulated by K. S. Pitzer, W. D. Gwinn, J. Chem. Phys. 10 (1942) 428.

    Raises
    ------
    InputError
        If the rotation is so slow that its levels are too many to sum.
    """
    from scipy.linalg import eigvals_banded

    waves = int(np.sqrt((_TOP + barrier) / constant)) + 4 * fold + 10
    if waves > _MOST_WAVES:
        raise InputError(
            f"found an internal rotation of {constant:.3g} 1/cm, whose levels are too many to sum",
            "accepted is the constant of a group, from about 0.1 1/cm",
            key="internal_rotation",
        )
    m = np.arange(-waves, waves + 1, dtype=np.float64)
    bands = np.zeros((fold + 1, len(m)))
    bands[0] = constant * m**2 + barrier / 2
    bands[fold] = -barrier / 4
    energy = eigvals_banded(bands, lower=True)
    return np.asarray(energy - energy[0])
