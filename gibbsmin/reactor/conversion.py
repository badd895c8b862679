"""Conversion: how much of each substance of the feed is used up."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.thermo.species import Species


def _amount_of(substance: Species, records: Sequence[Species], amounts: FloatArray) -> FloatArray:
    """Of all forms of a substance, (B,); NaN where the amounts (B, S) are not known."""
    forms = [k for k, record in enumerate(records) if record.formula == substance.formula]
    if len(forms) == 1:
        return amounts[:, forms[0]]
    return np.asarray(amounts[:, forms].sum(axis=1) + 0.0 * amounts[:, 0])


def conversions(
    inlet: Inlet, records: Sequence[Species], amounts: FloatArray
) -> dict[str, FloatArray]:
    """1 − out/in of each record of the feed, (B,), all forms of a substance counted together.

    NaN where nothing of it is fed or the outlet's amounts (B, S) are not known; below 0 where the
    stage forms it.
    """
    shares = {}
    for fed in inlet.records:
        entering = _amount_of(fed, inlet.records, inlet.amounts)
        leaving = _amount_of(fed, records, amounts)
        with np.errstate(divide="ignore", invalid="ignore"):
            shares[fed.name] = np.where(entering > 0.0, 1.0 - leaving / entering, np.nan)
    return shares
