"""Absolute entropy from calorimetry near 0 K, by the third law.

    S = Cp(T₁)/3 + ∫ Cp/T dT + Σ ΔH_t/T_t + S_residual

with P. Debye's T³ law below the lowest point T₁ (Ann. Phys. 39 (1912) 789), Cp between the points
by a monotone cubic in ln T (F. N. Fritsch, R. E. Carlson, SIAM J. Numer. Anal. 17 (1980) 238), each
phase by itself and on in a straight line to its transitions.  A vapour at pressure p is brought to
the ideal gas at P° by D. Berthelot's equation, S_ideal − S_real = 27 R Tc³ p/(32 Pc T³), and by
R ln(p/P°).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.errors import InputError

RELATIVE_UNCERTAINTY: Final = 0.005
"""Of heat capacities where none is given; judgement: calorimeters state 0.1 to 0.5 %."""

_LOW: Final = 20.0
"""K from which the T³ law is a poor guide; the extrapolation's uncertainty then is half of it."""

_EXTRAPOLATION: Final = 0.05
"""Relative uncertainty of the extrapolation from lower points; judgement."""


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
    relative_uncertainty: float = RELATIVE_UNCERTAINTY,
    residual: Contribution | None = None,
    vapour: Vapour | None = None,
) -> ThirdLawEntropy:
    """Entropy at ``end`` K from heat capacities (n,) in J/mol/K.

    Parameters
    ----------
    temperatures, heat_capacities
        Points in K and J/mol/K, rising; a temperature may stand twice at a transition, the lower
        phase first, and where it stands once it belongs to the lower.
    transitions
        In any order; those above ``end`` are left away.
    relative_uncertainty
        Standard uncertainty of the heat capacities.  It is common to all of them, so that its
        shares of the parts add up before they meet the others in quadrature.
    residual
        Entropy left at 0 K, such as R ln 2 of a disordered crystal.
    vapour
        Brings a vapour at ``end`` to the ideal gas; its boiling is the last transition.

    Raises
    ------
    InputError
        for temperatures that do not rise, heat capacities not above zero, transitions below the
        first point, and a phase with fewer than two points.
    """
    ordered = sorted((t for t in transitions if t.temperature <= end), key=lambda t: t.temperature)
    T, Cp = _checked(temperatures, heat_capacities, ordered)
    parts = [_below(T[0], Cp[0])]
    phase = phases_of(T, ordered)
    common, others = 0.0, [parts[0].uncertainty]
    for k, (start, stop) in enumerate(pairwise([T[0], *(t.temperature for t in ordered), end])):
        # A transition at the very end has nothing above it.
        if stop > start:
            value, spread = _integral(T[phase == k], Cp[phase == k], start, stop)
            both = float(np.hypot(relative_uncertainty * value, spread))
            parts.append(Contribution(f"{start:g} K to {stop:g} K, heat capacity", value, both))
            common += relative_uncertainty * value
            others.append(spread)
        if k < len(ordered):
            parts.append(_of_transition(ordered[k]))
            others.append(parts[-1].uncertainty)
    further = [] if residual is None else [residual]
    if vapour is not None:
        further += ideal_gas_parts(vapour, end)
    parts += further
    others += [part.uncertainty for part in further]
    return ThirdLawEntropy(
        end,
        sum(part.value for part in parts),
        float(np.sqrt(np.sum(np.square([common, *others])))),
        tuple(parts),
    )


def phases_of(temperatures: FloatArray, transitions: Sequence[Transition]) -> IntArray:
    """How many transitions, in rising order, each point lies above."""
    phase = np.searchsorted([t.temperature for t in transitions], temperatures, side="left")
    phase[1:] += np.diff(temperatures) == 0.0
    return np.asarray(phase)


def _below(T: float, Cp: float) -> Contribution:
    share = _EXTRAPOLATION if T < _LOW else 0.5
    return Contribution(f"0 K to {T:g} K, T³ law", Cp / 3.0, share * Cp / 3.0)


def _of_transition(transition: Transition) -> Contribution:
    T = transition.temperature
    return Contribution(
        f"{transition.name} at {T:g} K", transition.enthalpy / T, transition.uncertainty / T
    )


def _integral(T: FloatArray, Cp: FloatArray, start: float, stop: float) -> tuple[float, float]:
    """∫ Cp d(ln T) of one phase, and its difference from straight lines over √3."""
    from scipy.interpolate import PchipInterpolator

    if T.size < 2:
        raise InputError(
            f"found {T.size} heat capacities between {start:g} K and {stop:g} K",
            "accepted are at least two in each phase",
            key="heat_capacity",
        )
    x, y = np.log(T), Cp
    low, high = np.log(start), np.log(stop)
    if x[0] > low:
        y = np.insert(y, 0, y[0] + (y[1] - y[0]) / (x[1] - x[0]) * (low - x[0]))
        x = np.insert(x, 0, low)
    if x[-1] < high:
        y = np.append(y, y[-1] + (y[-1] - y[-2]) / (x[-1] - x[-2]) * (high - x[-1]))
        x = np.append(x, high)
    smooth = PchipInterpolator(x, y)
    value = float(smooth.integrate(low, high))
    knots = np.concatenate([[low], x[(x > low) & (x < high)], [high]])
    lines = float(np.trapezoid(smooth(knots), knots))
    return value, abs(value - lines) / float(np.sqrt(3.0))


def ideal_gas_parts(vapour: Vapour, T: float) -> tuple[Contribution, Contribution]:
    """What brings a vapour at T in K to the ideal gas at 1 bar."""
    Tc, Pc, p = vapour.critical_temperature, vapour.critical_pressure, vapour.pressure
    value = 27.0 * GAS_CONSTANT * Tc**3 * p / (32.0 * Pc * T**3)
    # Berthelot's equation is an approximation: a third of what it corrects.
    return (
        Contribution("gas imperfection (Berthelot)", value, value / 3.0),
        Contribution("to 1 bar", GAS_CONSTANT * float(np.log(p / STANDARD_PRESSURE)), 0.0),
    )


def _checked(
    temperatures: npt.ArrayLike, heat_capacities: npt.ArrayLike, transitions: Sequence[Transition]
) -> tuple[FloatArray, FloatArray]:
    T, Cp = (np.asarray(values, dtype=float) for values in (temperatures, heat_capacities))
    if T.ndim != 1 or T.shape != Cp.shape or T.size < 2:
        raise InputError(
            f"found {T.size} temperatures and {Cp.size} heat capacities",
            "accepted are as many of one as of the other, at least two",
            key="heat_capacity",
        )
    at = [t.temperature for t in transitions]
    step = np.diff(T)
    falling = np.flatnonzero((step < 0.0) | ((step == 0.0) & ~np.isin(T[1:], at)))
    if falling.size or T[0] <= 0.0:
        where = T[falling[0] + 1] if falling.size else T[0]
        raise InputError(
            f"found temperatures that do not rise at {where:g} K",
            "accepted are temperatures above 0 K in rising order",
            key="temperature",
        )
    if np.any(Cp <= 0.0):
        raise InputError(
            f"found a heat capacity of {Cp.min():g} J/(mol K)",
            "accepted are heat capacities above zero",
            key="heat_capacity",
        )
    if at and at[0] <= T[0]:
        raise InputError(
            f"found a transition at {at[0]:g} K, below the first heat capacity",
            f"accepted are transitions above {T[0]:g} K",
            key="transition",
        )
    return T, Cp
