"""Mixtures of real gases: compressibility, fugacity coefficients and departures from ideal gases.

Gases without published critical constants (radicals, ions, most high-temperature molecules) are
taken as points without attraction: a = b = 0 in the mixing rules.  Alone they are an ideal gas; in
a mixture they share its free volume, φ = 1/(Z − B), so that the mixture stays consistent.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import Enum
from typing import Final, Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.attraction import (
    Attraction,
    Terms,
    graboski_daubert,
    peng_robinson,
    twu_peng_robinson,
    twu_redlich_kwong,
)
from gibbsmin.thermo.critical import CriticalPoint, critical_points, interactions
from gibbsmin.thermo.cubic import Potential, Shape, compressibility
from gibbsmin.thermo.gas_state import GasState, Pulls, dot
from gibbsmin.thermo.species import Species

_ROOT_2: Final = float(np.sqrt(2.0))

_CLASSICAL_HELIUM: Final = CriticalPoint(10.47, 6.76e5, 0.0, "Gunn-1966")
"""The classical limit, beyond quantum effects, of helium's critical constants.

R. D. Gunn, P. L. Chueh, J. M. Prausnitz, AIChE J. 12 (1966) 937.  Their correction at finite
temperature, 1 + 21.8/(M T) on Tc, is below 3 % from 200 K up and is left out."""

_POINT: Final = 1e-12
"""m³/mol: the co-volume of gases without constants, so that nothing divides by zero."""


class Equation(Enum):
    """Published cubic equations of state; the value is the name in full.

    SOAVE_REDLICH_KWONG: G. Soave, Chem. Eng. Sci. 27 (1972) 1197, with the generalised α of Twu,
    Coon and Cunningham (1995), and for hydrogen that of Graboski and Daubert (1979).
    PENG_ROBINSON: D.-Y. Peng, D. B. Robinson (1976, 1978), continued above Tc by Boston and
    Mathias (1980), and for hydrogen the α of Twu, Coon and Cunningham (1995).
    Helium: classical critical constants of Gunn, Chueh and Prausnitz (1966).
    """

    SOAVE_REDLICH_KWONG = "Soave-Redlich-Kwong"
    PENG_ROBINSON = "Peng-Robinson"

    @property
    def shape(self) -> Shape:
        """σ, ε, Ωa and Ωb."""
        if self is Equation.SOAVE_REDLICH_KWONG:
            root = 2.0 ** (1.0 / 3.0) - 1.0
            return Shape(1.0, 0.0, 1.0 / (9.0 * root), root / 3.0)
        return Shape(1.0 + _ROOT_2, 1.0 - _ROOT_2, 0.457235528921382, 0.0777960739038885)

    def attraction_of(self, name: str, acentric_factor: float) -> tuple[Terms, Terms]:
        """Terms of α of a gas, below and above its critical temperature."""
        if self is Equation.SOAVE_REDLICH_KWONG:
            return graboski_daubert() if name == "H2(g)" else twu_redlich_kwong(acentric_factor)
        return (twu_peng_robinson if name == "H2(g)" else peng_robinson)(acentric_factor)


def equation_named(name: str) -> Equation:
    """The equation of that name.

    Raises
    ------
    InputError
        for any other name.
    """
    for equation in Equation:
        if equation.value == name:
            return equation
    accepted = " or ".join(f'"{equation.value}"' for equation in Equation)
    raise InputError(f'found the equation of state "{name}"', f"accepted is {accepted}")


@dataclass(frozen=True, eq=False)
class RealGas:
    """S gases in one equation of state.

    Attributes
    ----------
    equation : which
    names : (S,) of the records
    known : (S,) whether critical constants are published
    critical_temperatures : (S,) K; NaN for gases without constants
    critical_pressures : (S,) Pa; likewise
    acentric_factors : (S,) likewise
    sizes : (S,) √a at Tc, in √(Pa m⁶)/mol
    volumes : (S,) b, m³/mol
    attraction : α(T)
    coupling : (S, S) 1 − k
    """

    equation: Equation
    names: tuple[str, ...]
    known: BoolArray
    critical_temperatures: FloatArray
    critical_pressures: FloatArray
    acentric_factors: FloatArray
    sizes: FloatArray
    volumes: FloatArray
    attraction: Attraction
    coupling: FloatArray

    @classmethod
    def of(cls, equation: Equation, records: Sequence[Species]) -> Self:
        """Lay out the records, all of them gases."""
        names = tuple(record.name for record in records)
        points = [_point(name) for name in names]
        known = np.array([point is not None for point in points], dtype=bool)
        Tc, Pc, omega = (
            np.array([np.nan if p is None else getattr(p, field) for p in points], dtype=float)
            for field in ("temperature", "pressure", "acentric_factor")
        )
        shape = equation.shape
        with np.errstate(invalid="ignore"):
            sizes = GAS_CONSTANT * Tc * np.sqrt(shape.omega_a / Pc)
            volumes = shape.omega_b * GAS_CONSTANT * Tc / Pc
        alphas: list[tuple[Terms, Terms]] = [
            ((), ()) if point is None else equation.attraction_of(name, point.acentric_factor)
            for name, point in zip(names, points, strict=True)
        ]
        return cls(
            equation=equation,
            names=names,
            known=known,
            critical_temperatures=Tc,
            critical_pressures=Pc,
            acentric_factors=omega,
            sizes=np.where(known, sizes, 0.0),
            volumes=np.where(known, volumes, _POINT),
            attraction=Attraction(tuple(np.where(known, Tc, 1.0).tolist()), tuple(alphas)),
            coupling=_coupling(equation, names),
        )

    def pulls(self, temperature: npt.ArrayLike) -> Pulls:
        """√a of each gas at T (K) and how it changes."""
        alpha, first, second = self.attraction.at(np.asarray(temperature, dtype=float))
        safe = np.where(self.known, 2.0 * alpha, 1.0)
        g = first / safe
        return Pulls(np.asarray(self.sizes * np.sqrt(alpha)), g, second / safe - g * g)

    def state(
        self,
        temperature: npt.ArrayLike,
        pressure: npt.ArrayLike,
        amounts: npt.ArrayLike,
        pulls: Pulls | None = None,
        liquid: bool = False,
    ) -> GasState:
        """The mixture at T (K), P (Pa) of shape (...), amounts (..., S) in any unit.

        Its volume is that of a gas, or of a liquid where the equation has both.  Without any gas
        all is NaN.  ``pulls`` of the temperatures may be given where they are at hand.
        """
        T, P = np.asarray(temperature, dtype=float), np.asarray(pressure, dtype=float)
        T, P = np.broadcast_arrays(T, P)
        n = np.asarray(amounts, dtype=float)
        total = n.sum(axis=-1, keepdims=True)
        y = n / np.where(total > 0.0, total, np.nan)
        pulls = self.pulls(T) if pulls is None else pulls
        weighted = y * pulls.root
        pulled = weighted @ self.coupling
        D = dot(weighted, pulled)
        B = y @ self.volumes
        RT = GAS_CONSTANT * T
        Z = compressibility(self.equation.shape, D * P / RT**2, B * P / RT, liquid)
        V = Z * RT / P
        return GasState(
            gas=self,
            T=T,
            P=P,
            y=y,
            Z=Z,
            V=V,
            pulls=pulls,
            weighted=weighted,
            pulled=pulled,
            D=D,
            B=B,
            potential=Potential(self.equation.shape, V, B),
        )


def _point(name: str) -> CriticalPoint | None:
    return _CLASSICAL_HELIUM if name == "He(g)" else critical_points().get(name)


def _coupling(equation: Equation, names: Sequence[str]) -> FloatArray:
    coupling = np.ones((len(names), len(names)))
    places = {name: place for place, name in enumerate(names)}
    for pair, k in interactions(equation.value).items():
        first, second = (places.get(name) for name in sorted(pair))
        if first is not None and second is not None:
            coupling[first, second] = coupling[second, first] = 1.0 - k
    return coupling
