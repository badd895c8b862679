"""What readers of feeds share: names into records, measures into moles, errors at their keys."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import contextmanager

from gibbsmin.errors import InputError, UnitError, UnknownSpeciesError
from gibbsmin.jobs.compositions import compositions
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.units import Dimension, Measure, shown

ANALYSIS_SPREAD = 0.005
"""An analysis may miss 100 % by this much; it is then scaled, and the result says so."""

_MASS = (Dimension.MASS, Dimension.MASS_FLOW)
_NORMAL_VOLUME = (Dimension.NORMAL_VOLUME, Dimension.NORMAL_VOLUME_FLOW)


@contextmanager
def placed(key: str) -> Iterator[None]:
    """Adds the key to the errors of what stands under it."""
    try:
        yield
    except InputError as error:
        raise error.at(key=key) from None


@contextmanager
def within(key: str) -> Iterator[None]:
    """Puts the key before those of the errors of what stands under it."""
    try:
        yield
    except InputError as error:
        error.key = f"{key}.{error.key}".rstrip(".")
        raise


def resolve(text: str, library: Library) -> Species:
    """The record of a name, where a bare element such as C could not be its lone atom by mistake.

    Raises
    ------
    UnknownSpeciesError
        as the library does, and for a bare element symbol whose gas record is the single atom
        though the element has liquid or solid records.
    """
    record = library.resolve(text)
    forms = library.forms(record.formula)
    if (
        record.phase is Phase.GAS
        and record.atoms == 1
        and record.formula == text.strip()
        and any(form.phase is not Phase.GAS for form in forms)
    ):
        raise UnknownSpeciesError(
            f"found {shown(text)}, which could be single atoms in the gas or a condensed form",
            f"accepted is one of {', '.join(form.name for form in forms)}",
        )
    return record


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
