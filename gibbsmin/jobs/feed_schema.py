"""The case file's ``[feed.NAME]`` tables: what enters."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, ValidationInfo, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.fuel_schema import FuelTable
from gibbsmin.jobs.stage_schema import NOTHING, each, word
from gibbsmin.jobs.table_schema import MISSING, Pressure, Table, Temperature, site_pressure
from gibbsmin.units import (
    Measure,
    Unit,
    read_amount,
    read_amount_unit,
    read_share,
    read_temperature,
    shown,
)

_WAYS = ("amounts", "analysis", "fuel")
_WATERS = ("water_dew_point", "steam_ratio", "relative_humidity")
_GOES_WITH = {
    "total": ("analysis", "fuel"),
    "lumps": ("analysis",),
    **dict.fromkeys(_WATERS, ("amounts", "analysis")),
}


def _amounts(given: object) -> Mapping[str, Any]:
    if not isinstance(given, Mapping) or not given:
        raise InputError(
            "found an empty table" if given == {} else f"found {shown(given)}",
            "accepted is a table of species and amounts, such as { CH4 = 100, N2 = 2 }",
        )
    return given


def _lump(given: object) -> Mapping[str, float]:
    if not isinstance(given, Mapping) or not given:
        raise InputError(f"found {shown(given)}", "accepted is a table of species and shares")
    return {str(name): read_share(share) for name, share in given.items()}


def _steam_ratio(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not 0.0 <= given < 1e6:
        raise InputError(
            f"found {shown(given)}", "accepted is moles of steam to a mole of dry gas, such as 0.4"
        )
    return float(given)


@dataclass(frozen=True)
class Humidity:
    """Share of saturation, at a temperature (K) and pressure (Pa) of its own, or the stream's."""

    share: float
    temperature: float | None = None
    pressure: float | None = None


def _humidity(given: object, info: ValidationInfo) -> Humidity | None:
    """A share, or a share and the temperature of the outside air: "60 % at 20 degC"."""
    if given is None:
        return None
    share, at, temperature = str(given).partition(" at ")
    if not at:
        return Humidity(read_share(given))
    return Humidity(read_share(share), read_temperature(temperature), site_pressure(info))


def read_total(given: object) -> Measure:
    """The total of an analysed stream."""
    try:
        return read_amount(given)
    except InputError as error:
        raise error.at(key="total") from None


class FeedTable(Table):
    """``[feed.NAME]``: one stream."""

    temperature: Temperature = MISSING
    pressure: Pressure = MISSING
    unit: Annotated[Unit | None, BeforeValidator(read_amount_unit)] = None
    amounts: Annotated[Mapping[str, Any] | None, BeforeValidator(_amounts)] = None
    total: Annotated[Measure | None, BeforeValidator(read_amount)] = None
    analysis: Annotated[
        Mapping[str, float] | None, each(read_share, '{ CH4 = "92 %", N2 = "8 %" }')
    ] = None
    basis: Annotated[Literal["mole", "mass"], word("mole", "mass")] = "mole"
    lumps: Annotated[
        Mapping[str, Mapping[str, float]], each(_lump, '{ "C2+" = { C2H6 = 0.7, C3H8 = 0.3 } }')
    ] = NOTHING
    water_dew_point: Annotated[float | None, BeforeValidator(read_temperature)] = None
    steam_ratio: Annotated[float | None, BeforeValidator(_steam_ratio)] = None
    relative_humidity: Annotated[Humidity | None, BeforeValidator(_humidity)] = None
    fuel: FuelTable | None = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        given = [key for key in _WAYS if getattr(self, key) is not None]
        if not given:
            try:
                _amounts(None)
            except InputError as error:
                raise error.at(key="amounts") from None
        _one_of(given, _WAYS)
        if self.amounts is None and self.total is None:
            read_total(None)
        return self

    @model_validator(mode="after")
    def _what_goes_with_it(self) -> Self:
        _one_of([key for key in _WATERS if getattr(self, key) is not None], _WATERS)
        for key, ways in _GOES_WITH.items():
            if self._way not in ways and getattr(self, key) not in (None, {}):
                raise InputError(
                    f"found {key} with {self._way}",
                    f"accepted is {key} with {' or '.join(ways)}",
                    key=key,
                )
        return self

    @property
    def _way(self) -> str:
        return next(key for key in _WAYS if getattr(self, key) is not None)


def _one_of(given: Sequence[str], keys: Sequence[str]) -> None:
    """Refuse two keys of which one is enough."""
    if len(given) > 1:
        raise InputError(
            f"found {given[1]} beside {given[0]}",
            f"accepted is one of {', '.join(keys[:-1])} and {keys[-1]}",
            key=given[1],
        )
