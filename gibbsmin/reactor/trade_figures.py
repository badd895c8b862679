"""The trade's figures of a feed or an outlet.

Each takes amounts, fractions or partial pressures as arrays of any shape (one state or many) and
gives NaN where the figure has no meaning.  Amounts by record stand on the last axis.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import FARADAY_CONSTANT, GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.reactor.balance import element_counts
from gibbsmin.thermo.species import Phase, Species

OXYGEN_IN_AIR: Final = 0.2095
"""Mole fraction of O2 in dry air, as oxygen cells and emission limits take it (common practice)."""

_OXIDES_OF_CARBON: Final = ("CO", "CO2")
_COMBUSTION_ELEMENTS: Final = ("C", "H", "N", "O", "S", "Cl", "He", "Ne", "Ar", "Kr", "Xe")


def quotient(numerator: npt.ArrayLike, denominator: npt.ArrayLike) -> FloatArray:
    """Ratio of two amounts, such as H2/CO; NaN where the second is 0."""
    top, bottom = np.asarray(numerator, dtype=float), np.asarray(denominator, dtype=float)
    return np.asarray(top / np.where(bottom > 0.0, bottom, np.nan))


def steam_to_carbon(records: Sequence[Species], feed: FloatArray) -> FloatArray:
    """Water fed, in any form, over the carbon fed other than as CO and CO2, mol/mol."""
    water = np.array([record.formula == "H2O" for record in records], dtype=float)
    carbon = element_counts(records, ("C",))[0]
    counted = np.array([record.formula not in _OXIDES_OF_CARBON for record in records])
    return quotient(feed @ water, feed @ np.where(counted, carbon, 0.0))


def oxygen_demand(records: Sequence[Species]) -> FloatArray:
    """O2 that burns a mole of each record to CO2, H2O, SO2, N2 and HCl; less than 0 for O2.

    C + (H − Cl)/4 + S − O/2, shape (S,); NaN for a record with other elements or a charge.
    """
    C, H, Cl, S, O = element_counts(records, ("C", "H", "Cl", "S", "O"))  # noqa: E741
    known = [
        not record.charge and all(e in _COMBUSTION_ELEMENTS for e, _ in record.elements)
        for record in records
    ]
    return np.where(known, C + (H - Cl) / 4 + S - O / 2, np.nan)


def air_ratio(records: Sequence[Species], feed: FloatArray) -> FloatArray:
    """λ: oxygen fed over what the fuel fed needs for complete combustion.

    Records of oxygen with a demand below 0 (O2, N2O, …) bring it, the others need it; chlorine
    lowers the need, by the hydrogen that it takes.  NaN without fuel, or where a record of an
    undefined demand is fed.
    """
    demand = oxygen_demand(records)
    brings = (demand < 0.0) & (element_counts(records, ("O",))[0] > 0.0)
    undefined = np.any((feed > 0.0) & np.isnan(demand), axis=-1)
    demand = np.nan_to_num(demand)
    brought, needed = -feed @ np.where(brings, demand, 0.0), feed @ np.where(brings, 0.0, demand)
    return np.where(undefined, np.nan, quotient(brought, needed))


def synthesis_module(H2: npt.ArrayLike, CO: npt.ArrayLike, CO2: npt.ArrayLike) -> FloatArray:
    """(H2 − CO2)/(CO + CO2), 2 for methanol; amounts, fractions or partial pressures."""
    dioxide = np.asarray(CO2, dtype=float)
    return quotient(np.asarray(H2, dtype=float) - dioxide, np.asarray(CO, dtype=float) + dioxide)


def zirconia_voltage(
    temperature: npt.ArrayLike, oxygen: npt.ArrayLike, pressure: npt.ArrayLike
) -> FloatArray:
    """E = R T/(4 F) ln(p_air/p(O2)) in V, of a cell whose other side is air.

    Parameters
    ----------
    temperature
        Of the cell, K.
    oxygen
        p(O2) of the gas in Pa.
    pressure
        Of the reference air in Pa, in which p(O2) is 0.2095 of it.
    """
    T = np.asarray(temperature, dtype=float)
    p = np.asarray(oxygen, dtype=float)
    reference = OXYGEN_IN_AIR * np.asarray(pressure, dtype=float)
    log_ratio = np.log(reference / np.where(p > 0.0, p, np.nan))
    return np.asarray(GAS_CONSTANT * T / (4 * FARADAY_CONSTANT) * log_ratio)


def nitriding_potential(ammonia: npt.ArrayLike, hydrogen: npt.ArrayLike) -> FloatArray:
    """K_N = p(NH3)/p(H2)^1.5 in bar^−½; partial pressures in Pa."""
    NH3 = np.asarray(ammonia, dtype=float) / STANDARD_PRESSURE
    H2 = np.asarray(hydrogen, dtype=float) / STANDARD_PRESSURE
    return quotient(NH3, H2**1.5)


def nitrogen_activity(nitrogen: npt.ArrayLike) -> FloatArray:
    """a(N) = (p(N2)/P°)^½ against N2 gas at 1 bar.

    ``nitrogen`` is p(N2) in Pa that is in equilibrium with the gas.  Where ammonia does not split
    it is far above the N2 that is there; K_N tells what the gas can do to a metal.
    """
    return np.sqrt(np.asarray(nitrogen, dtype=float) / STANDARD_PRESSURE)


def at_reference_oxygen(
    dry_fraction: npt.ArrayLike, dry_oxygen: npt.ArrayLike, reference_oxygen: float
) -> FloatArray:
    """Dry fraction y (0.2095 − O2_ref)/(0.2095 − O2), as emission limits state it.

    The rule is that of the European emission directives, which print 21 % for 20.95 % (common
    practice).  NaN where the gas has as much oxygen as air.
    """
    spare = OXYGEN_IN_AIR - np.asarray(dry_oxygen, dtype=float)
    return np.asarray(dry_fraction, dtype=float) * quotient(OXYGEN_IN_AIR - reference_oxygen, spare)


def condensed_mass_fractions(records: Sequence[Species], amounts: FloatArray) -> FloatArray:
    """Mass of each solid and liquid over that of everything, shape (..., S); 0 for gases."""
    masses = amounts * np.array([record.molar_mass for record in records])
    condensed = np.array([record.phase is not Phase.GAS for record in records], dtype=bool)
    total = masses.sum(axis=-1, keepdims=True)
    return np.where(condensed, masses, 0.0) / np.where(total > 0.0, total, np.nan)
