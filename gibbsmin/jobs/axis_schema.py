"""The case file's ``[[axis]]`` tables: what a scan varies."""

from __future__ import annotations

from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.errors import InputError
from gibbsmin.jobs.stage_schema import read_text, word
from gibbsmin.jobs.table_schema import Table
from gibbsmin.units import shown

_MOST = 10_000_000
"""Values of an axis; more are a slip of the hand, and would fill the memory."""


def _values(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple) or not given:
        found = "an empty list" if given in ([], ()) else shown(given)
        raise InputError(f"found {found}", 'accepted is a list such as ["600 degC", "700 degC"]')
    return tuple(given)


def _count(given: object) -> int:
    if isinstance(given, bool) or not isinstance(given, int) or not 2 <= given <= _MOST:
        raise InputError(f"found {shown(given)}", f"accepted is a whole number from 2 to {_MOST}")
    return given


class AxisTable(Table):
    """One axis: what varies, and its values, listed or from first to last."""

    vary: Annotated[str, BeforeValidator(read_text)] | None = None
    ratio: Annotated[str, BeforeValidator(read_text)] | None = None
    scale: Annotated[str, BeforeValidator(read_text)] | None = None
    values: Annotated[tuple[Any, ...] | None, BeforeValidator(_values)] = None
    first: Any = None
    last: Any = None
    count: Annotated[int | None, BeforeValidator(_count)] = None
    spacing: Annotated[Literal["linear", "logarithmic"], word("linear", "logarithmic")] = "linear"

    @model_validator(mode="after")
    def _complete(self) -> Self:
        if (self.vary is None) == (self.ratio is None):
            raise InputError(
                "found neither" if self.vary is None else "found both",
                "accepted is vary or ratio",
                key="vary",
            )
        if (self.ratio is None) != (self.scale is None):
            raise InputError(
                "found one without the other",
                "accepted is a ratio with the stream that is scaled to meet it",
                key="scale",
            )
        given = [key for key in ("first", "last", "count") if getattr(self, key) is not None]
        if (self.values is None) != (len(given) == 3) or (self.values is not None and given):
            raise InputError(
                f"found {', '.join(given) or 'no values'}",
                "accepted is values, or first, last and count",
                key="values",
            )
        return self
