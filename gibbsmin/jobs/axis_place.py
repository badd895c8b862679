"""Which number of a case an axis names: ``outlet.temperature``, ``feed.steam.amounts.H2O``.

=====================================  ======================================================
``outlet.…`` or ``stage.NAME.…``       ``temperature``, ``heat``, ``heat_loss``, ``pressure``,
                                       ``pressure_drop``, ``volume``: those that the stage gives
the same                               ``boundary_temperature``, ``bypass``
the same                               ``conversion.SPECIES``, ``held_fraction.SPECIES``,
                                       ``remove.SPECIES``, ``offset.SPECIES``,
                                       ``activity.SPECIES``, ``approach.1`` for the first
                                       ``[[approach]]``: those that the stage gives
``feed.NAME.…``                        ``temperature``, ``pressure``, ``total`` (the whole stream,
                                       its composition kept), ``amounts.SPECIES``
=====================================  ======================================================
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from gibbsmin.errors import InputError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library

CONDITIONS = ("temperature", "heat", "heat_loss", "pressure", "pressure_drop", "volume")
_STREAM_NUMBERS = ("temperature", "pressure", "total")


@dataclass(frozen=True)
class Place:
    """A number of a stream or a stage: the kind of number, and the species or the count of it."""

    holder: Stream | StageCase
    kind: str
    which: str = ""


def place_of(
    name: str, streams: Sequence[Stream], stages: Sequence[StageCase], library: Library
) -> Place:
    """The number that an axis names.

    Raises
    ------
    InputError
        for a name that is no number of the case.
    """
    for stream in streams:
        field = _after(f"feed.{stream.name}", name)
        if field in _STREAM_NUMBERS:
            return Place(stream, field)
        kind, _, species = field.partition(".")
        if kind == "amounts" and species:
            return Place(stream, kind, resolve(species, library).name)
        if field:
            places = [*_STREAM_NUMBERS, "amounts.SPECIES"]
            raise _nothing(name, [f"feed.{stream.name}.{place}" for place in places])
    for stage in stages:
        field = _after(stage.key, name)
        if not field:
            continue
        given = _numbers_of(stage)
        kind, _, which = field.partition(".")
        if which and kind != "approach" and any(g.startswith(f"{kind}.") for g in given):
            which = resolve(which, library).name
        if f"{kind}.{which}".rstrip(".") not in given:
            raise _nothing(name, [f"{stage.key}.{place}" for place in given])
        return Place(stage, kind, which)
    holders = [*(stage.key for stage in stages), *(f"feed.{stream.name}" for stream in streams)]
    raise InputError(
        f'found "{name}", which names no number of the case',
        f"accepted is a number of {', '.join(holders)}, such as {holders[0]}.temperature",
    )


def _after(place: str, name: str) -> str:
    """What follows a place in a name, empty for another place."""
    return name.removeprefix(f"{place}.") if name.startswith(f"{place}.") else ""


def _numbers_of(stage: StageCase) -> list[str]:
    chemistry = stage.chemistry
    tables = {
        "conversion": chemistry.conversions,
        "held_fraction": [fraction.record for fraction in chemistry.fractions],
        "remove": stage.removed,
        "offset": chemistry.offsets,
        "activity": chemistry.activities,
        "approach": range(1, len(chemistry.approaches) + 1),
    }
    return [
        *(name for name in CONDITIONS if getattr(stage.specification, name) is not None),
        "boundary_temperature",
        "bypass",
        *(f"{kind}.{each}" for kind, given in tables.items() for each in given),
    ]


def _nothing(name: str, accepted: Sequence[str]) -> InputError:
    return InputError(
        f'found "{name}", which names no number of the case',
        f"accepted is one of {', '.join(accepted)}",
    )
