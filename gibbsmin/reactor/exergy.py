"""Exergy of a stream: the work it could yield in coming to rest with its surroundings.

Physical exergy, at unchanged composition:  Σ n [H(T) − H(T0) − T0 (S(T) − S(T0))] + N R T0 ln P/P0
Chemical exergy, of the mixture at T0, P0:  Σ n [G(T0) − Σ_e a_e μ_e] + R T0 Σ_gas n ln(y P0/P°)

μ_e is the potential of an element in the reference environment of Szargut's model: of C, H, O, N
and the noble gases from the partial pressures of CO2, H2O, O2, N2, Ar, … in the standard
atmosphere, at any T0; of the other elements from their published standard chemical exergies, which
stand for 298.15 K alone.
"""

from __future__ import annotations

import csv
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import (
    GAS_CONSTANT,
    REFERENCE_TEMPERATURE,
    STANDARD_ATMOSPHERE,
    STANDARD_PRESSURE,
)
from gibbsmin.errors import InputError
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import Phase, Species

EXERGY_SOURCE: Final = (
    "reference environment of J. Szargut (CO2, H2O, O2, N2 and noble gases of the standard "
    "atmosphere, published standard chemical exergies for the other elements)"
)

_ATMOSPHERE: Final = {
    "O": "O2(g)",
    "H": "H2O(g)",
    "C": "CO2(g)",
    "N": "N2(g)",
    "Ar": "Ar(g)",
    "He": "He(g)",
    "Ne": "Ne(g)",
    "Kr": "Kr(g)",
    "Xe": "Xe(g)",
}


@dataclass(frozen=True)
class Surroundings:
    """Temperature (K) and pressure (Pa) of the surroundings, and standard chemical exergies.

    ``chemical`` gives J/mol at 298.15 K and 101.325 kPa by record: of the atmosphere's gases and
    of elements in their reference forms.
    """

    temperature: float
    pressure: float
    chemical: Mapping[str, float]


@dataclass(frozen=True)
class Exergy:
    """Exergy of a stream in J (W for a flow); the chemical part is NaN where ``remark`` says why.

    It is counted against the surroundings' temperature and pressure, in which the environment's
    substances have none.
    """

    physical: float
    chemical: float
    remark: str

    @property
    def total(self) -> float:
        """Physical and chemical exergy together."""
        return self.physical + self.chemical


@cache
def standard_chemical_exergies() -> Mapping[str, float]:
    """The library's table ``exergy_reference.csv``, J/mol by record."""
    text = files("gibbsmin.data").joinpath("exergy_reference.csv").read_text(encoding="utf-8")
    return {
        row["record"]: 1000.0 * float(row["standard_chemical_exergy_kJ_per_mol"])
        for row in csv.DictReader(text.splitlines())
    }


def szargut_surroundings(
    temperature: float = REFERENCE_TEMPERATURE, pressure: float = STANDARD_ATMOSPHERE
) -> Surroundings:
    """Surroundings at a temperature (K) and pressure (Pa) with Szargut's environment.

    Raises
    ------
    InputError
        For a temperature or pressure that is not above 0.
    """
    if not (temperature > 0.0 and pressure > 0.0):
        raise InputError(
            f"found surroundings at {temperature:g} K and {pressure:g} Pa",
            "accepted are a temperature and a pressure above 0",
        )
    return Surroundings(temperature, pressure, standard_chemical_exergies())


def stream_exergy(
    records: Sequence[Species],
    amounts: FloatArray,
    temperature: float,
    pressure: float,
    surroundings: Surroundings,
    library: Library,
    equation: Equation | None = None,
) -> Exergy:
    """Exergy of a mixture at T (K) and P (Pa); amounts (S,) in mol; without an equation ideal."""
    T0, P0 = surroundings.temperature, surroundings.pressure
    mixture = Mixture.of(PropertyTable.of(records), equation)

    def availability(T: float, P: float) -> float:
        H = mixture.enthalpy(T, P, amounts)
        return float(H - T0 * mixture.entropy(T, P, amounts))

    at_rest = availability(T0, P0)
    present = [r for r, amount in zip(records, amounts.tolist(), strict=True) if amount > 0.0]
    potentials, remark = element_potentials(present, surroundings, library)
    elements = [sum(count * potentials.get(e, 0.0) for e, count in r.elements) for r in records]
    return Exergy(
        physical=availability(temperature, pressure) - at_rest,
        chemical=np.nan if remark else at_rest - float(amounts @ np.array(elements)),
        remark=remark,
    )


def element_potentials(
    records: Sequence[Species], surroundings: Surroundings, library: Library
) -> tuple[Mapping[str, float], str]:
    """μ_e in J/mol of the records' elements, and what is missing, or empty."""
    if any(record.charge for record in records):
        return {}, "ions have no chemical exergy in this environment"
    T0 = surroundings.temperature
    symbols = {symbol for record in records for symbol, _ in record.elements}
    oxygen = _in_air("O", surroundings, library) / 2
    potentials = {"O": oxygen}
    for symbol in sorted(symbols - {"O"}):
        if symbol in _ATMOSPHERE:
            gas = library[_ATMOSPHERE[symbol]]
            counts = dict(gas.elements)
            rest = _in_air(symbol, surroundings, library) - counts.get("O", 0.0) * oxygen
            potentials[symbol] = rest / counts[symbol]
            continue
        form = _reference_form(symbol, surroundings, library)
        if form is None:
            return {}, f"no standard chemical exergy of {symbol} is known"
        if abs(T0 - REFERENCE_TEMPERATURE) > 0.01:
            return {}, f"the standard chemical exergy of {symbol} holds at 298.15 K alone"
        G = float(PropertyTable.of([form]).gibbs_energy(T0)[0])
        if form.phase is Phase.GAS:
            G += GAS_CONSTANT * T0 * np.log(STANDARD_ATMOSPHERE / STANDARD_PRESSURE)
        potentials[symbol] = (G - surroundings.chemical[form.name]) / form.atoms
    return potentials, ""


def _in_air(symbol: str, surroundings: Surroundings, library: Library) -> float:
    """Potential of the element's gas at its partial pressure in the environment, J/mol.

    That is the fraction exp(−ε/RT) at 298.15 K of the surroundings' pressure.
    """
    gas, T0 = library[_ATMOSPHERE[symbol]], surroundings.temperature
    log_fraction = -surroundings.chemical[gas.name] / (GAS_CONSTANT * REFERENCE_TEMPERATURE)
    log_pressure = np.log(surroundings.pressure / STANDARD_PRESSURE) + log_fraction
    return float(PropertyTable.of([gas]).gibbs_energy(T0)[0] + GAS_CONSTANT * T0 * log_pressure)


def _reference_form(symbol: str, surroundings: Surroundings, library: Library) -> Species | None:
    for name in surroundings.chemical:
        record = library[name]
        if [element for element, _ in record.elements] == [symbol]:
            return record
    return None
