"""A library file's ``[[record]]`` tables: species of the user's own."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Annotated, Any, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import read_text
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.units import read_molar_energy, read_molar_entropy, read_temperature, shown

KINDS = ("heat_capacity", "table", "calorimetry", "spectrum", "groups")
"""What gives a record its heat capacity."""


def _number(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float):
        raise InputError(f"found {shown(given)}", "accepted is a number")
    return float(given)


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


def _unit(given: object) -> float:
    """J/(mol K) in one of the unit stated."""
    if given is None:
        raise InputError("found no unit", 'accepted is one such as "J/(mol K)" or "cal/(mol K)"')
    return read_molar_entropy(f"1 {given}")


def _pair(given: object) -> tuple[float, float]:
    values = _numbers(given if isinstance(given, list | tuple) else [given, 1])
    if len(values) != 2:
        raise InputError(
            f"found {len(values)} numbers", "accepted is a wavenumber, or it and its degeneracy"
        )
    return values[0], values[1]


def _groups(given: object) -> Mapping[str, Any] | None:
    if given is None or (isinstance(given, Mapping) and given):
        return given
    raise InputError(f"found {shown(given)}", "accepted is a table such as { CH3 = 2, CH2 = 1 }")


Temperature = Annotated[float, BeforeValidator(read_temperature)]
MolarEnergy = Annotated[float, BeforeValidator(read_molar_energy)]
MolarEntropy = Annotated[float, BeforeValidator(read_molar_entropy)]
Number = Annotated[float, BeforeValidator(_number)]
Numbers = Annotated[tuple[float, ...], BeforeValidator(_numbers)]
Text = Annotated[str, BeforeValidator(read_text)]


class PieceTable(Table):
    """Cp = A + B t + C t² + D t³ + E/t², t = T/(1000 K), between two temperatures."""

    first: Temperature = MISSING
    last: Temperature = MISSING
    unit: Annotated[float, BeforeValidator(_unit)] = MISSING
    A: Number = MISSING
    B: Number = 0.0
    C: Number = 0.0
    D: Number = 0.0
    E: Number = 0.0


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
    uncertainty: MolarEnergy = 0.0


class CalorimetryTable(HeatCapacityTable):
    """Heat capacities from near 0 K, with what changes on the way."""

    transition: Annotated[tuple[TransitionTable, ...], BeforeValidator(tuple)] = ()
    residual_entropy: MolarEntropy = 0.0
    relative_uncertainty: Number = 0.005


class RotorTable(Table):
    """An internal rotation; barrier and constant in 1/cm."""

    barrier: Number = MISSING
    fold: Annotated[int, BeforeValidator(lambda given: given)] = MISSING
    constant: Number = MISSING


class SpectrumTable(Table):
    """A molecule's spectrum; wavenumbers and constants in 1/cm."""

    symmetry_number: Annotated[int, BeforeValidator(lambda given: given)] = MISSING
    rotational_constants: Annotated[tuple[float, ...], BeforeValidator(tuple)] = ()
    vibrations: Annotated[
        tuple[tuple[float, float], ...], _listed(_pair, "[[667.4, 2], 1333]")
    ] = ()
    electronic: Annotated[tuple[tuple[float, float], ...], _listed(_pair, "[[0, 2]]")] = (
        (0.0, 1.0),
    )
    anharmonicity: Number = 0.0
    cubic_anharmonicity: Number = 0.0
    coupling: Number = 0.0
    distortion: Number = 0.0
    stretching: Number = 0.0
    internal_rotation: Annotated[tuple[RotorTable, ...], BeforeValidator(tuple)] = ()


class ConstantsTable(Table):
    """Measured constants of a reaction whose other species are known."""

    reaction: Text = MISSING
    temperature: Annotated[tuple[float, ...], _listed(read_temperature, '["900 K", "1000 K"]')] = (
        MISSING
    )
    log10_K: Numbers = MISSING


class RecordTable(Table):
    """One species record."""

    name: Text = MISSING
    common_name: Annotated[str, BeforeValidator(lambda given: given or "")] = ""
    cas: Annotated[str, BeforeValidator(lambda given: given or "")] = ""
    source: Text = MISSING
    molar_mass: Annotated[
        float | None, BeforeValidator(lambda g: None if g is None else _number(g))
    ] = None
    enthalpy: MolarEnergy | None = None
    enthalpy_uncertainty: MolarEnergy | None = None
    entropy: MolarEntropy | None = None
    entropy_uncertainty: MolarEntropy | None = None
    heat_capacity: Annotated[tuple[PieceTable, ...], BeforeValidator(tuple)] = ()
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

    record: Annotated[tuple[RecordTable, ...], BeforeValidator(tuple)] = MISSING
