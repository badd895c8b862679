"""The numbers of a stage that an axis may vary: how they are read, and put into the stage.

Conditions such as a temperature take an array of values and are solved all together.  Numbers that
shape the equations themselves (a bypass, a held conversion, an approach) take one value at a time,
so that the states of each value are solved as a case of their own.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.thermo.library import Library

CONDITIONS = ("temperature", "heat", "pressure", "pressure_drop", "volume")
SHAPES = ("heat_loss", "boundary_temperature", "bypass", "approach", "conversion", "held_fraction",
          "remove")  # fmt: skip


def stage_field(name: str, stages: Sequence[StageCase]) -> tuple[StageCase, str] | None:
    """The stage that an axis names and what stands after its place; None for no such number."""
    for stage in stages:
        if name.startswith(f"{stage.place}."):
            field = name.removeprefix(f"{stage.place}.")
            if field in CONDITIONS or field.partition(".")[0] in SHAPES:
                return stage, field
    return None


def shapes_equations(name: str, stages: Sequence[StageCase]) -> bool:
    """Whether each value of an axis needs a case of its own."""
    placed = stage_field(name, stages)
    return placed is not None and placed[1] not in CONDITIONS


def with_number(stage: StageCase, field: str, values: FloatArray, library: Library) -> StageCase:
    """The stage with one of its numbers replaced: by an array, or by the one value of all states.

    Raises
    ------
    InputError
        for a species or a reaction that the stage does not hold.
    """
    kind, _, rest = field.partition(".")
    if field in CONDITIONS:
        change: dict[str, Any] = {field: values}
        return replace(stage, specification=replace(stage.specification, **change))
    value = float(np.ravel(values)[0])
    if field == "heat_loss":
        return replace(stage, specification=replace(stage.specification, heat_loss=value))
    if field == "boundary_temperature":
        return replace(stage, boundary_temperature=value)
    if field == "bypass":
        return replace(stage, bypass=value)
    chemistry = stage.chemistry
    if kind == "approach":
        place = _reaction(stage, rest)
        approaches = list(chemistry.approaches)
        approaches[place] = replace(approaches[place], difference=value)
        return replace(stage, chemistry=replace(chemistry, approaches=tuple(approaches)))
    name = resolve(rest, library).name
    if kind == "remove":
        return replace(stage, removed=_put(stage.removed, name, value, field))
    if kind == "conversion":
        conversions = _put(chemistry.conversions, name, value, field)
        return replace(stage, chemistry=replace(chemistry, conversions=conversions))
    held = {fraction.record: fraction for fraction in chemistry.fractions}
    fractions = _put(held, name, None, field)
    fractions[name] = replace(held[name], value=value)
    return replace(stage, chemistry=replace(chemistry, fractions=tuple(fractions.values())))


def _put(table: Mapping[str, Any], name: str, value: Any, field: str) -> dict[str, Any]:
    """The table with one of its values replaced."""
    if name not in table:
        raise InputError(
            f'found "{field}", which the stage does not give',
            f"accepted is one of {', '.join(table)}" if table else "accepted is a key of the stage",
        )
    return {**table, name: value}


def _reaction(stage: StageCase, text: str) -> int:
    """The place of an approach in its stage, from its number, 1 for the first."""
    count = len(stage.chemistry.approaches)
    if not text.isdigit() or not 1 <= int(text) <= count:
        raise InputError(
            f'found "approach.{text}", which the stage does not give',
            f"accepted is approach.1 to approach.{count}" if count else "accepted is an approach",
        )
    return int(text) - 1
