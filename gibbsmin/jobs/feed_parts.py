"""What readers of feeds share: names into records, measures into moles, errors at their keys."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping
from contextlib import contextmanager

from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError, UnitError, UnknownSpeciesError
from gibbsmin.jobs.compositions import compositions
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.units import Dimension, Measure, shown

ANALYSIS_SPREAD = 0.005
"""An analysis may miss 100 % by this much; it is then scaled, and the result says so."""

_NO_VAPOUR = math.log(1e-12)
"""ln(P/P°) at room temperature below which a bare formula is not taken for the gas."""

_MASS = (Dimension.MASS, Dimension.MASS_FLOW)
_NORMAL_VOLUME = (Dimension.NORMAL_VOLUME, Dimension.NORMAL_VOLUME_FLOW)


@contextmanager
def placed(key: str) -> Iterator[None]:
    """Adds the key to the errors of what stands under it."""
    try:
        yield
    except InputError as error:
        raise error.at(key=key) from None


def item_key(tables: str, index: int, name: object = None) -> str:
    """The key of one of the tables of a list: by its name, else its number, from 1.

    So a stage is named as axes and uncertainties name it, and in the words of its engineer.
    """
    named = name.strip() if isinstance(name, str) else ""
    return f"{tables}.{named or index + 1}"


@contextmanager
def within(key: str) -> Iterator[None]:
    """Puts the key before those of the errors of what stands under it."""
    try:
        yield
    except InputError as error:
        error.key = f"{key}.{error.key}".rstrip(".")
        raise


def resolve(text: str, library: Library) -> Species:
    """The record of a name, where a bare formula could not be taken for the gas by mistake.

    Raises
    ------
    UnknownSpeciesError
        as the library does, and for a bare formula that more likely means a solid or a liquid:
        an element whose gas record is the single atom, such as C, and a substance without a
        measurable vapour at room temperature, such as SiO2.
    """
    record = library.resolve(text)
    if record.phase is not Phase.GAS or record.formula != text.strip():
        return record
    forms = library.forms(record.formula)
    others = [form for form in forms if form.phase is not Phase.GAS]
    if others and record.atoms == 1:
        raise _undecided(text, "single atoms in the gas", forms)
    if others and min(_log_vapour_pressure(record, form) for form in others) < _NO_VAPOUR:
        raise _undecided(text, "the gas", forms)
    return record


def _undecided(text: str, gas: str, forms: tuple[Species, ...]) -> UnknownSpeciesError:
    return UnknownSpeciesError(
        f"found {shown(text)}, which could be {gas} or a condensed form",
        f"accepted is one of {', '.join(form.name for form in forms)}",
    )


def _log_vapour_pressure(gas: Species, form: Species) -> float:
    """ln(P/P°) of the gas over a condensed form at 298.15 K."""
    energy = gas.dfH298 - form.dfH298 - REFERENCE_TEMPERATURE * (gas.S298 - form.S298)
    return -energy / (GAS_CONSTANT * REFERENCE_TEMPERATURE)


def parts_of(text: str, library: Library) -> dict[Species, float]:
    """Mole fractions of what a name stands for: a record, or the parts of a mixture such as air."""
    mixture = compositions().get(text.strip().casefold())
    if mixture is None:
        return {resolve(text, library): 1.0}
    return {library[name]: fraction for name, fraction in mixture.items()}


def moles_of(measure: Measure, parts: Mapping[Species, float]) -> dict[Species, float]:
    """Moles of each part of a measured amount, whose mole fractions are given."""
    total = measure.value
    if measure.unit.dimension in _MASS:
        total /= sum(fraction * record.molar_mass for record, fraction in parts.items())
    if measure.unit.dimension in _NORMAL_VOLUME:
        for record in parts:
            if record.phase is not Phase.GAS:
                raise UnitError(
                    f'found "{measure.unit.text}" for {record.name}, which is a {record.phase}',
                    "accepted is a molar amount or a mass",
                )
    return {record: total * fraction for record, fraction in parts.items()}
