"""A library file's ``[[record]]`` tables: species of the user's own."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from typing import Annotated, Any, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.constants import AVOGADRO_CONSTANT, PLANCK_CONSTANT, SPEED_OF_LIGHT
from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import read_text, word
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.thermo.third_law import RELATIVE_UNCERTAINTY
from gibbsmin.units import (
    read_molar_energy,
    read_molar_entropy,
    read_pressure,
    read_temperature,
    shown,
)

KINDS = ("heat_capacity", "table", "calorimetry", "spectrum", "groups")
"""What gives a record its heat capacity."""

_HUGE = 1e100
"""No number of a record is beyond."""

_MOMENT = re.compile(
    r"\s*(?P<number>(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(?P<unit>kg m2|g cm2|u A2)\s*"
)
_MOMENT_UNITS = {"kg m2": 1.0, "g cm2": 1e-7, "u A2": 1e-23 / AVOGADRO_CONSTANT}
"""kg m² of each; u Å² is the atomic mass constant, a gram per mole, times 1e-20 m²."""


def _number(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not abs(given) < _HUGE:
        found = "found nothing" if given is None else f"found {shown(given)}"
        raise InputError(found, "accepted is a number")
    return float(given)


def _positive(read: Callable[[object], float], *, zero: bool) -> BeforeValidator:
    """A value above zero, or zero too."""

    def checked(given: object) -> float:
        value = read(given)
        if value < 0.0 or (value == 0.0 and not zero):
            accepted = "zero or more" if zero else "a value above zero"
            raise InputError(f"found {shown(given)}", f"accepted is {accepted}")
        return value

    return BeforeValidator(checked)


def _numbers(given: object) -> tuple[float, ...]:
    if not isinstance(given, list | tuple) or not given:
        raise InputError(f"found {shown(given)}", "accepted is a list of numbers")
    return tuple(_number(value) for value in given)


def _listed(read: Callable[[object], Any], example: str) -> BeforeValidator:
    def each(given: object) -> tuple[Any, ...]:
        if not isinstance(given, list | tuple) or not given:
            raise InputError(f"found {shown(given)}", f"accepted is a list such as {example}")
        return tuple(read(value) for value in given)

    return BeforeValidator(each)


def _tables(name: str) -> BeforeValidator:
    """[[name]] tables."""

    def read(given: object) -> tuple[Any, ...]:
        if not isinstance(given, list | tuple) or not given:
            found = f"found {shown(given)}" if given else "found nothing"
            raise InputError(found, f"accepted are [[{name}]] tables")
        return tuple(given)

    return BeforeValidator(read)


def _whole(given: object) -> int:
    if isinstance(given, bool) or not isinstance(given, int) or given < 1:
        found = "found nothing" if given is None else f"found {shown(given)}"
        raise InputError(found, "accepted is a whole number from 1")
    return given


def _moment(given: object) -> float:
    """The rotational constant in 1/cm of a moment of inertia, B = h/(8π² c I)."""
    match = _MOMENT.fullmatch(given) if isinstance(given, str) else None
    value = float(match["number"]) * _MOMENT_UNITS[match["unit"]] if match else 0.0
    if not 0.0 < value < math.inf:
        raise InputError(
            f"found {shown(given)}, which is no moment of inertia",
            'accepted is one such as "1.4e-46 kg m2", "1.4e-39 g cm2" or "84 u A2"',
        )
    return PLANCK_CONSTANT / (8.0 * math.pi**2 * SPEED_OF_LIGHT * value) / 100.0


def _unit(given: object) -> float:
    """J/(mol K) in one of the unit stated."""
    accepted = 'accepted is one such as "J/(mol K)" or "cal/(mol K)"'
    if given is None:
        raise InputError("found no unit", accepted)
    try:
        return read_molar_entropy(f"1 {given}")
    except InputError:
        raise InputError(f"found {shown(given)}, which is no unit of it", accepted) from None


def _pair(given: object) -> tuple[float, float]:
    values = _numbers(given if isinstance(given, list | tuple) else [given, 1])
    if len(values) != 2:
        raise InputError(
            f"found {len(values)} numbers", "accepted is a wavenumber, or it and its degeneracy"
        )
    if values[1] < 1.0 or not values[1].is_integer():
        raise InputError(f"found the degeneracy {values[1]:g}", "accepted is a whole number from 1")
    return values[0], values[1]


def _groups(given: object) -> Mapping[str, Any] | None:
    if given is None or (isinstance(given, Mapping) and given):
        return given
    raise InputError(f"found {shown(given)}", "accepted is a table such as { CH3 = 2, CH2 = 1 }")


Temperature = Annotated[float, BeforeValidator(read_temperature)]
Pressure = Annotated[float, BeforeValidator(read_pressure)]
MolarEnergy = Annotated[float, BeforeValidator(read_molar_energy)]
MolarEntropy = Annotated[float, BeforeValidator(read_molar_entropy)]
Entropy = Annotated[float, _positive(read_molar_entropy, zero=False)]
NotNegativeEnergy = Annotated[float, _positive(read_molar_energy, zero=True)]
NotNegativeEntropy = Annotated[float, _positive(read_molar_entropy, zero=True)]
Number = Annotated[float, BeforeValidator(_number)]
NotNegative = Annotated[float, _positive(_number, zero=True)]
Numbers = Annotated[tuple[float, ...], BeforeValidator(_numbers)]
Text = Annotated[str, BeforeValidator(read_text)]


class PieceTable(Table):
    """Cp = A + B t + C t² + D t³ + E/t² between two temperatures, t as stated.

    ``transition`` is the enthalpy taken up at the first of them, where the piece below ends.
    """

    first: Temperature = MISSING
    last: Temperature = MISSING
    unit: Annotated[float, BeforeValidator(_unit)] = MISSING
    t: Annotated[str, word("T/1000 K", "T/K")] = "T/1000 K"
    A: Number = MISSING
    B: Number = 0.0
    C: Number = 0.0
    D: Number = 0.0
    E: Number = 0.0
    transition: MolarEnergy = 0.0

    @property
    def coefficients(self) -> dict[str, float]:
        """A to E in J/(mol K), with t = T/(1000 K)."""
        factor = 1.0 if self.t == "T/1000 K" else 1e3
        powers = {"A": 0, "B": 1, "C": 2, "D": 3, "E": -2}
        return {
            letter: self.unit * factor**power * getattr(self, letter)
            for letter, power in powers.items()
        }


class HeatCapacityTable(Table):
    """Heat capacities against temperature."""

    unit: Annotated[float, BeforeValidator(_unit)] = MISSING
    temperature: Annotated[tuple[float, ...], _listed(read_temperature, '["300 K", "400 K"]')] = (
        MISSING
    )
    heat_capacity: Numbers = MISSING


class TransitionTable(Table):
    """A change of phase below 298.15 K."""

    name: Text = "transition"
    temperature: Temperature = MISSING
    enthalpy: MolarEnergy = MISSING
    uncertainty: NotNegativeEnergy = 0.0


class VapourTable(Table):
    """The boiling of what is a gas at 298.15 K, and its critical point."""

    boiling: Temperature = MISSING
    pressure: Pressure = MISSING
    critical_temperature: Temperature = MISSING
    critical_pressure: Pressure = MISSING


class CalorimetryTable(HeatCapacityTable):
    """Heat capacities from near 0 K, with what changes on the way."""

    transition: Annotated[
        tuple[TransitionTable, ...], _tables("record.calorimetry.transition")
    ] = ()
    residual_entropy: NotNegativeEntropy = 0.0
    relative_uncertainty: NotNegative = RELATIVE_UNCERTAINTY
    vapour: VapourTable | None = None


class RotorTable(Table):
    """An internal rotation; barrier and constant in 1/cm."""

    barrier: NotNegative = MISSING
    fold: Annotated[int, BeforeValidator(_whole)] = MISSING
    constant: Annotated[float, _positive(_number, zero=False)] = MISSING


class SpectrumTable(Table):
    """A molecule's spectrum; wavenumbers and constants in 1/cm."""

    symmetry_number: Annotated[int, BeforeValidator(_whole)] = MISSING
    rotational_constants: Numbers = ()
    moments_of_inertia: Annotated[tuple[float, ...], _listed(_moment, '["1.4e-46 kg m2"]')] = ()
    vibrations: Annotated[
        tuple[tuple[float, float], ...], _listed(_pair, "[[667.4, 2], 1333]")
    ] = ()
    electronic: Annotated[tuple[tuple[float, float], ...], _listed(_pair, "[[0, 2]]")] = (
        (0.0, 1.0),
    )
    anharmonicity: NotNegative = 0.0
    cubic_anharmonicity: Number = 0.0
    coupling: Number = 0.0
    distortion: NotNegative = 0.0
    stretching: NotNegative = 0.0
    internal_rotation: Annotated[
        tuple[RotorTable, ...], _tables("record.spectrum.internal_rotation")
    ] = ()

    @model_validator(mode="after")
    def _one_rotation(self) -> Self:
        if self.rotational_constants and self.moments_of_inertia:
            raise InputError(
                "found rotational constants and moments of inertia",
                "accepted is one of the two",
                key="moments_of_inertia",
            )
        return self


