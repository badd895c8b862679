"""A reaction at temperatures: what ``gibbsmin reaction`` shows, as an object."""

from __future__ import annotations

import numpy as np
import numpy.typing as npt

from gibbsmin.thermo.library import Library, load_library
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.reaction_path import ReactionStudy, study_reaction


def reaction(
    text: str, temperatures: npt.ArrayLike, library: Library | None = None
) -> ReactionStudy:
    """ΔrH, ΔrS, ΔrG and log10 K of a reaction, and its path by way of 298.15 K.

    Parameters
    ----------
    text
        Such as ``"CH4 + 2 H2O = CO2 + 4 H2"``; ``H2O(g)`` means that form at all temperatures,
        ``H2O`` whichever is stable.
    temperatures
        K, one or many.
    library
        The installed one unless it is given, such as a case's own.

    Raises
    ------
    InputError
        for a text that is no balanced reaction between records of the library.
    """
    chosen = Reaction.read(text, library or load_library())
    return study_reaction(chosen, np.atleast_1d(np.asarray(temperatures, dtype=float)))
