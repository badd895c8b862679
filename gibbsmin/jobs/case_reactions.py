"""Turns the text of a reaction into coefficients of records."""

from __future__ import annotations

from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.reaction import Reaction


def coefficients_of(text: str, library: Library) -> dict[str, float]:
    """ν by record name, products positive; a bare formula means the gas where there is one.

    Raises
    ------
    InputError
        for a text that is no balanced reaction, or that leaves open which record is meant.
    """
    reaction = Reaction.read(text, library)
    return {
        resolve(substance.text, library).name: float(number) for number, substance in reaction.terms
    }
