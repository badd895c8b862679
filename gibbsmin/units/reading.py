"""Reads quantities in the user's units, and writes SI values back in them."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from numbers import Real
from typing import TYPE_CHECKING, TypeGuard

from gibbsmin.constants import STANDARD_ATMOSPHERE
from gibbsmin.errors import UnitError
from gibbsmin.units.unit import Dimension, Unit
from gibbsmin.units.vocabulary import UnclearUnitError, find_unit

if TYPE_CHECKING:
    from gibbsmin.units.unit import Number

_QUANTITY = re.compile(
    r"\s*(?P<number>[-+]?(?:(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?|nan\b|inf(?:inity)?\b))"
    r"(?:\s*(?P<unit>[^\W\d_].*|[°º℃℉].*))?\s*",
    re.IGNORECASE,
)
_SHOWN_LENGTH = 60
_LARGEST = 1e30
"""Of any quantity in SI units: beyond every reactor, and its powers do not overflow."""
_LARGEST_PRESSURE = 1e20
"""Pa; cubic equations of state take its sixth power.  The least is its reciprocal."""


@dataclass(frozen=True, slots=True)
class Measure:
    """A quantity in SI, with the unit the user wrote it in."""

    value: float
    unit: Unit


@dataclass(frozen=True, slots=True)
class _Kind:
    """The dimensions that a place accepts, and the clause that says so."""

    dimensions: frozenset[Dimension]
    accepted: str


_TEMPERATURE = _Kind(
    frozenset({Dimension.TEMPERATURE}),
    'accepted is a temperature such as "850 degC" or "1123 K"',
)
_TEMPERATURE_DIFFERENCE = _Kind(
    frozenset({Dimension.TEMPERATURE, Dimension.TEMPERATURE_DIFFERENCE}),
    'accepted is a temperature difference such as "10 K"',
)
_PRESSURE = _Kind(
    frozenset({Dimension.PRESSURE}),
    'accepted is a pressure such as "25 bar" (absolute) or "24 barg"',
)
_PRESSURE_DROP = _Kind(
    frozenset({Dimension.PRESSURE}), 'accepted is a difference of pressures such as "0.5 bar"'
)
_HEAT = _Kind(
    frozenset({Dimension.ENERGY, Dimension.POWER}),
    'accepted is a heat such as "1.5 MW", "2 Gcal/h" or "30 kJ"',
)
_VOLUME = _Kind(frozenset({Dimension.VOLUME}), 'accepted is a volume such as "2 m3" or "500 L"')
_SHARE = 'accepted is a share from 0 to 1, such as 0.8 or "80 %"'
_AMOUNT_DIMENSIONS = frozenset(
    {
        Dimension.MOLAR_AMOUNT,
        Dimension.MOLAR_FLOW,
        Dimension.MASS,
        Dimension.MASS_FLOW,
        Dimension.NORMAL_VOLUME,
        Dimension.NORMAL_VOLUME_FLOW,
    }
)
_AMOUNT = _Kind(
    _AMOUNT_DIMENSIONS, 'accepted is an amount or a flow such as "100 kmol/h", "2 t" or "50 Nm3/h"'
)
_NAMED = {
    "temperature": _TEMPERATURE,
    "pressure": _PRESSURE,
    "pressure_drop": _PRESSURE_DROP,
    "heat": _HEAT,
    "volume": _VOLUME,
}
_AMOUNT_UNIT = _Kind(
    _AMOUNT_DIMENSIONS, 'accepted is a unit of amount or flow such as "kmol/h", "t" or "Nm3/h"'
)


def read_temperature(given: object) -> float:
    """A temperature above 0 K, in K.

    Raises
    ------
    UnitError
        as every reader here: what is no number with a fitting, unambiguous unit, is not finite,
        or is beyond 1e30 in SI units, is refused in one sentence.
    """
    kelvin = _measure(given, _TEMPERATURE, STANDARD_ATMOSPHERE).value
    if kelvin <= 0.0:
        raise UnitError(
            f"found {shown(given)}, which is not above absolute zero", _TEMPERATURE.accepted
        )
    return kelvin


def read_temperature_difference(given: object) -> float:
    """A temperature difference in K: ``"10 degC"`` is 10 K, ``"18 degF"`` likewise."""
    measure = _measure(given, _TEMPERATURE_DIFFERENCE, STANDARD_ATMOSPHERE)
    return measure.value - measure.unit.offset


def read_pressure(given: object, site_pressure: float = STANDARD_ATMOSPHERE) -> float:
    """An absolute pressure, 1e-20 to 1e20 Pa; gauge ones are above ``site_pressure``, Pa."""
    pascal = _measure(given, _PRESSURE, site_pressure).value
    if pascal <= 0.0:
        raise UnitError(f"found {shown(given)}, which is not above vacuum", _PRESSURE.accepted)
    if not 1.0 / _LARGEST_PRESSURE <= pascal <= _LARGEST_PRESSURE:
        raise UnitError(f"found {shown(given)}", "accepted is a pressure from 1e-20 to 1e20 Pa")
    return pascal


def read_site_pressure(given: object) -> float:
    """The absolute pressure in Pa that gauge pressures stand on, and so no gauge pressure."""
    measure = _measure(given, _PRESSURE, STANDARD_ATMOSPHERE)
    if measure.unit.offset:
        raise UnitError(
            f"found {shown(given)}, which is a gauge pressure",
            'accepted is an absolute pressure such as "1.013 bar"',
        )
    return read_pressure(given)


def read_pressure_drop(given: object) -> float:
    """A difference of pressures in Pa, zero or more: ``"0.5 barg"`` is 0.5 bar."""
    pascal = _measure(given, _PRESSURE_DROP, 0.0).value
    if pascal < 0.0:
        raise UnitError(f"found {shown(given)}, which is negative", _PRESSURE_DROP.accepted)
    return pascal


def read_quantity(given: object, name: str, site_pressure: float = STANDARD_ATMOSPHERE) -> Measure:
    """A temperature, pressure, pressure_drop, heat or volume, with the unit it is written in.

    Raises
    ------
    UnitError
        for what is none, and for another name.
    """
    if name not in _NAMED:
        raise UnitError(
            f'found "{name}", which is no quantity with a unit',
            f"accepted is one of {', '.join(_NAMED)}",
        )
    return _measure(given, _NAMED[name], 0.0 if name == "pressure_drop" else site_pressure)


def read_heat(given: object) -> Measure:
    """A heat in J or a heat flow in W, of either sign."""
    return _measure(given, _HEAT, STANDARD_ATMOSPHERE)


def read_amount(given: object, unit: Unit | None = None) -> Measure:
    """An amount or flow that is not negative: mol, kg or mol of ideal gas (per s if a flow).

    A bare number counts in ``unit`` where that is given.
    """
    if unit is not None and _is_number(given):
        measure = _finite(unit.to_si(_as_float(given)), unit, given, _AMOUNT)
    else:
        measure = _measure(given, _AMOUNT, STANDARD_ATMOSPHERE)
    if measure.value < 0.0:
        raise UnitError(f"found {shown(given)}, which is negative", _AMOUNT.accepted)
    return measure


def read_volume(given: object) -> float:
    """A positive volume in m³."""
    cubic_metres = _measure(given, _VOLUME, STANDARD_ATMOSPHERE).value
    if cubic_metres <= 0.0:
        raise UnitError(f"found {shown(given)}, which is not above zero", _VOLUME.accepted)
    return cubic_metres


def read_share(given: object) -> float:
    """A share from 0 to 1: a bare number, or a text in per cent or ppm."""
    number = given
    factor = 1.0
    if isinstance(given, str):
        match = re.fullmatch(r"\s*([-+.\deE]+)\s*(%|ppm)?\s*", given)
        number = _number(match[1]) if match else None
        factor = {"%": 1e-2, "ppm": 1e-6}.get((match[2] if match else "") or "", 1.0)
    if not _is_number(number):
        raise UnitError(f"found {shown(given)}, which is no share", _SHARE)
    share = _as_float(number) * factor
    if not 0.0 <= share <= 1.0:
        raise UnitError(f"found {shown(given)}, which is not between 0 and 1", _SHARE)
    return share


def read_amount_unit(given: object) -> Unit:
    """A unit of amount or flow."""
    if not isinstance(given, str):
        nothing = "" if given is None else ", which is no unit"
        raise UnitError(f"found {shown(given)}{nothing}", _AMOUNT_UNIT.accepted)
    return _unit(given, given, _AMOUNT_UNIT, STANDARD_ATMOSPHERE)


def to_unit(value: Number, unit: str, site_pressure: float = STANDARD_ATMOSPHERE) -> Number:
    """An SI value (K, Pa, mol, kg, m³, J, s and per s) in the user's unit; arrays too."""
    try:
        return find_unit(unit, site_pressure).from_si(value)
    except UnclearUnitError as question:
        accepted = question.accepted or 'accepted is a unit such as "degC", "barg" or "kmol/h"'
        raise UnitError(f"found {shown(unit)}, {question.reason}", accepted) from None


