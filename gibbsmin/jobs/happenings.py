"""What happened in a stage: extents of independent reactions, and where each element went."""

from __future__ import annotations

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.reactor.extents import (
    element_selectivities,
    element_shares,
    independent_reactions,
    keyed_extents,
)
from gibbsmin.reactor.stage import StageStates
from gibbsmin.results import ElementYield, Extent
from gibbsmin.thermo.species import Species

_MATTERS = 1e-6
"""Share of all amounts from which a record's reaction is told; traces would each bring one."""


_HAPPENED = 1e-9
"""Share of all amounts from which a reaction has run at all."""


def extents_of(states: StageStates) -> tuple[Extent, ...]:
    """Extents in mol or mol/s of an independent set of reactions, of the first state."""
    records, fed, left = _before_and_after(states)
    total = max(fed.sum(), left.sum())
    matter = [i for i in range(len(records)) if max(fed[i], left[i]) > _MATTERS * total]
    chosen = [records[i] for i in matter]
    names = {r.name for r, amount in zip(records, fed.tolist(), strict=True) if amount > 0.0}
    reactions = independent_reactions(chosen, names)
    if not reactions:
        return ()
    extents = keyed_extents(reactions, [r.name for r in chosen], (left - fed)[matter])
    return tuple(
        Extent(str(reaction), extent)
        for reaction, extent in zip(reactions, extents.tolist(), strict=True)
        if abs(extent) > _HAPPENED * total
    )


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
