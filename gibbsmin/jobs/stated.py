"""Uncertainties and correlations that a case states of its own numbers."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class StatedUncertainty:
    """Standard uncertainty of one input: in SI, or as a share of the number.

    Attributes
    ----------
    name : the input's, as :mod:`gibbsmin.jobs.inputs` names it
    value : in SI, or a share
    is_share : which of both
    """

    name: str
    value: float
    is_share: bool


@dataclass(frozen=True)
class Correlation:
    """Correlation coefficient, from −1 to 1, of two inputs."""

    first: str
    second: str
    coefficient: float
