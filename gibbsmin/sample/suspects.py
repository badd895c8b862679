"""Which single measurement may carry a gross error.

Leaving measurement j out lowers chi-square by z_j² (the generalised likelihood ratio of Narasimhan
and Mah, AIChE J. 33 (1987) 1514, for a bias of one measurement).  All whose z² is within 3.84 of
the largest are suspects; a single name is given only where it is alone and no other test is so
correlated with it that both would answer alike.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.sample.findings import Suspects
from gibbsmin.sample.limits import TWO_SIDED
from gibbsmin.sample.plan import Plan
from gibbsmin.sample.reconciliation import Reconciliation
from gibbsmin.sample.thresholds import Thresholds

_ALIKE = 0.95
"""Tests correlated more than this answer alike."""

_NOBODY = Suspects((), "", float("nan"))


def suspects_of(
    plan: Plan,
    closed: Reconciliation,
    uncertainties: FloatArray,
    probabilities: Sequence[float],
    thresholds: Thresholds,
) -> list[Suspects]:
    """The suspects of each of B samples whose closure is poor; nobody elsewhere.

    Parameters
    ----------
    uncertainties
        u of the readings, (B, M).
    probabilities
        Of the closures.
    """
    squares = np.nan_to_num(closed.adjustments**2, nan=-1.0)
    names = _names(plan)
    found = [_NOBODY] * len(probabilities)
    for state, probability in enumerate(probabilities):
        if not probability < max(thresholds.suspect, thresholds.credible):
            continue
        own = squares[state]
        order = np.argsort(-own, kind="stable").tolist()
        top = order[0]
        within = [j for j in order if own[j] >= 0.0 and own[j] > own[top] - TWO_SIDED]
        others = np.delete(np.abs(closed.correlation[state, top]), top)
        alone = len(within) == 1 and others.max(initial=0.0) < _ALIKE
        size = -closed.residuals[state, top] * uncertainties[state, top]
        found[state] = Suspects(
            tuple(names[j] for j in within),
            names[top] if alone else "",
            float(size / closed.redundancy[state, top]),
        )
    return found


def _names(plan: Plan) -> list[str]:
    """Of the readings, with their place where an inlet's could be taken for the outlet's."""
    names = [reading.name for reading in plan.readings]
    return [
        f"{reading.name} at the {reading.place}" if names.count(reading.name) > 1 else reading.name
        for reading in plan.readings
    ]
