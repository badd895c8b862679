"""The case file's ``[sample]`` table: a plant sample, and how samples are to be taken."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import NOTHING, read_text, word
from gibbsmin.jobs.table_schema import MISSING, Names, Pressure, Table
from gibbsmin.units import (
    read_share,
    read_temperature,
    read_temperature_difference,
    shown,
)


def _yes(given: object) -> bool:
    if not isinstance(given, bool):
        raise InputError(f"found {shown(given)}", "accepted is true or false")
    return given


def _table(accepted: str) -> BeforeValidator:
    def read(given: object) -> Mapping[str, Any]:
        if not isinstance(given, Mapping) or not given:
            raise InputError(
                "found an empty table" if given == {} else f"found {shown(given)}", accepted
            )
        return {str(name): value for name, value in given.items()}

    return BeforeValidator(read)


def _tables(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple):
        raise InputError(f"found {shown(given)}", "accepted are [[sample.reaction]] tables")
    return tuple(given)


def _steam_ratio(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not 0.0 < given < 1e6:
        raise InputError(
            f"found {shown(given)}", "accepted is moles of steam to a mole of dry gas, such as 0.4"
        )
    return float(given)


def _probability(given: object) -> float:
    share = read_share(given)
    if not 0.0 < share < 1.0:
        raise InputError(f"found {shown(given)}", "accepted is a probability such as 0.05")
    return share


def _resolution(given: object) -> float:
    kelvin = read_temperature_difference(given)
    if kelvin <= 0.0:
        raise InputError(f"found {shown(given)}", 'accepted is a difference such as "50 K"')
    return kelvin


_Analysis = Annotated[
    Mapping[str, Any],
    _table('accepted is a table of readings, such as { H2 = "71.9 %", CO = "<50 ppm" }'),
]
_SteamRatio = Annotated[float, BeforeValidator(_steam_ratio)]
_Basis = Annotated[Literal["dry", "wet"], word("dry", "wet")]
_Normalised = Annotated[bool, BeforeValidator(_yes)]
_Uncertainty = Annotated[
    Mapping[str, Any],
    _table('accepted is a table such as { reading = "1 %", temperature = "3 K", H2 = "0.2 %" }'),
]


class InletTable(Table):
    """``[sample.inlet]``: the analysis of one feed, taken together with the outlet's."""

    stream: Annotated[str, BeforeValidator(read_text)] | None = None
    basis: _Basis = "dry"
    normalised: _Normalised = False
    analysis: _Analysis | None = None
    steam_ratio: _SteamRatio | None = None
    unmeasured: Names = ()


class ReactionTable(Table):
    """``[[sample.reaction]]``: a reaction to judge, with a K of its own where it has one."""

    reaction: Annotated[str, BeforeValidator(read_text)] = MISSING
    equilibrium_constant: (
        Annotated[
            Mapping[str, Any],
            _table('accepted is a table such as { "800 degC" = 169, "850 degC" = 420 }'),
        ]
        | None
    ) = None


class ThresholdTable(Table):
    """``[sample.thresholds]``: where the verdict draws its lines."""

    credible: Annotated[float, BeforeValidator(_probability)] = 0.01
    suspect: Annotated[float, BeforeValidator(_probability)] = 0.05
    equilibrium: Annotated[float, BeforeValidator(_probability)] = 0.05
    resolution: Annotated[float, BeforeValidator(_resolution)] = 50.0


class SampleTable(Table):
    """``[sample]``."""

    label: Annotated[str, BeforeValidator(read_text)] = "sample"
    stage: Annotated[str, BeforeValidator(read_text)] = ""
    temperature: Annotated[float, BeforeValidator(read_temperature)] | None = None
    pressure: Pressure | None = None
    basis: _Basis = "dry"
    normalised: _Normalised = False
    analysis: _Analysis | None = None
    steam_ratio: _SteamRatio | None = None
    removed_by_drying: Names = ("H2O",)
    unmeasured: Names = ()
    feed: Annotated[
        Mapping[str, Any], _table('accepted is a table of flows, such as { steam = "5.8 t/h" }')
    ] = NOTHING
    uncertainty: _Uncertainty = NOTHING
    inlet: InletTable | None = None
    reaction: Annotated[tuple[ReactionTable, ...], BeforeValidator(_tables)] = ()
    thresholds: ThresholdTable = ThresholdTable()
