"""What no instrument would read: mistakes of people in a sample, each refused in one sentence."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import ANALYSIS_SPREAD, resolve
from gibbsmin.jobs.sample import PlantSample
from gibbsmin.jobs.sample_reading import STEAM_RATIO
from gibbsmin.results import WATER
from gibbsmin.thermo.library import Library

_LARGEST_SUM = 1.1
"""Readings that add up to more are a mistake of the person, not of the instrument."""


@lru_cache(maxsize=4096)
def records_of(analyte: str, library: Library) -> tuple[str, ...]:
    """The records that an analyte counts together."""
    if analyte == STEAM_RATIO:
        return (WATER,)
    return tuple(resolve(part.strip(), library).name for part in analyte.split("+"))


def require_sense(sample: PlantSample, dried: Sequence[str], library: Library) -> None:
    """Refuse what cannot be an error of measurement.

    Raises
    ------
    InputError
        for readings that add up to far more than 100 % (or to less, if they were scaled to it),
        a record counted twice, one in a dry analysis that drying removes, and a steam ratio
        beside a wet analysis.
    """
    gases = (
        ("", sample.outlet, sample.dry, sample.normalised),
        ("inlet ", sample.inlet, sample.inlet_dry, sample.inlet_normalised),
    )
    for place, readings, dry, normalised in gases:
        if STEAM_RATIO in readings and not (dry and WATER in dried):
            raise InputError(
                f"found a steam ratio beside a wet {place}analysis",
                "accepted is a reading of H2O in its place",
            )
        counted: set[str] = set()
        for analyte, reading in readings.items():
            for name in records_of(analyte, library):
                if name in counted:
                    raise InputError(
                        f"found {name} in two {place}readings",
                        "accepted is each record in one reading",
                    )
                counted.add(name)
                if dry and name in dried and analyte != STEAM_RATIO and reading.value > 0.0:
                    raise InputError(
                        f"found a {place}reading of {name} in a dry analysis",
                        f"accepted is a wet analysis, or one without {name}",
                    )
        fractions = {name: read for name, read in readings.items() if name != STEAM_RATIO}
        total = sum(reading.value for reading in fractions.values())
        if total > _LARGEST_SUM:
            raise InputError(
                f"found {place}readings that add up to {100 * total:.4g} %",
                f"accepted is at most {100 * _LARGEST_SUM:.0f} %",
            )
        if fractions and normalised and abs(total - 1.0) > ANALYSIS_SPREAD:
            raise InputError(
                f"found {place}readings that add up to {100 * total:.4g} %, said to be normalised",
                "accepted is 99.5 to 100.5 %, or an analysis that is not normalised",
            )


def require_elements(sample: PlantSample, fed: set[str], library: Library) -> None:
    """Refuse a reading above zero of a record with an element that no feed brings.

    Raises
    ------
    InputError
        names the record and the element.
    """
    for analyte, reading in [*sample.outlet.items(), *sample.inlet.items()]:
        for name in records_of(analyte, library):
            foreign = [s for s, _ in library[name].elements if s not in fed]
            if foreign and reading.value > 0.0 and not reading.below:
                raise InputError(
                    f'found "{analyte}", with the element {foreign[0]} that no feed brings',
                    f"accepted are records of {', '.join(sorted(fed))}",
                    key=analyte,
                )
