"""Puts the values of axes into a case.

An axis names a number by its place in the case file: ``outlet.temperature``,
``stage.high shift.pressure_drop``, ``feed.steam.temperature``, ``feed.steam.amounts.H2O``; or it
names a ratio of what the streams bring, ``ratio = "H2O/C"``, with the stream that is scaled to
meet it.  Numbers that shape a stage's equations (``outlet.bypass``, ``outlet.conversion.CH4``,
``outlet.approach.1``, …) give each of their values a case of its own: see
:mod:`gibbsmin.jobs.axis_stage`.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.axis_stage import stage_field, with_number
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library

_STREAM_NUMBERS = ("temperature", "pressure")


def applied(
    case: Case, axes: Sequence[Axis], states: Sequence[FloatArray], library: Library
) -> Case:
    """The case with each axis's number replaced by an array (B,), in the order of the axes.

    Raises
    ------
    InputError
        for a name that is no number of the case, and a ratio that cannot be met.
    """
    feeds = tuple(
        replace(stream, temperature=np.broadcast_to(stream.temperature, states[0].shape))
        for stream in case.feeds
    )
    case = replace(case, feeds=feeds)
    for axis, values in zip(axes, states, strict=True):
        setter = _ratio if axis.scale else _number
        try:
            case = setter(case, axis, values, library)
        except InputError as error:
            raise error.at(key=f"axis.{axis.name}", file=case.file) from None
    return case


def _number(case: Case, axis: Axis, values: FloatArray, library: Library) -> Case:
    kind, _, rest = axis.name.partition(".")
    if kind == "feed":
        name, _, field = rest.partition(".")
        return _changed_stream(
            case, name, lambda stream: _stream_number(stream, field, values, library)
        )
    placed = stage_field(axis.name, case.stages)
    if placed is None:
        raise _nothing(axis.name, case)
    chosen, field = placed
    changed = with_number(chosen, field, values, library)
    stages = tuple(changed if stage is chosen else stage for stage in case.stages)
    return replace(case, stages=stages)


def _stream_number(stream: Stream, field: str, values: FloatArray, library: Library) -> Stream:
    if field in _STREAM_NUMBERS:
        change: dict[str, Any] = {field: values}
        return replace(stream, **change)
    table, _, species = field.partition(".")
    if table != "amounts":
        raise InputError(
            f'found "{field}", which is no number of a stream',
            f"accepted is {', '.join(_STREAM_NUMBERS)} or amounts.SPECIES",
        )
    return replace(stream, amounts={**stream.amounts, resolve(species, library).name: values})


def _ratio(case: Case, axis: Axis, values: FloatArray, library: Library) -> Case:
    """Scale one stream so that Σ over all streams of numerator / denominator is as asked.

    With the stream's own share (p, q) and the others' (a, b): (a + s p)/(b + s q) = r, so that
    s = (r b − a)/(p − r q).
    """
    above, _, below = axis.name.partition("/")
    counts = [_counter(text.strip(), library) for text in (above, below)]
    chosen = [stream for stream in case.feeds if stream.name == axis.scale]
    if not chosen:
        raise InputError(
            f'found "{axis.scale}" to be scaled, which is no stream',
            f"accepted is one of {', '.join(stream.name for stream in case.feeds)}",
        )
    own = [count(chosen[0].amounts) for count in counts]
    others = [
        sum((count(s.amounts) for s in case.feeds if s.name != axis.scale), np.zeros(()))
        for count in counts
    ]
    with np.errstate(divide="ignore", invalid="ignore"):
        factor = (values * others[1] - others[0]) / (own[0] - values * own[1])
        denominator = others[1] + factor * own[1]
    if not np.all(np.isfinite(factor) & (factor >= 0.0) & (denominator > 0.0)):
        raise InputError(
            f'found a ratio "{axis.name}" that no amount of "{axis.scale}" can meet',
            "accepted is a ratio whose denominator is fed, and a stream that moves it",
        )
    return _changed_stream(case, axis.scale, lambda stream: _scaled(stream, factor))


def _counter(text: str, library: Library) -> Callable[[Mapping[str, Values]], FloatArray]:
    """Counts an element's atoms, or a species' moles, in a stream."""
    is_element = text in library.atomic_weights and len(text) <= 2
    name = "" if is_element else resolve(text, library).name

    def count(amounts: Mapping[str, Values]) -> FloatArray:
        total = np.zeros(())
        for record, amount in amounts.items():
            share = dict(library[record].elements).get(text, 0.0) if is_element else record == name
            total = total + float(share) * np.asarray(amount, dtype=float)
        return np.asarray(total)

    return count


def _scaled(stream: Stream, factor: FloatArray) -> Stream:
    return replace(stream, amounts={n: factor * np.asarray(v) for n, v in stream.amounts.items()})


def _changed_stream(case: Case, name: str, change: Callable[[Stream], Stream]) -> Case:
    if name not in [stream.name for stream in case.feeds]:
        raise _nothing(f"feed.{name}", case)
    feeds = tuple(change(stream) if stream.name == name else stream for stream in case.feeds)
    return replace(case, feeds=feeds)


def _nothing(name: str, case: Case) -> InputError:
    stages = [f"stage.{stage.name}" for stage in case.stages]
    if stages == ["stage.outlet"]:
        stages = ["outlet"]
    places = [*stages, *(f"feed.{stream.name}" for stream in case.feeds)]
    return InputError(
        f'found "{name}", which names no number of the case',
        f"accepted is a number of {', '.join(places)}, such as {places[0]}.temperature",
    )
