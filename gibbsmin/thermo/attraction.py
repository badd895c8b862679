"""The attraction of pure gases as a function of temperature, α(T/Tc), in cubic equations of state.

Every published form used here is a sum of terms in the reduced temperature t = T/Tc,

    α = Σ w t^p exp(L (1 − t^q)),

with one set of terms below Tc and one above.  On θ = d/d ln T each term answers with a factor,
θ → p − L q t^q, so that α, θα and θ²α come together.  The slope is continuous at Tc; the curvature,
and so the departure of the heat capacity, has a small step there.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, TypeAlias

import numpy as np

from gibbsmin.arrays import FloatArray

Term: TypeAlias = tuple[float, float, float, float]
"""w, p, L and q."""

Terms: TypeAlias = tuple[Term, ...]

_TWU_REDLICH_KWONG: Final = (
    ((0.141599, 0.919422, 2.496441), (0.500315, 0.799457, 3.291790)),
    ((0.441411, 6.500018, -0.20), (0.032580, 1.289098, -8.0)),
)
_TWU_PENG_ROBINSON: Final = (
    ((0.125283, 0.911807, 1.948150), (0.511614, 0.784054, 2.812520)),
    ((0.401219, 4.963070, -0.20), (0.024955, 1.248089, -8.0)),
)
"""L, M and N of acentric factor 0 and 1, below and above Tc."""


@dataclass(frozen=True, eq=False)
class Attraction:
    """α of S gases.

    Attributes
    ----------
    critical_temperatures : Tc of each gas, K
    terms : terms of each gas below and above Tc; a gas without terms attracts nothing
    """

    critical_temperatures: tuple[float, ...]
    terms: tuple[tuple[Terms, Terms], ...]

    def at(self, temperature: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
        """α, θα and θ²α with θ = d/d ln T, each T.shape + (S,)."""
        # A grid repeats its temperatures: each is evaluated once.
        distinct, places = np.unique(temperature, return_inverse=True)
        found = np.zeros((3, len(self.terms), distinct.size))
        log_T = np.log(distinct)
        for gas, (Tc, (below, above)) in enumerate(
            zip(self.critical_temperatures, self.terms, strict=True)
        ):
            log_t = log_T - np.log(Tc)
            hot = log_t > 0.0
            if hot.any():
                found[:, gas] = _sum(above, log_t)
            if not hot.all():
                found[:, gas] = np.where(hot, found[:, gas], _sum(below, log_t))
        alpha, first, second = found[..., places.reshape(temperature.shape)]
        return np.moveaxis(alpha, 0, -1), np.moveaxis(first, 0, -1), np.moveaxis(second, 0, -1)


def _sum(terms: Terms, log_t: FloatArray) -> FloatArray:
    """α, θα and θ²α, (3,) + t.shape."""
    total = np.zeros((3, *log_t.shape))
    for w, p, L, q in terms:
        power = L * np.exp(q * log_t) if L else 0.0
        value = w * np.exp(p * log_t + (L - power))
        slope = p - q * power
        total[0] += value
        total[1] += value * slope
        total[2] += value * (slope * slope - q * q * power)
    return total


def twu_redlich_kwong(acentric_factor: float) -> tuple[Terms, Terms]:
    """The generalised α of Twu, Coon and Cunningham for the Redlich-Kwong equation.

    Source: Fluid Phase Equilibria 105 (1995) 61.  α = α0 + ω (α1 − α0), each
    t^(N(M−1)) exp(L (1 − t^(NM))).  It follows Soave's α (Chem. Eng. Sci. 27 (1972) 1197) below
    Tc, and above Tc falls to zero as t rises, where Soave's vanishes near 8 Tc and rises again.
    """
    below, above = _TWU_REDLICH_KWONG
    return _generalised(below, acentric_factor), _generalised(above, acentric_factor)


def twu_peng_robinson(acentric_factor: float) -> tuple[Terms, Terms]:
    """The same for the Peng-Robinson equation: Fluid Phase Equilibria 105 (1995) 49."""
    below, above = _TWU_PENG_ROBINSON
    return _generalised(below, acentric_factor), _generalised(above, acentric_factor)


def peng_robinson(acentric_factor: float) -> tuple[Terms, Terms]:
    """α of Peng and Robinson below Tc, continued above it as Boston and Mathias did.

    Below Tc α = (1 + m (1 − √t))², m = 0.37464 + 1.54226 ω − 0.26992 ω², from ω = 0.49 on
    m = 0.379642 + 1.48503 ω − 0.164423 ω² + 0.016666 ω³ (D.-Y. Peng, D. B. Robinson, Ind. Eng.
    Chem. Fundam. 15 (1976) 59; Robinson and Peng, GPA Research Report 28, 1978).  Above Tc
    α = exp(2 c (1 − t^d)), d = 1 + m/2, c = 1 − 1/d (J. F. Boston, P. M. Mathias, Second Int.
    Conf. on Phase Equilibria and Fluid Properties in the Chemical Process Industries, 1980),
    which falls to zero and meets the other's slope at Tc.
    """
    w = acentric_factor
    m = 0.37464 + 1.54226 * w - 0.26992 * w**2
    if w > 0.49:
        m = 0.379642 + 1.48503 * w - 0.164423 * w**2 + 0.016666 * w**3
    d = 1.0 + m / 2.0
    below = (
        ((1.0 + m) ** 2, 0.0, 0.0, 0.0),
        (-2.0 * m * (1.0 + m), 0.5, 0.0, 0.0),
        (m * m, 1.0, 0.0, 0.0),
    )
    return below, ((1.0, 0.0, 2.0 * (1.0 - 1.0 / d), d),)


def graboski_daubert() -> tuple[Terms, Terms]:
    """α of hydrogen in the Soave-Redlich-Kwong equation, 1.202 exp(−0.30288 t).

    Source: M. S. Graboski, T. E. Daubert, Ind. Eng. Chem. Process Des. Dev. 18 (1979) 300.
    """
    L = 0.30288
    terms: Terms = ((1.202 * float(np.exp(-L)), 0.0, L, 1.0),)
    return terms, terms


def _generalised(
    parameters: tuple[tuple[float, float, float], tuple[float, float, float]], omega: float
) -> Terms:
    weights = (1.0 - omega, omega)
    return tuple(
        (weight, N * (M - 1.0), L, N * M)
        for weight, (L, M, N) in zip(weights, parameters, strict=True)
    )
