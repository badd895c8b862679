"""Checks of a record: against the library's own of that name, and by itself."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species

_AT = np.array([298.15, 500.0, 1000.0, 1500.0, 2000.0, 3000.0])
_JUMP = 0.005
"""Relative step of Cp at a joint from which it is told."""

_LOW_ENTROPY = {Phase.GAS: 100.0, Phase.LIQUID: 20.0, Phase.SOLID: 2.0}
"""J/(mol K) below which an entropy is unlikely: common practice, from the library's own least."""


def check_record(record: Species, library: Library) -> Iterator[str]:
    """Sentences on what looks wrong, and on how far it is from the library's record."""
    T = np.linspace(record.T_low, record.T_high, 400)
    Cp = PropertyTable.of([record]).heat_capacity(T)[:, 0]
    if Cp.min() <= 0.0:
        yield f"The heat capacity is not above zero near {T[Cp.argmin()]:.0f} K."
    for below, above in zip(record.pieces[:-1], record.pieces[1:], strict=True):
        if above.transition:
            continue
        low, high = (
            float(PropertyTable.of([replace(record, pieces=(piece,))]).heat_capacity(at)[0])
            for piece, at in ((below, below.T_high - 1e-6), (above, above.T_low))
        )
        if abs(high - low) > _JUMP * low:
            step = 100.0 * (high / low - 1.0)
            yield f"The heat capacity steps by {step:+.1f} % at {above.T_low:g} K."
    if _LOW_ENTROPY[record.phase] > record.S298:
        yield (
            f"An entropy of {record.S298:.1f} J/(mol K) is unusually low for a {record.phase}: is "
            "it absolute?"
        )
    if not record.T_low <= 298.15 <= record.T_high:
        yield (
            f"The range {record.T_low:g} to {record.T_high:g} K does not hold 298.15 K: between, "
            "the heat capacity is continued as a constant."
        )
    yield from _against_library(record, library)


def _against_library(record: Species, library: Library) -> Iterator[str]:
    ours = next((r for r in library.forms(record.formula) if r.name == record.name), None)
    if ours is None:
        yield "The library has no record of this name."
        return
    yield (
        f"Against the library: ΔfH {(record.dfH298 - ours.dfH298) / 1e3:+.3f} kJ/mol, S "
        f"{record.S298 - ours.S298:+.3f} J/(mol K)."
    )
    low, high = max(record.T_low, ours.T_low), min(record.T_high, ours.T_high)
    T = _AT[(low <= _AT) & (high >= _AT)]
    if T.size:
        table = PropertyTable.of([record, ours])
        Cp, G = table.heat_capacity(T), table.gibbs_energy(T)
        in_Cp = (f"{100 * (a / b - 1):+.2f} %" for a, b in Cp.tolist())
        in_G = (
            f"{(a - b) / (GAS_CONSTANT * t):+.4f}" for t, (a, b) in zip(T, G.tolist(), strict=True)
        )
        for what, differences in (("Cp", in_Cp), ("G/RT", in_G)):
            each = (f"{d} at {t:g} K" for d, t in zip(differences, T.tolist(), strict=True))
            yield f"Its {what} differs by {', '.join(each)}."
