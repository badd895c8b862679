"""Reads quantities per mass, volume or kelvin: heating values, densities and entropies."""

from __future__ import annotations

from gibbsmin.errors import UnitError
from gibbsmin.units.reading import Measure, read_amount, read_heat, read_volume, shown
from gibbsmin.units.unit import Dimension

_HEATING_VALUE = (
    'accepted is a heat of a mass such as "28.5 MJ/kg", "6800 kcal/kg" or "12200 Btu/lb"'
)
_ENTROPY = 'accepted is an entropy such as "12 kJ/K" or an entropy flow such as "3 kW/K"'
_DENSITY = 'accepted is a density such as "0.96 kg/L" or "960 kg/m3"'


def read_heating_value(given: object) -> float:
    """A positive heating value of a mass, in J/kg."""
    heat, mass = _parts(given, _HEATING_VALUE)
    try:
        energy, amount = read_heat(heat), read_amount(f"1 {mass}")
    except UnitError:
        raise UnitError(f"found {shown(given)}", _HEATING_VALUE) from None
    if energy.unit.dimension is not Dimension.ENERGY or amount.unit.dimension is not Dimension.MASS:
        raise UnitError(f"found {shown(given)}, which is no heat of a mass", _HEATING_VALUE)
    if energy.value <= 0.0:
        raise UnitError(f"found {shown(given)}, which is not above zero", _HEATING_VALUE)
    return energy.value / amount.value


def read_density(given: object) -> float:
    """A positive density in kg/m³."""
    mass, volume = _parts(given, _DENSITY)
    try:
        amount, room = read_amount(mass), read_volume(f"1 {volume}")
    except UnitError:
        raise UnitError(f"found {shown(given)}", _DENSITY) from None
    if amount.unit.dimension is not Dimension.MASS or amount.value <= 0.0:
        raise UnitError(f"found {shown(given)}, which is no mass of a volume", _DENSITY)
    return amount.value / room


def read_entropy(given: object) -> Measure:
    """An entropy in J/K or a flow of it in W/K, of either sign."""
    heat, per = _parts(given, _ENTROPY)
    if per != "K":
        raise UnitError(f"found {shown(given)}, which is no heat per kelvin", _ENTROPY)
    try:
        return read_heat(heat)
    except UnitError:
        raise UnitError(f"found {shown(given)}", _ENTROPY) from None


def _parts(given: object, accepted: str) -> tuple[str, str]:
    """What stands before and after the last slash."""
    text, _, per = given.rpartition("/") if isinstance(given, str) else ("", "", "")
    if not text.strip() or not per.strip():
        raise UnitError(f"found {shown(given)}", accepted)
    return text, per.strip()
