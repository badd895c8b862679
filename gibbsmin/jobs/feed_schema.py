"""The case file's ``[feed.NAME]`` tables: what enters."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import NOTHING, each, word
from gibbsmin.jobs.table_schema import MISSING, Pressure, Table, Temperature
from gibbsmin.units import (
    Measure,
    Unit,
    read_amount,
    read_amount_unit,
    read_share,
    read_temperature,
    shown,
)


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

    @model_validator(mode="after")
    def _amounts_or_analysis(self) -> Self:
        if self.amounts is None and self.analysis is None:
            try:
                _amounts(None)
            except InputError as error:
                raise error.at(key="amounts") from None
        if self.amounts is not None and self.analysis is not None:
            raise InputError(
                "found analysis beside amounts", "accepted is one of the two", key="analysis"
            )
        if self.analysis is None:
            for key in ("total", "lumps", "water_dew_point", "steam_ratio"):
                if getattr(self, key):
                    raise InputError(
                        f"found {key} without an analysis",
                        "accepted is an analysis with it, or amounts alone",
                        key=key,
                    )
        elif self.total is None:
            read_total(None)
        if self.water_dew_point is not None and self.steam_ratio is not None:
            raise InputError(
                "found steam_ratio beside water_dew_point",
                "accepted is one of the two",
                key="steam_ratio",
            )
        return self
