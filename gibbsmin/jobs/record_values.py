"""Readers of the values in a library file's tables."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from typing import Annotated, Any

from pydantic import BeforeValidator

from gibbsmin.constants import AVOGADRO_CONSTANT, PLANCK_CONSTANT, SPEED_OF_LIGHT
from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import read_text
from gibbsmin.units import (
    read_molar_energy,
    read_molar_entropy,
    read_pressure,
    read_temperature,
    shown,
)

_HUGE = 1e100
"""No number of a record is beyond."""

_MOMENT = re.compile(
    r"\s*(?P<number>(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(?P<unit>kg m2|g cm2|u A2)\s*"
)
_MOMENT_UNITS = {"kg m2": 1.0, "g cm2": 1e-7, "u A2": 1e-23 / AVOGADRO_CONSTANT}
"""kg m² of each; u Å² is the atomic mass constant, a gram per mole, times 1e-20 m²."""


def read_number(given: object) -> float:
    """A finite number below 1e100 in size."""
    if isinstance(given, bool) or not isinstance(given, int | float) or given != given:
        found = "found nothing" if given is None else f"found {shown(given)}"
        raise InputError(found, "accepted is a number")
    if not abs(given) < _HUGE:
        raise InputError(f"found {shown(given)}", f"accepted is a number below {_HUGE:g} in size")
    return float(given)


def positive(read: Callable[[object], float], *, zero: bool) -> BeforeValidator:
    """A value above zero, or zero too."""

    def checked(given: object) -> float:
        value = read(given)
        if value < 0.0 or (value == 0.0 and not zero):
            accepted = "zero or more" if zero else "a value above zero"
            raise InputError(f"found {shown(given)}", f"accepted is {accepted}")
        return value

    return BeforeValidator(checked)


def read_numbers(given: object) -> tuple[float, ...]:
    """A list of finite numbers."""
    if not isinstance(given, list | tuple) or not given:
        raise InputError(f"found {shown(given)}", "accepted is a list of numbers")
    return tuple(read_number(value) for value in given)


def listed(read: Callable[[object], Any], example: str) -> BeforeValidator:
    """A list, each of its values read alike."""

    def each(given: object) -> tuple[Any, ...]:
        if not isinstance(given, list | tuple) or not given:
            raise InputError(f"found {shown(given)}", f"accepted is a list such as {example}")
        return tuple(read(value) for value in given)

    return BeforeValidator(each)


def tables_of(name: str) -> BeforeValidator:
    """[[name]] tables."""

    def read(given: object) -> tuple[Any, ...]:
        if not isinstance(given, list | tuple) or not given:
            found = f"found {shown(given)}" if given else "found nothing"
            raise InputError(found, f"accepted are [[{name}]] tables")
        return tuple(given)

    return BeforeValidator(read)


def read_whole(given: object) -> int:
    """A whole number from 1."""
    if isinstance(given, bool) or not isinstance(given, int) or given < 1:
        found = "found nothing" if given is None else f"found {shown(given)}"
        raise InputError(found, "accepted is a whole number from 1")
    return given


def read_moment(given: object) -> float:
    """The rotational constant in 1/cm of a moment of inertia, B = h/(8π² c I)."""
    match = _MOMENT.fullmatch(given) if isinstance(given, str) else None
    value = float(match["number"]) * _MOMENT_UNITS[match["unit"]] if match else 0.0
    if not 0.0 < value < math.inf:
        raise InputError(
            f"found {shown(given)}, which is no moment of inertia",
            'accepted is one such as "1.4e-46 kg m2", "1.4e-39 g cm2" or "84 u A2"',
        )
    return PLANCK_CONSTANT / (8.0 * math.pi**2 * SPEED_OF_LIGHT * value) / 100.0


def read_capacity_unit(given: object) -> float:
    """J/(mol K) in one of the unit stated."""
    accepted = 'accepted is one such as "J/(mol K)" or "cal/(mol K)"'
    if given is None:
        raise InputError("found no unit", accepted)
    try:
        return read_molar_entropy(f"1 {given}")
    except InputError:
        raise InputError(f"found {shown(given)}, which is no unit of it", accepted) from None


def read_level(given: object) -> tuple[float, float]:
    """A wavenumber with its degeneracy, which is 1 where it stands alone."""
    values = read_numbers(given if isinstance(given, list | tuple) else [given, 1])
    if len(values) != 2:
        raise InputError(
            f"found {len(values)} numbers", "accepted is a wavenumber, or it and its degeneracy"
        )
    if values[1] < 1.0 or not values[1].is_integer():
        raise InputError(f"found the degeneracy {values[1]:g}", "accepted is a whole number from 1")
    return values[0], values[1]


def read_groups(given: object) -> Mapping[str, Any] | None:
    """Counts by group, which the estimate checks."""
    if given is None or (isinstance(given, Mapping) and given):
        return given
    raise InputError(f"found {shown(given)}", "accepted is a table such as { CH3 = 2, CH2 = 1 }")


Temperature = Annotated[float, BeforeValidator(read_temperature)]
Pressure = Annotated[float, BeforeValidator(read_pressure)]
MolarEnergy = Annotated[float, BeforeValidator(read_molar_energy)]
MolarEntropy = Annotated[float, BeforeValidator(read_molar_entropy)]
Entropy = Annotated[float, positive(read_molar_entropy, zero=False)]
NotNegativeEnergy = Annotated[float, positive(read_molar_energy, zero=True)]
NotNegativeEntropy = Annotated[float, positive(read_molar_entropy, zero=True)]
Number = Annotated[float, BeforeValidator(read_number)]
NotNegative = Annotated[float, positive(read_number, zero=True)]
Numbers = Annotated[tuple[float, ...], BeforeValidator(read_numbers)]
Text = Annotated[str, BeforeValidator(read_text)]
