"""Which records may appear in an outlet."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import numpy as np

from gibbsmin.arrays import BoolArray
from gibbsmin.errors import InputError
from gibbsmin.reactor.balance import elements_of
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species


@dataclass(frozen=True)
class Selection:
    """The user's choice of candidates, as record names.

    ``consider`` is ``"all"`` (every library record of the feed's elements but ions and superseded
    forms) or a list; ``leave_out`` is taken away from it; ``inert`` passes through unchanged.
    """

    consider: Literal["all"] | tuple[str, ...] = "all"
    leave_out: tuple[str, ...] = ()
    inert: tuple[str, ...] = ()


@dataclass(frozen=True)
class Candidates:
    """The records that may appear in an outlet, gases first, and which of them are inert."""

    records: tuple[Species, ...]
    inert: BoolArray

    @property
    def gas(self) -> BoolArray:
        return np.array([record.phase is Phase.GAS for record in self.records], dtype=bool)


def choose_candidates(
    selection: Selection, feed: Sequence[Species], library: Library
) -> Candidates:
    """Apply a selection to a feed.

    A considered record with an element that the feed does not bring is left away, since it cannot
    form.  Gases come first; otherwise the user's (or the library's) order is kept.

    Raises
    ------
    InputError
        when an inert record is not in the feed, or no candidate is left.
    """
    elements = elements_of(feed)
    if selection.consider == "all":
        considered = list(library.of_elements(elements))
    else:
        considered = [library[name] for name in selection.consider]
    feed_names = {record.name for record in feed}
    for name in selection.inert:
        if name not in feed_names:
            raise InputError(
                f'found "{name}", which is not in the feed',
                f"accepted is a record of the feed: {', '.join(sorted(feed_names))}",
                key="species.inert",
            )
    names = {record.name for record in considered}
    considered += [library[name] for name in selection.inert if name not in names]
    left_out = set(selection.leave_out)
    kept = [
        record
        for record in considered
        if record.name not in left_out and set(dict(record.elements)) <= set(elements)
    ]
    if not kept:
        raise InputError(
            "found no record that the feed's elements could form",
            "accepted is a list with at least one, or all",
            key="species.consider",
        )
    ordered = tuple(sorted(kept, key=lambda record: record.phase is not Phase.GAS))
    inert = np.array([record.name in selection.inert for record in ordered], dtype=bool)
    return Candidates(ordered, inert)
