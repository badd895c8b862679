"""Checks tables of a file against their schema, key by key."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from gibbsmin.errors import InputError
from gibbsmin.jobs.table_schema import UnknownKeyError
from gibbsmin.units import shown

Model = TypeVar("Model", bound=BaseModel)


def validated(
    model: type[Model], tables: Mapping[str, Any], context: Mapping[str, Any] | None = None
) -> Model:
    """The tables as a model.

    Raises
    ------
    InputError
        for the first fault, with its key; an unknown key comes before a missing one, which it
        was often meant to be.
    """
    try:
        return model.model_validate(tables, context=dict(context or {}))
    except ValidationError as error:
        faults = [_fault(details) for details in error.errors()]
    raise next((fault for fault in faults if isinstance(fault, UnknownKeyError)), faults[0])


def _fault(details: Any) -> InputError:
    cause = details.get("ctx", {}).get("error")
    place = [str(part) for part in details["loc"]]
    if not isinstance(cause, InputError):
        return InputError(
            f"found {shown(details['input'])}",
            f"accepted is what the reader asks for: {details['msg']}",
            key=".".join(place),
        )
    cause.key = ".".join([*place, *filter(None, [cause.key])])
    return cause
