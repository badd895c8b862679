"""Puts the values of an axis into a stage.

Nearly all numbers take an array of values, so that their states are solved together.  A held
fraction of the gas, an offset and an activity shape the equations themselves: the states of each
of their values are solved as a case of their own.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis_place import CONDITIONS, Place
from gibbsmin.jobs.case_stage import StageCase


def shapes_equations(place: Place) -> bool:
    """Whether each value of an axis needs a case of its own."""
    if place.kind == "held_fraction" and isinstance(place.holder, StageCase):
        held = {each.record: each.basis for each in place.holder.chemistry.fractions}
        return held[place.which] in ("wet", "dry")
    return place.kind in ("offset", "activity")


def with_number(stage: StageCase, place: Place, values: FloatArray) -> StageCase:
    """The stage with one of its numbers replaced by an array (B,).

    Raises
    ------
    InputError
        for different values of what shapes the equations.
    """
    kind, which, chemistry = place.kind, place.which, stage.chemistry
    if kind in CONDITIONS:
        change: dict[str, Any] = {kind: values}
        return replace(stage, specification=replace(stage.specification, **change))
    if kind in ("boundary_temperature", "bypass"):
        change = {kind: values}
        return replace(stage, **change)
    if kind == "remove":
        return replace(stage, removed={**stage.removed, which: values})
    one = float(values.flat[0])
    if shapes_equations(place) and np.any(values != one):
        raise InputError(
            "found a number that shapes the equations, which no search can vary",
            "accepted is a scan of it, or another number",
        )
    if kind == "conversion":
        change = {"conversions": {**chemistry.conversions, which: values}}
    elif kind == "held_fraction":
        fractions = [
            replace(each, value=values) if each.record == which else each
            for each in chemistry.fractions
        ]
        change = {"fractions": tuple(fractions)}
    elif kind == "approach":
        approaches = [
            replace(each, difference=values) if str(number) == which else each
            for number, each in enumerate(chemistry.approaches, start=1)
        ]
        change = {"approaches": tuple(approaches)}
    elif kind == "offset":
        change = {"offsets": {**chemistry.offsets, which: one}}
    else:
        change = {"activities": {**chemistry.activities, which: one}}
    return replace(stage, chemistry=replace(chemistry, **change))
