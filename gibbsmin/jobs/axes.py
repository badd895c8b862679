"""Puts the values of axes into a case.

An axis names a number by its place in the case file (:mod:`gibbsmin.jobs.axis_place`); or it
names a ratio of what the streams bring, ``ratio = "H2O/C"``, with the stream that is scaled to
meet it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.axis_place import Place, place_of
from gibbsmin.jobs.axis_stage import with_number
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library


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
    place = place_of(axis.name, case.feeds, case.stages, library)
    if isinstance(place.holder, Stream):
        changed = _with_stream_number(place.holder, place, values)
        feeds = tuple(changed if stream is place.holder else stream for stream in case.feeds)
        return replace(case, feeds=feeds)
    stage = with_number(place.holder, place, values)
    return replace(case, stages=tuple(stage if s is place.holder else s for s in case.stages))


def _with_stream_number(stream: Stream, place: Place, values: FloatArray) -> Stream:
    if place.kind == "amounts":
        return replace(stream, amounts={**stream.amounts, place.which: values})
    if place.kind == "total":
        total = sum(stream.amounts.values(), np.zeros(()))
        return _scaled(stream, values / total)
    change: dict[str, Any] = {place.kind: values}
    return replace(stream, **change)


def _ratio(case: Case, axis: Axis, values: FloatArray, library: Library) -> Case:
    """Scale one stream so that Σ over all streams of numerator / denominator is as asked.

    With the stream's own share (p, q) and the others' (a, b): (a + s p)/(b + s q) = r, so that
    s = (r b − a)/(p − r q).
    """
    above, below = (text.strip() for text in axis.name.split("/", 1))
    counts = [_counter(text, library) for text in (above, below)]
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
    if not np.any(own[1] + others[1] > 0.0):
        raise InputError(
            f'found a ratio "{axis.name}" whose denominator is zero: no stream brings "{below}"',
            "accepted is a ratio to what is fed",
        )
    with np.errstate(divide="ignore", invalid="ignore"):
        factor = (values * others[1] - others[0]) / (own[0] - values * own[1])
        denominator = others[1] + factor * own[1]
    if not np.all(np.isfinite(factor) & (factor >= 0.0) & (denominator > 0.0)):
        raise InputError(
            f'found a ratio "{axis.name}" that no amount of "{axis.scale}" can meet',
            "accepted is a ratio that the other streams leave open, and a stream that moves it",
        )
    changed = _scaled(chosen[0], factor)
    return replace(case, feeds=tuple(changed if s is chosen[0] else s for s in case.feeds))


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
