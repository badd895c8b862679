"""What happened in a stage: extents of independent reactions, and where each element went."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from fractions import Fraction

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.errors import InputError
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.reactor.extents import (
    KeyedReaction,
    element_selectivities,
    element_shares,
    independent_reactions,
    keyed_extents,
    named_extents,
)
from gibbsmin.reactor.stage import StageStates
from gibbsmin.results import ElementYield, Extent
from gibbsmin.thermo.species import Species

_MATTERS = 1e-6
"""Share of all amounts from which a record's reaction is told; traces would each bring one."""


_HAPPENED = 1e-9
"""Share of all amounts from which a reaction has run at all."""

_ROUNDING = 1e-12
"""Share of all amounts by which a record that is held may seem to change."""

_DEPENDENT = 1e-9
"""Share of a reaction that others do not tell, below which it depends on them."""


def extents_of(
    states: StageStates, named: Sequence[Mapping[str, float]] = ()
) -> tuple[Extent, ...]:
    """Extents in mol or mol/s of an independent set of reactions, of the first state.

    The set holds the named reactions first, then such as tell the rest of what happened; the
    extents of all depend on the whole set.

    Raises
    ------
    InputError
        where a named reaction has a record that is neither fed nor a candidate, or depends on the
        others.
    """
    records, fed, left = _before_and_after(states)
    total = max(fed.sum(), left.sum())
    called = {name for coefficients in named for name in coefficients}
    _require_known(called, records)
    matter = (np.maximum(fed, left) > _MATTERS * total) & (np.abs(left - fed) > _ROUNDING * total)
    matter |= np.array([record.name in called for record in records], dtype=bool)
    fed_names = {record.name for record in _picked(records, fed > 0.0)}
    reactions = independent_reactions(_picked(records, matter), fed_names)
    names = [record.name for record in records]
    if named:
        # Solved for with all traces, so that these do not blur the extents; theirs are not told.
        present = matter | (np.maximum(fed, left) > 0.0)
        traces = independent_reactions(_picked(records, present), fed_names)
        extents = _with_named(named, (*reactions, *traces), names, left - fed)
    else:
        traces = ()
        values = keyed_extents(reactions, names, left - fed) if reactions else np.zeros(0)
        extents = list(zip(reactions, values.tolist(), strict=True))
    return tuple(
        Extent(str(reaction), extent)
        for reaction, extent in extents
        if not reaction.key
        or (abs(extent) > _HAPPENED * total and not any(reaction is trace for trace in traces))
    )


def _picked(records: Sequence[Species], which: BoolArray) -> list[Species]:
    return [record for record, is_so in zip(records, which.tolist(), strict=True) if is_so]


def _require_known(names: Collection[str], records: Sequence[Species]) -> None:
    known = {record.name for record in records}
    for name in sorted(names):
        if name not in known:
            raise InputError(
                f'found "{name}" in a reaction, which is neither fed nor considered',
                "accepted are reactions between records that are",
                key="extents",
            )


def _with_named(
    named: Sequence[Mapping[str, float]],
    others: Sequence[KeyedReaction],
    names: Sequence[str],
    changes: FloatArray,
) -> list[tuple[KeyedReaction, float]]:
    """The named reactions, without a key, and others that they do not tell; with their extents."""
    reactions = [KeyedReaction("", _exact(coefficients)) for coefficients in named]
    rows = [_row(reaction, names) for reaction in reactions]
    basis = np.linalg.qr(np.array(rows).T)[0]
    for reaction in others:
        row = _row(reaction, names)
        rest = row - basis @ (basis.T @ row)
        rest -= basis @ (basis.T @ rest)
        if np.linalg.norm(rest) > _DEPENDENT * np.linalg.norm(row):
            basis = np.column_stack([basis, rest / np.linalg.norm(rest)])
            rows.append(row)
            reactions.append(reaction)
    try:
        extents, _ = named_extents(np.array(rows), changes)
    except InputError as error:
        raise error.at(key="extents") from None
    return list(zip(reactions, extents.tolist(), strict=True))


def _exact(coefficients: Mapping[str, float]) -> dict[str, Fraction]:
    return {name: Fraction(nu).limit_denominator() for name, nu in coefficients.items()}


def _row(reaction: KeyedReaction, names: Sequence[str]) -> FloatArray:
    return np.array([float(reaction.terms.get(name, 0)) for name in names])


def yields_of(states: StageStates) -> tuple[ElementYield, ...]:
    """Share and selectivity of each element in each record that holds a millionth of it."""
    records, fed, left = _before_and_after(states)
    elements = elements_of(records)
    counts = element_counts(records, elements)
    shares = element_shares(counts, fed, left)
    selectivities = element_selectivities(counts, fed, left)
    return tuple(
        ElementYield(element, records[j].name, float(shares[e, j]), float(selectivities[e, j]))
        for e, element in enumerate(elements)
        for j in np.flatnonzero(shares[e] > _MATTERS).tolist()
    )


def _before_and_after(states: StageStates) -> tuple[list[Species], FloatArray, FloatArray]:
    """All records of feed and outlet, with their amounts in both."""
    inlet, model = states.inlet, states.model
    records = list(dict.fromkeys([*inlet.records, *model.records]))
    place = {record.name: i for i, record in enumerate(records)}
    fed, left = np.zeros(len(records)), np.zeros(len(records))
    fed[[place[record.name] for record in inlet.records]] = inlet.amounts[0]
    left[[place[record.name] for record in model.records]] = states.equilibria.amounts[0]
    return records, fed, left
