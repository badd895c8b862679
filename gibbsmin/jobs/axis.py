"""An axis, the values that a number of the case takes, and what may be sought along it."""

from __future__ import annotations

from dataclasses import dataclass

from gibbsmin.arrays import FloatArray


@dataclass(frozen=True)
class Axis:
    """One axis.

    Attributes
    ----------
    name : as its column is called: the place in the case, or the ratio
    values : in SI (K, Pa, W or J, m³, mol or mol/s), or plain for a ratio
    shown : the same values in the user's unit
    unit : that unit, empty for a ratio
    scale : for a ratio, the stream that is scaled to meet it; empty otherwise
    """

    name: str
    values: FloatArray
    shown: FloatArray
    unit: str
    scale: str = ""


@dataclass(frozen=True)
class SoughtPhase:
    """A solid or liquid whose onset is looked for, and the stage, empty for the only one."""

    phase: str
    stage: str


@dataclass(frozen=True)
class SoughtValue:
    """A result that is to have a value, both as the user wrote them, and the stage."""

    result: str
    value: float | str
    stage: str
