"""An axis of a scan: a number of the case, and the values that it takes."""

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
