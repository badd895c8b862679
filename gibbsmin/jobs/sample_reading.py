"""Readings of an analyser as people write them, and the uncertainty that they are given."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from numbers import Real

from gibbsmin.errors import InputError, UnitError
from gibbsmin.units import read_share, shown

_UNITS = {"": 1.0, "1": 1.0, "%": 1e-2, "ppm": 1e-6, "ppb": 1e-9}
_SPELLINGS = {"mol %": "%", "mol%": "%", "vol %": "%", "vol%": "%", "ppmv": "ppm", "ppbv": "ppb"}
_TEXT = re.compile(
    r"\s*(?P<below><)?\s*(?P<number>[-+\N{MINUS SIGN}]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)"
    r"\s*(?P<unit>[^\d<>-]*?)\s*"
)
ACCEPTED = 'accepted is a fraction of the gas such as "71.9 %", "50 ppm" or "<0.05 %"'


@dataclass(frozen=True, slots=True)
class GasReading:
    """A fraction of a gas with its standard uncertainty, both of 1.

    One that is below a detection limit L stands for anything from 0 to L alike: its value is L/2,
    its standard uncertainty L/√12 (JCGM 100:2008, 4.3.7), and ``below`` is L; else ``below`` is 0.
    """

    value: float
    uncertainty: float
    below: float = 0.0


@dataclass(frozen=True)
class UncertaintyRules:
    """Standard uncertainties where a sample gives none.

    Attributes
    ----------
    reading : share of a reading
    floor, trace_floor : fraction of the gas that is added in quadrature, for readings in per cent
        and for those in ppm
    temperature : K
    pressure : share of the absolute pressure
    flow : share of a feed flow
    steam_ratio : share of a ratio of steam to dry gas
    own : fraction of the gas, by analyte
    """

    reading: float = 0.01
    floor: float = 2e-4
    trace_floor: float = 1e-6
    temperature: float = 3.0
    pressure: float = 0.005
    flow: float = 0.01
    steam_ratio: float = 0.02
    own: Mapping[str, float] = field(default_factory=dict)

    def of_reading(self, analyte: str, value: float, unit: str) -> float:
        """√((share · reading)² + floor²), unless the analyte has its own."""
        if analyte in self.own:
            return self.own[analyte]
        floor = self.trace_floor if unit in ("ppm", "ppb") else self.floor
        return math.hypot(self.reading * value, floor)


STEAM_RATIO = "steam ratio"
"""The analyte that stands for moles of steam to a mole of dry gas."""


def read_reading(
    given: object, analyte: str, rules: UncertaintyRules, unit: str | None = None
) -> GasReading:
    """A reading as written, in a unit of its own or in its column's.

    Raises
    ------
    InputError
        for what is no number with a known unit, or is negative or above 100 %.
    """
    below, number, own_unit = _parsed(given)
    if unit is not None and own_unit:
        raise UnitError(f"found {shown(given)}, a unit in a cell", "accepted is a number")
    unit = _unit(own_unit) if unit is None else unit
    value = number * _UNITS[unit]
    if number < 0.0:
        raise InputError(f"found {shown(given)}, a negative reading", ACCEPTED)
    if value > 1.0:
        raise InputError(f"found {shown(given)}, which is above 100 %", ACCEPTED)
    if below:
        if value == 0.0:
            raise InputError(f"found {shown(given)}, a limit of zero", ACCEPTED)
        return GasReading(value / 2.0, value / math.sqrt(12.0), value)
    return GasReading(value, rules.of_reading(analyte, value, unit))


def read_fraction_unit(text: str) -> str:
    """The unit of a column of readings: %, ppm, ppb or 1.

    Raises
    ------
    UnitError
        for another one.
    """
    unit = _SPELLINGS.get(text.strip(), text.strip())
    if not unit or unit not in _UNITS:
        found = f"found the unit {shown(text.strip())}" if text.strip() else "found no unit"
        raise UnitError(found, "accepted is %, ppm, ppb or 1")
    return unit


def in_fraction_unit(value: float, unit: str) -> float:
    """A number of a column's unit, as a fraction of 1."""
    return value * _UNITS[unit]


def read_own_uncertainty(given: object) -> float:
    """A standard uncertainty as a fraction of the gas, above 0."""
    share = read_share(given)
    if share <= 0.0:
        raise UnitError(f"found {shown(given)}", 'accepted is above zero, such as "0.1 %"')
    return share


def _parsed(given: object) -> tuple[bool, float, str]:
    if isinstance(given, Real) and not isinstance(given, bool) and math.isfinite(given):
        return False, float(given), ""
    match = _TEXT.fullmatch(given) if isinstance(given, str) else None
    if match is None:
        raise InputError(f"found {shown(given)}, which is no reading", ACCEPTED)
    number = float(match["number"].replace("\N{MINUS SIGN}", "-"))
    return match["below"] is not None, number, match["unit"]


def _unit(text: str) -> str:
    unit = _SPELLINGS.get(text.strip(), text.strip())
    if unit not in _UNITS:
        raise UnitError(f"found the unit {shown(text)}", ACCEPTED)
    return unit
