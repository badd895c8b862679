"""Heating values of mixtures and the cold-gas efficiency.

The higher heating value is the heat that complete combustion gives off at 25 °C with its water
liquid, the lower one with its water as vapour; other products are CO2(g), SO2(g), N2(g) and
HCl(g).  Everything is counted from the state in which a record is: steam in a gas has a higher
heating value (that of its condensation), liquid water in a wet fuel a negative lower one.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE
from gibbsmin.reactor.balance import element_counts
from gibbsmin.reactor.trade_figures import oxygen_demand
from gibbsmin.thermo.fuel import BURNT_TO
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species

_UNBURNT: Final = ("He", "Ne", "Ar", "Kr", "Xe")
_ASH: Final = 0.1
_NORMAL_MOLAR_VOLUME: Final = GAS_CONSTANT * 273.15 / STANDARD_ATMOSPHERE


@dataclass(frozen=True)
class HeatingValue:
    """Heating value of a mixture at 25 °C; NaN where ``remark`` says why.

    Attributes
    ----------
    higher, lower : J (W for a flow) of the amounts given
    mass : kg
    normal_volume : m³ of its gas at 0 °C and 101.325 kPa, as an ideal gas
    remark : empty, or why there is no figure
    """

    higher: float
    lower: float
    mass: float
    normal_volume: float
    remark: str


def heating_value(
    records: Sequence[Species], amounts: FloatArray, library: Library
) -> HeatingValue:
    """Heating value of a mixture of C, H, N, O, S, Cl and noble gases; amounts (S,) in mol."""
    gas = np.array([record.phase is Phase.GAS for record in records], dtype=bool)
    mass = float(amounts @ np.array([record.molar_mass for record in records]))
    volume = float(amounts[gas].sum() * _NORMAL_MOLAR_VOLUME)
    remark = _obstacle(records, amounts)
    if remark:
        return HeatingValue(np.nan, np.nan, mass, volume, remark)
    counts = dict(
        zip((*BURNT_TO, "H"), element_counts(records, (*BURNT_TO, "H")) @ amounts, strict=True)
    )
    water = (counts["H"] - counts["Cl"]) / 2
    formed = float(amounts @ np.array([record.dfH298 for record in records]))
    dry = sum(
        counts[symbol] * library[product].dfH298 / (2 if symbol in ("N", "O") else 1)
        for symbol, product in BURNT_TO.items()
    )
    return HeatingValue(
        higher=float(formed - dry - water * library["H2O(l)"].dfH298),
        lower=float(formed - dry - water * library["H2O(g)"].dfH298),
        mass=mass,
        normal_volume=volume,
        remark="",
    )


def lower_heating_values(records: Sequence[Species], library: Library) -> FloatArray:
    """Lower heating value of a mole of each record, J/mol, shape (S,); NaN where it has none."""
    ones = np.eye(len(records))
    return np.array([heating_value(records, one, library).lower for one in ones])


def without_ash(records: Sequence[Species], amounts: FloatArray) -> FloatArray:
    """Amounts (..., S) less those of records without a heating value, where these are only ash.

    That is up to a tenth of the mass; where there is more, nothing is left out.
    """
    mass = amounts * np.array([record.molar_mass for record in records])
    undefined = np.isnan(oxygen_demand(records))
    few = mass[..., undefined].sum(axis=-1) <= _ASH * mass.sum(axis=-1)
    return np.where(undefined & few[..., np.newaxis], 0.0, amounts)


def cold_gas_efficiency(product: HeatingValue, fuel: HeatingValue) -> float:
    """Lower heating value of the gas made over that of the fuel; NaN for a fuel that gives none.

    The product's heating value is to be that of its gas alone.
    """
    return product.lower / fuel.lower if fuel.lower > 0.0 else float("nan")


def _obstacle(records: Sequence[Species], amounts: FloatArray) -> str:
    """Why the mixture has no heating value, empty where it has one."""
    if np.isnan(amounts).any():
        return "the amounts are not known"
    present = [r for r, amount in zip(records, amounts.tolist(), strict=True) if amount > 0.0]
    known = {*BURNT_TO, *_UNBURNT, "H"}
    for record in present:
        strange = sorted({symbol for symbol, _ in record.elements} - known)
        if strange:
            return (
                f"{record.name} holds {', '.join(strange)}, for which no product of combustion "
                "is agreed on"
            )
        if record.charge:
            return f"{record.name} is an ion"
    chlorine, hydrogen = element_counts(records, ("Cl", "H")) @ amounts
    if chlorine > hydrogen:
        return "there is not enough hydrogen to burn all chlorine to HCl"
    return ""
