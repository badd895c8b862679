"""Turns a table of candidates into a selection of records."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace
from typing import TYPE_CHECKING, Literal

from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import placed, resolve
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.services import Service
from gibbsmin.thermo.library import Library

if TYPE_CHECKING:
    from gibbsmin.jobs.stage_schema import SpeciesTable


def read_selection(key: str, table: SpeciesTable, library: Library) -> Selection:
    """The candidates' names as records, each in one list only."""
    consider: Literal["all"] | tuple[str, ...] = "all"
    if table.consider != "all":
        consider = _record_names(f"{key}.consider", table.consider, library)
    leave_out = _record_names(f"{key}.leave_out", table.leave_out, library)
    inert = _record_names(f"{key}.inert", table.inert, library)
    _refuse_both(f"{key}.leave_out", leave_out, f"{key}.inert", inert)
    if consider != "all":
        _refuse_both(f"{key}.leave_out", leave_out, f"{key}.consider", consider)
    return Selection(consider=consider, leave_out=leave_out, inert=inert)


def proposed(service: Service, given: Collection[str], selection: Selection) -> Selection:
    """A selection with a service's proposals in the keys that the case leaves open."""
    selection = replace(selection, too_slow=service.too_slow, selective=bool(service.inert))
    if "consider" not in given:
        left = (*selection.leave_out, *selection.inert)
        considered = tuple(name for name in service.consider if name not in left)
        selection = replace(selection, consider=considered, gangue_passes=True)
    if "inert" not in given:
        selection = replace(selection, inert_where_fed=service.inert)
    return selection


def _record_names(key: str, texts: tuple[str, ...], library: Library) -> tuple[str, ...]:
    written: dict[str, str] = {}
    with placed(key):
        for text in texts:
            name = resolve(text, library).name
            if name in written:
                raise InputError(
                    f'found {name} twice, as "{written[name]}" and as "{text}"',
                    "accepted is each record once",
                )
            written[name] = text
    return tuple(written)


def _refuse_both(key: str, names: tuple[str, ...], other_key: str, others: tuple[str, ...]) -> None:
    for name in names:
        if name in others:
            raise InputError(
                f'found "{name}", which {other_key} lists too',
                "accepted is a record in one of the two",
                key=key,
            )
