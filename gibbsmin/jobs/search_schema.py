"""The case file's ``[onset]`` and ``[target]`` tables: what is looked for along an axis."""

from __future__ import annotations

from typing import Annotated, Any

from pydantic import BeforeValidator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import read_text
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.units import shown


def _given(given: object) -> Any:
    if given is None or isinstance(given, bool) or not isinstance(given, int | float | str):
        raise InputError(
            "found nothing" if given is None else f"found {shown(given)}",
            'accepted is a quantity such as "2 %", "900 degC" or 0.5',
        )
    return given


class OnsetTable(Table):
    """A solid or liquid whose forming is looked for, and in which stage."""

    phase: Annotated[str, BeforeValidator(read_text)] = MISSING
    stage: Annotated[str, BeforeValidator(read_text)] = ""


class TargetTable(Table):
    """A result that is to have a value, and in which stage."""

    result: Annotated[str, BeforeValidator(read_text)] = MISSING
    value: Annotated[Any, BeforeValidator(_given)] = MISSING
    stage: Annotated[str, BeforeValidator(read_text)] = ""
