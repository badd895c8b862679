"""Absolute entropy from calorimetry near 0 K, by the third law.

    S = Cp(T₁)/3 + ∫ Cp/T dT + Σ ΔH_t/T_t + S_residual

with P. Debye's T³ law below the lowest point T₁ (Ann. Phys. 39 (1912) 789), Cp between the points
by a monotone cubic (F. N. Fritsch, R. E. Carlson, SIAM J. Numer. Anal. 17 (1980) 238), each phase
by itself.  A vapour at pressure p is brought to the ideal gas at P° by D. Berthelot's equation,
S_ideal − S_real = 27 R Tc³ p/(32 Pc T³), and by R ln(p/P°).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.errors import InputError

_LOW = 20.0
"""K from which the T³ law is a poor guide; the extrapolation's uncertainty then is half of it."""

_EXTRAPOLATION = 0.05


@dataclass(frozen=True)
class Transition:
    """A change of phase: T in K, ΔH in J/mol and the standard uncertainty of ΔH."""

    temperature: float
    enthalpy: float
    uncertainty: float = 0.0
    name: str = "transition"


@dataclass(frozen=True)
class Vapour:
    """What brings a vapour at its pressure to the ideal gas: Pa, and its critical point."""

    pressure: float
    critical_temperature: float
    critical_pressure: float


@dataclass(frozen=True)
class Contribution:
    """One part of an entropy, J/mol/K, and its standard uncertainty."""

    name: str
    value: float
    uncertainty: float


@dataclass(frozen=True)
class ThirdLawEntropy:
    """An absolute entropy with all that makes it.

    Attributes
    ----------
    temperature : K
    entropy, uncertainty : J/mol/K
    contributions : its parts in order
    """

    temperature: float
    entropy: float
    uncertainty: float
    contributions: tuple[Contribution, ...]


def third_law_entropy(
    temperatures: npt.ArrayLike,
    heat_capacities: npt.ArrayLike,
    end: float,
    *,
    transitions: Sequence[Transition] = (),
    relative_uncertainty: float = 0.005,
    residual: Contribution | None = None,
    vapour: Vapour | None = None,
) -> ThirdLawEntropy:
    """Entropy at ``end`` K from heat capacities (n,) in J/mol/K.

    Parameters
    ----------
    transitions
        In any order; heat capacities of a phase are those between two of them.
    relative_uncertainty
        Standard uncertainty of the heat capacities, taken as common to all of a phase.
    residual
        Entropy left at 0 K, such as R ln 2 of a disordered crystal.
    vapour
        Brings a vapour at ``end`` to the ideal gas.

    Raises
    ------
    InputError
        for temperatures that do not rise, heat capacities not above zero, and a phase without
        points.
    """
    T, Cp = _checked(temperatures, heat_capacities)
    parts = [*_below(T[0], Cp[0])]
    ordered = sorted((t for t in transitions if t.temperature <= end), key=lambda t: t.temperature)
    start = float(T[0])
    for transition in [*ordered, None]:
        stop = end if transition is None else transition.temperature
        parts.append(_integral(T, Cp, start, stop, relative_uncertainty))
        if transition is not None:
            parts.append(
                Contribution(
                    f"{transition.name} at {stop:g} K",
                    transition.enthalpy / stop,
                    transition.uncertainty / stop,
                )
            )
        start = stop
    if residual is not None:
        parts.append(residual)
    if vapour is not None:
        parts += _to_ideal_gas(vapour, end)
    return summed(end, parts)


def summed(temperature: float, parts: Sequence[Contribution]) -> ThirdLawEntropy:
    """Contributions added up, their uncertainties in quadrature."""
    return ThirdLawEntropy(
        temperature,
        sum(part.value for part in parts),
        float(np.sqrt(sum(part.uncertainty**2 for part in parts))),
        tuple(parts),
    )


def _below(T: float, Cp: float) -> Iterator[Contribution]:
    share = _EXTRAPOLATION if T < _LOW else 0.5
    yield Contribution(f"0 K to {T:g} K, T³ law", Cp / 3.0, share * Cp / 3.0)


def _integral(
    T: FloatArray, Cp: FloatArray, start: float, stop: float, relative: float
) -> Contribution:
    """∫ Cp/T dT of one phase; Cp runs on in a straight line beyond its last points."""
    from scipy.interpolate import PchipInterpolator

    # A point at a transition belongs to the phase below it.
    inside = (stop >= T) & ((start < T) if start > T[0] else (start <= T))
    x, y = T[inside], Cp[inside]
    if x.size < 2:
        raise InputError(
            f"found {x.size} heat capacities between {start:g} K and {stop:g} K",
            "accepted are at least two in each phase",
            key="heat_capacity",
        )
    if x[0] > start:
        y = np.insert(y, 0, y[0] + (y[1] - y[0]) / (x[1] - x[0]) * (start - x[0]))
        x = np.insert(x, 0, start)
    if x[-1] < stop:
        y = np.append(y, y[-1] + (y[-1] - y[-2]) / (x[-1] - x[-2]) * (stop - x[-1]))
        x = np.append(x, stop)
    smooth = PchipInterpolator(x, y)
    nodes, weights = np.polynomial.legendre.leggauss(8)
    middle, half = (x[1:] + x[:-1]) / 2.0, np.diff(x) / 2.0
    points = middle[:, np.newaxis] + half[:, np.newaxis] * nodes
    value = float(np.sum(half[:, np.newaxis] * weights * smooth(points) / points))
    return Contribution(f"{start:g} K to {stop:g} K, heat capacity", value, relative * value)


def _to_ideal_gas(vapour: Vapour, T: float) -> Iterator[Contribution]:
    Tc, Pc, p = vapour.critical_temperature, vapour.critical_pressure, vapour.pressure
    value = 27.0 * GAS_CONSTANT * Tc**3 * p / (32.0 * Pc * T**3)
    # Berthelot's equation is an approximation: a third of what it corrects.
    yield Contribution("gas imperfection (Berthelot)", value, value / 3.0)
    yield Contribution("to 1 bar", GAS_CONSTANT * float(np.log(p / STANDARD_PRESSURE)), 0.0)


def _checked(
    temperatures: npt.ArrayLike, heat_capacities: npt.ArrayLike
) -> tuple[FloatArray, FloatArray]:
    T, Cp = (np.asarray(values, dtype=float) for values in (temperatures, heat_capacities))
    if T.ndim != 1 or T.shape != Cp.shape or T.size < 2:
        raise InputError(
            f"found {T.size} temperatures and {Cp.size} heat capacities",
            "accepted are as many of one as of the other, at least two",
            key="heat_capacity",
        )
    falling = np.flatnonzero(np.diff(T) <= 0.0)
    if falling.size or T[0] <= 0.0:
        at = T[falling[0] + 1] if falling.size else T[0]
        raise InputError(
            f"found temperatures that do not rise at {at:g} K",
            "accepted are temperatures above 0 K in rising order",
            key="temperature",
        )
    if np.any(Cp <= 0.0):
        raise InputError(
            f"found a heat capacity of {Cp.min():g} J/(mol K)",
            "accepted are heat capacities above zero",
            key="heat_capacity",
        )
    return T, Cp
