"""Which records may appear in an outlet."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from gibbsmin.errors import InputError
from gibbsmin.reactor.balance import elements_of
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import FEED_ONLY, Phase, Species


@dataclass(frozen=True)
class Selection:
    """The user's choice of candidates, as record names.

    ``consider`` is ``"all"`` (every library record of the feed's elements but ions and superseded
    forms) or a list; ``leave_out`` is taken away from it; ``inert`` passes through
    unchanged, ``inert_where_fed`` only in a stage that it enters.  ``too_slow`` does not form in
    this service, and in a ``selective`` one, that of a catalyst, no gas and no organic matter
    forms but the candidates.  With ``gangue_passes`` a solid or liquid that is fed passes unchanged
    if no candidate holds one of its elements.
    """

    consider: Literal["all"] | tuple[str, ...] = "all"
    leave_out: tuple[str, ...] = ()
    inert: tuple[str, ...] = ()
    inert_where_fed: tuple[str, ...] = ()
    too_slow: tuple[str, ...] = ()
    selective: bool = False
    gangue_passes: bool = False

    def inert_among(self, feed: Sequence[Species], library: Library) -> tuple[str, ...]:
        """Records that pass unchanged: those named, those proposed where fed, and gangue."""
        fed = {record.name for record in feed}
        proposed = [name for name in self.inert_where_fed if name in fed]
        return tuple(dict.fromkeys([*self.inert, *proposed, *self.gangue(feed, library)]))

    def gangue(self, feed: Sequence[Species], library: Library) -> tuple[str, ...]:
        """Solids and liquids fed that pass for want of a candidate, such as silica with an ore."""
        if not self.gangue_passes or self.consider == "all":
            return ()
        held = set(elements_of([library[name] for name in self.consider]))
        return tuple(
            record.name
            for record in feed
            if record.phase is not Phase.GAS
            and record.status != FEED_ONLY
            and not set(elements_of([record])) <= held
        )

    def not_missed(self, feed: Sequence[Species], library: Library) -> tuple[str, ...]:
        """Records whose absence needs no warning, since the user or the service settled it."""
        gangue = elements_of([library[name] for name in self.gangue(feed, library)])
        others = elements_of([record for record in feed if record.phase is Phase.GAS])
        stony = set(gangue) - set(others)
        settled = [
            record.name
            for record in library.records
            if (self.selective and (record.phase is Phase.GAS or record.organic))
            or (stony and stony & set(elements_of([record])))
        ]
        return (*self.leave_out, *self.too_slow, *settled)


def choose_candidates(
    selection: Selection, feed: Sequence[Species], library: Library
) -> tuple[Species, ...]:
    """The records that may appear in an outlet, gases first.

    A considered record with an element that the feed does not bring is left away, since it cannot
    form.  Otherwise the user's (or the library's) order is kept.

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
    fed = {record.name for record in feed}
    for name in selection.inert:
        if name not in fed:
            raise InputError(
                f'found "{name}", which is not in the feed',
                f"accepted is a record of the feed: {', '.join(sorted(fed))}",
                key="species.inert",
            )
    considered += [library[name] for name in selection.inert_among(feed, library)]
    kept = [
        record
        for record in dict.fromkeys(considered)
        if record.name not in selection.leave_out and set(dict(record.elements)) <= set(elements)
    ]
    if not kept:
        raise InputError(
            "found no record that the feed's elements could form",
            "accepted is a list with at least one, or all",
            key="species.consider",
        )
    return gases_first(kept)


def forms_of_feed(
    condense: Sequence[str], feed: Sequence[Species], library: Library
) -> tuple[Species, ...]:
    """Where nothing reacts: the feed's records, and all forms of the substances that condense.

    Raises
    ------
    InputError
        when a substance that should condense is not in the feed.
    """
    fed = {record.formula for record in feed}
    for formula in condense:
        if formula not in fed:
            raise InputError(
                f'found "{formula}", which is not in the feed',
                f"accepted is a substance of the feed: {', '.join(sorted(fed))}",
                key="condense",
            )
    forms = [form for formula in condense for form in library.forms(formula)]
    return gases_first(list(dict.fromkeys([*feed, *(f for f in forms if not f.superseded)])))


def gases_first(records: Sequence[Species]) -> tuple[Species, ...]:
    """The records in their order, the gases before the others."""
    return tuple(sorted(records, key=lambda record: record.phase is not Phase.GAS))
