"""The gas equation of the TRC tables, as the package chemicals carries its coefficients.

    Cp/R = a0 + (a1/T²) exp(−a2/T) + a3 y² + (a4 − a5/(T − a7)²) y⁸
    y    = (T − a7)/(T + a6) above a7, else 0

Kabo, G. J. and Roganov, G. N., Thermodynamics of Organic Compounds in the Gas State, TRC, 1994.
H and S follow by Gauss-Legendre quadrature, so that Cp, H and S agree to rounding; the absolute
entropy takes the source's own closed form, whose constant J counts from 0 K.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final, Self

import numpy as np
from gibbsmin.data.build import reference_tables as tables

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.thermo.formula import Formula

# H(298.15 K) − H(0 K) of an atom in its element's reference state, J/mol: CODATA Key Values
# (Cox, Wagman and Medvedev, 1989).
_ELEMENT_ENTHALPIES: Final = {
    "C": 1050.0,
    "H": 8467.0 / 2,
    "O": 8680.0 / 2,
    "N": 8670.0 / 2,
    "S": 4412.0,
    "F": 8825.0 / 2,
    "Cl": 9181.0 / 2,
    "Br": 24520.0 / 2,
    "I": 13196.0 / 2,
}
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(40)


@dataclass(frozen=True, slots=True)
class TrcGas:
    """Coefficients of one gas; ``enthalpy_constant`` and ``entropy_constant`` are I and J."""

    T_low: float
    T_high: float
    a: tuple[float, ...]
    enthalpy_constant: float
    entropy_constant: float
    dfH: float | None

    @classmethod
    def of(cls, cas: str) -> Self | None:
        row = tables.table(tables.TRC_GAS).get(cas)
        if row is None:
            return None
        return cls(
            float(row["Tmin"]),
            float(row["Tmax"]),
            tuple(float(row[f"a{i}"]) for i in range(8)),
            float(row["I"]),
            float(row["J"]),
            tables.value(tables.TRC_GAS, cas, "Hfg"),
        )

    def heat_capacity(self, T: FloatArray) -> FloatArray:
        """Cp in J/mol/K, same shape as T."""
        a0, a1, a2, a3, a4, a5, a6, a7 = self.a
        above = np.maximum(T - a7, 0.0)
        y = above / (T + a6)
        # (a5/(T − a7)²) y⁸ written without its pole at a7.
        pole = a5 * y**6 / (T + a6) ** 2
        reduced = a0 + a1 / T**2 * np.exp(-a2 / T) + a3 * y**2 + a4 * y**8 - pole
        return np.asarray(GAS_CONSTANT * reduced)

    def enthalpy(self, T: FloatArray) -> FloatArray:
        """H(T) − H(298.15 K), J/mol."""
        return self._integral(T, 0)

    def entropy(self, T: FloatArray) -> FloatArray:
        """S(T) − S(298.15 K), J/mol/K."""
        return self._integral(T, 1)

    def absolute_entropy(self, T: FloatArray) -> FloatArray:
        """S(T) in J/mol/K, from the source's constant J."""
        a0, a1, a2, a3, a4, a5, a6, a7 = self.a
        x = np.exp(-a2 / T)
        rigid = a0 * np.log(T) + a1 / a2**2 * (1 + a2 / T) * x
        y = np.maximum(T - a7, 0.0) / (T + a6)
        z = T / (T + a6) * (a7 + a6) / a7
        ratio, b = a7 / a6, (a4 * a7**2 - a5) / a6**2
        series = sum((b * (-ratio) ** (6 - i) - a4) * y**i / i for i in range(1, 8))
        soft = (
            (a3 + b * ratio**4) * ratio**2 * np.log(z)
            + (a3 + a4) * np.log((T + a6) / (a6 + a7))
            + series
            - (a3 / a6 * (a6 + a7) + a5 * y**6 / (7 * a7 * (a6 + a7))) * y
        )
        return np.asarray(
            GAS_CONSTANT * (self.entropy_constant + rigid + np.where(a7 < T, soft, 0.0))
        )

    def enthalpy_of_formation(self, formula: Formula) -> float | None:
        """ΔfH°(298.15 K) in J/mol; ``None`` where the source or an element's constant is missing.

        The source prints ΔfH°(0 K) where its constant I counts enthalpy from 0 K, and
        ΔfH°(298.15 K) where I makes the enthalpy vanish there.
        """
        if self.dfH is None or any(s not in _ELEMENT_ENTHALPIES for s, _ in formula.elements):
            return None
        if abs(self.enthalpy_constant) > _COUNTED_FROM_298:
            return self.dfH
        # Below 1 K the equation is its constant term.
        from_zero = GAS_CONSTANT * self.a[0] - self.enthalpy(np.array([1.0]))[0]
        elements = sum(_ELEMENT_ENTHALPIES[symbol] * n for symbol, n in formula.elements)
        return float(self.dfH + from_zero - elements)

    def _integral(self, T: FloatArray, power: int) -> FloatArray:
        half, middle = (T - REFERENCE_TEMPERATURE) / 2, (T + REFERENCE_TEMPERATURE) / 2
        points = middle[:, None] + half[:, None] * _NODES
        return np.asarray(half * ((self.heat_capacity(points) / points**power) @ _WEIGHTS))


_COUNTED_FROM_298: Final = 1000.0
"""I is below a few hundred K where enthalpy counts from 0 K, and a few thousand otherwise."""