def shown(given: object) -> str:
    """What was found, as an error quotes it: text in quotes, cut where it is long."""
    if isinstance(given, str):
        text = given if len(given) <= _SHOWN_LENGTH else given[: _SHOWN_LENGTH - 1] + "…"
        return '"' + "".join(c if c.isprintable() else "?" for c in text) + '"'
    if isinstance(given, bool):
        return str(given).lower()
    if isinstance(given, Real):
        return f"{_as_float(given):.15g}"
    names = {"dict": "a table", "list": "a list", "tuple": "a list", "NoneType": "nothing"}
    return names.get(type(given).__name__, f"a value of type {type(given).__name__}")


def _measure(given: object, kind: _Kind, site_pressure: float) -> Measure:
    found = f"found {shown(given)}"
    if _is_number(given):
        raise UnitError(f"{found}, a number without a unit", kind.accepted)
    if not isinstance(given, str):
        nothing = "" if given is None else ", which is no quantity"
        raise UnitError(f"{found}{nothing}", kind.accepted)
    match = _QUANTITY.fullmatch(given.replace("\N{MINUS SIGN}", "-"))
    if match is None:
        raise UnitError(f"{found}, which does not read as a number and a unit", kind.accepted)
    if match["unit"] is None:
        raise UnitError(f"{found}, a number without a unit", kind.accepted)
    unit = _unit(match["unit"], given, kind, site_pressure)
    return _finite(unit.to_si(float(match["number"])), unit, given, kind)


