"""Where the judgement of a sample draws its lines."""

from __future__ import annotations

from dataclasses import dataclass, fields
from math import isfinite

from gibbsmin.errors import InputError

FAINT = 5.0
"""A reacting species below this many standard uncertainties gives one-sided limits only."""

CURVED = 20.0
"""Below this many, ln y bends within the errors: limits follow chi-square, not the tangent."""

Z_95 = 1.959963984540054
"""Two-sided 95 % of the normal distribution."""


@dataclass(frozen=True, slots=True)
class Thresholds:
    """Significance levels and the resolution that a judgement needs.

    Attributes
    ----------
    credible : probability of the closure below which a sample is not credible
    suspect : probability of the closure below which suspects are named
    equilibrium : probability below which equilibrium does not fit
    resolution : K; a reaction whose 95 % interval of T − T_eq is wider to one side is not decidable
    """

    credible: float = 0.01
    suspect: float = 0.05
    equilibrium: float = 0.05
    resolution: float = 50.0

    def __post_init__(self) -> None:
        for field in fields(self):
            value = getattr(self, field.name)
            level = field.name != "resolution"
            if not (isfinite(value) and value > 0.0 and (value < 1.0 or not level)):
                raise InputError(
                    f"found {value:g}",
                    "accepted is a probability between 0 and 1, such as 0.05"
                    if level
                    else "accepted is a temperature difference above 0 K",
                    key=field.name,
                )
