"""A library file's ``[[record]]`` tables: species of the user's own."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.record_values import (
    Entropy,
    MolarEnergy,
    NotNegative,
    NotNegativeEnergy,
    NotNegativeEntropy,
    Number,
    Numbers,
    Pressure,
    Temperature,
    Text,
    listed,
    positive,
    read_capacity_unit,
    read_groups,
    read_level,
    read_moment,
    read_number,
    read_whole,
    tables_of,
)
from gibbsmin.jobs.stage_schema import word
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.thermo.third_law import RELATIVE_UNCERTAINTY
from gibbsmin.units import read_density, read_temperature

KINDS = ("heat_capacity", "table", "calorimetry", "spectrum", "groups")
"""What gives a record its heat capacity."""


class PieceTable(Table):
    """Cp = A + B t + C t² + D t³ + E/t² between two temperatures, t as stated.

    ``transition`` is the enthalpy taken up at the first of them, where the piece below ends.
    """

    first: Temperature = MISSING
    last: Temperature = MISSING
    unit: Annotated[float, BeforeValidator(read_capacity_unit)] = MISSING
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

    unit: Annotated[float, BeforeValidator(read_capacity_unit)] = MISSING
    temperature: Annotated[tuple[float, ...], listed(read_temperature, '["300 K", "400 K"]')] = (
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
        tuple[TransitionTable, ...], tables_of("record.calorimetry.transition")
    ] = ()
    residual_entropy: NotNegativeEntropy = 0.0
    relative_uncertainty: NotNegative = RELATIVE_UNCERTAINTY
    vapour: VapourTable | None = None


class RotorTable(Table):
    """An internal rotation; barrier and constant in 1/cm."""

    barrier: NotNegative = MISSING
    fold: Annotated[int, BeforeValidator(read_whole)] = MISSING
    constant: Annotated[float, positive(read_number, zero=False)] = MISSING
    symmetry_number: Annotated[int, BeforeValidator(read_whole)] = MISSING


class SpectrumTable(Table):
    """A molecule's spectrum; wavenumbers and constants in 1/cm."""

    symmetry_number: Annotated[int, BeforeValidator(read_whole)] = MISSING
    rotational_constants: Numbers = ()
    moments_of_inertia: Annotated[tuple[float, ...], listed(read_moment, '["1.4e-46 kg m2"]')] = ()
    vibrations: Annotated[
        tuple[tuple[float, float], ...], listed(read_level, "[[667.4, 2], 1333]")
    ] = ()
    electronic: Annotated[tuple[tuple[float, float], ...], listed(read_level, "[[0, 2]]")] = (
        (0.0, 1.0),
    )
    anharmonicity: NotNegative = 0.0
    cubic_anharmonicity: Number = 0.0
    coupling: Number = 0.0
    distortion: NotNegative = 0.0
    stretching: NotNegative = 0.0
    internal_rotation: Annotated[
        tuple[RotorTable, ...], tables_of("record.spectrum.internal_rotation")
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
    temperature: Annotated[tuple[float, ...], listed(read_temperature, '["900 K", "1000 K"]')] = (
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
        float | None, BeforeValidator(lambda given: None if given is None else read_number(given))
    ] = None
    density: Annotated[float | None, BeforeValidator(read_density)] = None
    enthalpy: MolarEnergy | None = None
    enthalpy_uncertainty: NotNegativeEnergy | None = None
    entropy: Entropy | None = None
    entropy_uncertainty: NotNegativeEntropy | None = None
    heat_capacity: Annotated[tuple[PieceTable, ...], tables_of("record.heat_capacity")] = ()
    table: HeatCapacityTable | None = None
    calorimetry: CalorimetryTable | None = None
    spectrum: SpectrumTable | None = None
    groups: Annotated[Mapping[str, Any] | None, BeforeValidator(read_groups)] = None
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

    record: Annotated[tuple[RecordTable, ...], tables_of("record")] = MISSING