def _finite(value: float, unit: Unit, given: object, kind: _Kind) -> Measure:
    if not math.isfinite(value):
        raise UnitError(f"found {shown(given)}, which is not finite", kind.accepted)
    if abs(value) > _LARGEST:
        raise UnitError(f"found {shown(given)}, which is too large to reckon with", kind.accepted)
    return Measure(value, unit)


def _is_number(given: object) -> TypeGuard[Real]:
    return isinstance(given, Real) and not isinstance(given, bool)


def _unit(text: str, given: str, kind: _Kind, site_pressure: float) -> Unit:
    try:
        unit = find_unit(text.strip(), site_pressure)
    except UnclearUnitError as question:
        concerned = kind.dimensions & {question.dimension} or (
            question.dimension is Dimension.TIME and any(d.is_flow for d in kind.dimensions)
        )
        accepted = question.accepted if concerned else kind.accepted
        raise UnitError(f"found {shown(given)}, {question.reason}", accepted) from None
    if unit.dimension not in kind.dimensions:
        phrase = unit.dimension.phrase
        raise UnitError(f"found {shown(given)}, which is {phrase}", kind.accepted)
    return unit


def _number(text: str) -> float | None:
    try:
        return float(text)
    except ValueError:
        return None


def _as_float(number: Real) -> float:
    try:
        return float(number)
    except OverflowError:
        return math.inf