class ConstantsTable(Table):
    """Measured constants of a reaction whose other species are known.

    ``uncertainty`` is the standard uncertainty of log10 K that is common to all of them.
    """

    reaction: Text = MISSING
    temperature: Annotated[tuple[float, ...], _listed(read_temperature, '["900 K", "1000 K"]')] = (
        MISSING
    )
    log10_K: Numbers = MISSING
    uncertainty: NotNegative = 0.0


class RecordTable(Table):
    """One species record."""

    name: Text = MISSING
    common_name: Annotated[str, BeforeValidator(lambda given: given or "")] = ""
    cas: Annotated[str, BeforeValidator(lambda given: given or "")] = ""
    source: Text = MISSING
    molar_mass: Annotated[
        float | None, BeforeValidator(lambda given: None if given is None else _number(given))
    ] = None
    enthalpy: MolarEnergy | None = None
    enthalpy_uncertainty: NotNegativeEnergy | None = None
    entropy: Entropy | None = None
    entropy_uncertainty: NotNegativeEntropy | None = None
    heat_capacity: Annotated[tuple[PieceTable, ...], _tables("record.heat_capacity")] = ()
    table: HeatCapacityTable | None = None
    calorimetry: CalorimetryTable | None = None
    spectrum: SpectrumTable | None = None
    groups: Annotated[Mapping[str, Any] | None, BeforeValidator(_groups)] = None
    constants: ConstantsTable | None = None

    @model_validator(mode="after")
    def _one_heat_capacity(self) -> Self:
        given = [kind for kind in KINDS if getattr(self, kind)]
        # Calorimetry below 298.15 K may go with a table above it.
        kinds = [kind for kind in given if kind != "calorimetry"] or given
        if len(kinds) != 1:
            raise InputError(
                f"found {' and '.join(kinds)}" if kinds else "found no heat capacity",
                f"accepted is one of {', '.join(KINDS)}",
                key="heat_capacity",
            )
        return self


class LibraryTable(Table):
    """A whole library file."""

    record: Annotated[tuple[RecordTable, ...], _tables("record")] = MISSING
