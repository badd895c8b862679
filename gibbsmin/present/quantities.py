"""Figures as people read them: amounts in the user's unit, heat and entropy with theirs."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.thermo.species import Species
from gibbsmin.units import Dimension, read_amount_unit, to_unit

_CELSIUS_ZERO = 273.15
_MASS = (Dimension.MASS, Dimension.MASS_FLOW)
_MOLAR = (Dimension.MOLAR_AMOUNT, Dimension.MOLAR_FLOW)


def amount_unit(unit: str, is_flow: bool) -> str:
    """The unit in which amounts are reported.

    It is the user's own where that counts moles or mass.  A normal volume has no meaning for
    solids and liquids, so kmol or kmol/h stands in its place.
    """
    if read_amount_unit(unit).dimension in (*_MASS, *_MOLAR):
        return unit
    return "kmol/h" if is_flow else "kmol"


def molar_unit(unit: str, is_flow: bool) -> str:
    """The unit in which extents are reported: the user's where it counts moles, else kmol."""
    if read_amount_unit(unit).dimension in _MOLAR:
        return unit
    return "kmol/h" if is_flow else "kmol"


def amounts_in(unit: str, records: Sequence[Species], amounts: FloatArray) -> FloatArray:
    """Amounts (S,) in mol or mol/s, in a unit of moles or mass."""
    if read_amount_unit(unit).dimension in _MASS:
        amounts = amounts * np.array([record.molar_mass for record in records])
    return to_unit(amounts, unit)


def heat_unit(is_flow: bool) -> str:
    """kW for flows, kJ for quantities."""
    return "kW" if is_flow else "kJ"


def significant(value: float, digits: int = 5) -> str:
    """A number with this many significant digits, plain between 1e-4 and 1e7; "–" for NaN."""
    if math.isnan(value):
        return "–"
    if value == 0.0:
        return "0"
    rounded = float(f"{value:.{digits - 1}e}")
    if not 1e-4 <= abs(rounded) < 1e7:
        return f"{value:.{min(digits, 4) - 1}e}"
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
    return f"{rounded:,.{decimals}f}".replace(",", " ")


def fraction(value: float) -> str:
    """A share of either sign: % from 0.01 %, then ppm, then a power of ten; "–" for NaN."""
    if math.isnan(value):
        return "–"
    if abs(value) >= 1e-4:
        return f"{significant(100 * value)} %"
    if abs(value) >= 1e-8:
        return f"{significant(1e6 * value, 4)} ppm"
    return "0" if value == 0.0 else f"{value:.1e}"


def temperature(kelvin: float) -> str:
    """Degrees Celsius and kelvins."""
    return f"{kelvin - _CELSIUS_ZERO:.2f} °C ({kelvin:.2f} K)"


def pressure(pascal: float) -> str:
    """bar, absolute."""
    return f"{significant(pascal / 1e5)} bar"


def heat(joule: float, is_flow: bool) -> str:
    """Heat with the prefix that suits its size: W to GW, or J to GJ."""
    unit = "W" if is_flow else "J"
    for prefix, factor in (("G", 1e9), ("M", 1e6), ("k", 1e3)):
        if abs(joule) >= factor:
            return f"{significant(joule / factor)} {prefix}{unit}"
    return f"{significant(joule)} {unit}"
