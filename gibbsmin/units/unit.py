"""What a unit is: a dimension and the way to SI."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from gibbsmin.arrays import FloatArray

    Number = TypeVar("Number", float, FloatArray)


class Dimension(StrEnum):
    """What a unit measures."""

    TEMPERATURE = "temperature"
    TEMPERATURE_DIFFERENCE = "temperature difference"
    PRESSURE = "pressure"
    MOLAR_AMOUNT = "molar amount"
    MOLAR_FLOW = "molar flow"
    MASS = "mass"
    MASS_FLOW = "mass flow"
    NORMAL_VOLUME = "normal volume"
    NORMAL_VOLUME_FLOW = "normal volume flow"
    VOLUME = "volume at no stated condition"
    VOLUME_FLOW = "volume flow at no stated condition"
    ENERGY = "heat"
    POWER = "heat flow"
    TIME = "time"
    OTHER = "quantity of another kind"

    @property
    def phrase(self) -> str:
        """With its article, as it stands in a sentence."""
        return f"a {self.value}"

    @property
    def per_time(self) -> Dimension:
        """The dimension of a flow of this, ``OTHER`` where there is none."""
        return _FLOW_OF.get(self, Dimension.OTHER)

    @property
    def is_flow(self) -> bool:
        """Whether it counts per time."""
        return self in _FLOW_OF.values()


_FLOW_OF = {
    Dimension.MOLAR_AMOUNT: Dimension.MOLAR_FLOW,
    Dimension.MASS: Dimension.MASS_FLOW,
    Dimension.NORMAL_VOLUME: Dimension.NORMAL_VOLUME_FLOW,
    Dimension.VOLUME: Dimension.VOLUME_FLOW,
    Dimension.ENERGY: Dimension.POWER,
}


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit as written: SI value = ``factor`` × number + ``offset``.

    SI is K, Pa, mol, kg, m³, J and s; a normal volume counts mol of the ideal gas that fills it.
    """

    text: str
    dimension: Dimension
    factor: float
    offset: float = 0.0

    def to_si(self, number: Number) -> Number:
        """SI value of a number in this unit; arrays keep their shape."""
        return number * self.factor + self.offset

    def from_si(self, value: Number) -> Number:
        """Number in this unit of an SI value; arrays keep their shape."""
        return (value - self.offset) / self.factor
