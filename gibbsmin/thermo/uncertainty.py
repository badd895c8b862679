"""Standard uncertainties of the records' enthalpies and entropies, published or by class.

Few records come with an uncertainty.  For the others ``uncertainty_classes.csv`` states one by
class of record, each with its reason; these are judgements and are marked so.
"""

from __future__ import annotations

import csv
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Literal

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.thermo.species import OWN, Phase, Species

PUBLISHED = "published"
OWN_RECORD = "the user's record"
BY_DEFINITION = "exact by definition of the reference state"

EVALUATED = "ATcT"
"""Source of the enthalpies of well-known gases."""

Quantity = Literal["enthalpy", "entropy"]


@dataclass(frozen=True, eq=False)
class RecordUncertainties:
    """Standard uncertainties of S records, and where each comes from.

    Attributes
    ----------
    enthalpy : u(dfH298) in J/mol, (S,); none is NaN
    entropy : u(S298) in J/mol/K, (S,); none is NaN
    enthalpy_origins, entropy_origins : "published" for what the library's record carries, "the
        user's record" for what a user's own does, "exact by definition …" for the enthalpy of a
        reference state, else the reason of the class, which begins with "judgement: "
    """

    enthalpy: FloatArray
    entropy: FloatArray
    enthalpy_origins: tuple[str, ...]
    entropy_origins: tuple[str, ...]


@dataclass(frozen=True)
class UncertaintyClass:
    """The default of a class of records, in J/mol (or J/kg) or J/mol/K, and its reason."""

    value: float
    per_mass: bool
    reason: str


def record_uncertainties(records: Sequence[Species]) -> RecordUncertainties:
    """The uncertainty that each record carries, else the default of its class.

    The class is the source of the quantity with the phase ("ion" for a charged gas, "evaluated gas"
    where the enthalpy is that of the Active Thermochemical Tables), failing that the source alone,
    failing that any record.  An element in its reference state has an enthalpy
    of zero by definition, which is exact.

    Examples
    --------
    >>> from gibbsmin.thermo.library import load_library
    >>> found = record_uncertainties([load_library()["N2(g)"], load_library()["FeCl2(cr)"]])
    >>> found.enthalpy.tolist(), found.enthalpy_origins[0]
    ([0.0, 3000.0], 'exact by definition of the reference state')
    """
    enthalpies = [_enthalpy(record) for record in records]
    entropies = [_entropy(record) for record in records]
    return RecordUncertainties(
        np.array([value for value, _ in enthalpies], dtype=np.float64),
        np.array([value for value, _ in entropies], dtype=np.float64),
        tuple(origin for _, origin in enthalpies),
        tuple(origin for _, origin in entropies),
    )


def _enthalpy(record: Species) -> tuple[float, str]:
    if record.dfH298 == 0.0 and len(record.elements) <= 1:
        return 0.0, BY_DEFINITION
    if not math.isnan(record.u_dfH298):
        return record.u_dfH298, _carried(record.source_enthalpy)
    return _by_class("enthalpy", record.source_enthalpy, record)


def _entropy(record: Species) -> tuple[float, str]:
    if not math.isnan(record.u_S298):
        return record.u_S298, _carried(record.source_entropy)
    return _by_class("entropy", record.source_entropy, record)


def _carried(source: str) -> str:
    return OWN_RECORD if source.startswith(OWN) else PUBLISHED


def _by_class(quantity: Quantity, source: str, record: Species) -> tuple[float, str]:
    phase = _phase(record)
    classes = uncertainty_classes()
    places = ((quantity, source, phase), (quantity, source, ""), (quantity, "", ""))
    found = next(classes[place] for place in places if place in classes)
    return found.value * (record.molar_mass if found.per_mass else 1.0), found.reason


def _phase(record: Species) -> str:
    if record.charge:
        return "ion"
    evaluated = record.phase is Phase.GAS and record.source_enthalpy == EVALUATED
    return "evaluated gas" if evaluated else record.phase.value


@cache
def uncertainty_classes() -> Mapping[tuple[str, str, str], UncertaintyClass]:
    """The defaults by quantity, source and phase; an empty word stands for any."""
    text = files("gibbsmin.data").joinpath("uncertainty_classes.csv").read_text(encoding="utf-8")
    factors = {"kJ/mol": 1e3, "kJ/kg": 1e3, "J/(mol K)": 1.0}
    return {
        (row["quantity"], row["source"], row["phase"]): UncertaintyClass(
            float(row["value"]) * factors[row["unit"]], row["unit"] == "kJ/kg", row["reason"]
        )
        for row in csv.DictReader(text.splitlines())
    }
