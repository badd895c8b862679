"""The case file's ``[uncertainty]`` table and ``[[correlation]]`` tables."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any

from pydantic import BeforeValidator

from gibbsmin.errors import InputError
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.units import shown


def read_uncertainty_table(given: object) -> Mapping[str, Any]:
    """The table with one key for each number: ``outlet.temperature`` nests as TOML has it."""
    if not isinstance(given, Mapping):
        raise InputError(
            f"found {shown(given)}",
            'accepted is a table such as { "outlet.temperature" = "3 K", "feed.gas" = "1 %" }',
        )
    return dict(_flat("", given))


def _flat(place: str, table: Mapping[str, Any]) -> list[tuple[str, Any]]:
    pairs: list[tuple[str, Any]] = []
    for key, value in table.items():
        inner = f"{place}.{key}" if place else str(key)
        pairs += _flat(inner, value) if isinstance(value, Mapping) else [(inner, value)]
    return pairs


def _two_names(given: object) -> tuple[str, str]:
    if (
        isinstance(given, list | tuple)
        and len(given) == 2
        and all(isinstance(name, str) for name in given)
        and given[0] != given[1]
    ):
        return given[0], given[1]
    raise InputError(
        f"found {shown(given)}",
        'accepted are two different numbers, such as ["CO(g).enthalpy", "CO2(g).enthalpy"]',
    )


def _coefficient(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not -1 <= given <= 1:
        raise InputError(f"found {shown(given)}", "accepted is a number from -1 to 1")
    return float(given)


class CorrelationTable(Table):
    """Two numbers and their correlation coefficient."""

    between: Annotated[tuple[str, str], BeforeValidator(_two_names)] = MISSING
    coefficient: Annotated[float, BeforeValidator(_coefficient)] = MISSING
