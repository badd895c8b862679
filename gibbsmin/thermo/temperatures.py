"""Lists of temperatures as a user types them."""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.units import read_temperature, read_temperature_difference

_RANGE: Final = re.compile(r"(?P<first>.+?)\s+to\s+(?P<last>.+?)\s+step\s+(?P<step>.+)")
_QUANTITY: Final = re.compile(r"(?P<number>[-+−]?[\d.]+(?:[eE][-+]?\d+)?)\s*(?P<unit>.*)")
_LARGEST_COUNT: Final = 10_000


def read_temperatures(texts: Iterable[str]) -> FloatArray:
    """Temperatures in K, in the order given.

    Parameters
    ----------
    texts
        Each is one temperature ("850 degC"), several with commas between them ("600, 700, 800 K")
        or a range with both ends included ("300 K to 1500 K step 100 K").  A number without a
        unit takes the unit of the next one in the same text.

    Raises
    ------
    UnitError
        If a part is no temperature above 0 K with its unit.
    InputError
        If a range does not rise, or has too many steps.
    """
    values: list[float] = []
    for text in texts:
        unit = ""
        parts: list[list[float]] = []
        for part in reversed(text.split(",")):
            temperatures, unit = _read_part(part.strip(), unit)
            parts.insert(0, temperatures)
        values += [value for part in parts for value in part]
    return np.array(values)


def _read_part(text: str, unit: str) -> tuple[list[float], str]:
    """The temperatures of one part, and the unit that a part before it takes over."""
    match = _RANGE.fullmatch(text)
    if match is None:
        text, unit = _with_unit(text, unit)
        return [read_temperature(text)], unit
    last, unit_of_last = _with_unit(match["last"], _unit(match["step"]) or unit)
    first, unit_of_first = _with_unit(match["first"], unit_of_last)
    step, _ = _with_unit(match["step"], unit_of_last)
    return _steps(text, read_temperature(first), read_temperature(last), step), unit_of_first


def _steps(text: str, first: float, last: float, step_text: str) -> list[float]:
    step = read_temperature_difference(step_text)
    if not (step > 0 and last >= first):
        raise InputError(
            f'found "{text}", which does not rise', 'accepted is "300 K to 1500 K step 100 K"'
        )
    # A hundredth of a step absorbs round-off in the units.
    count = int((last - first) / step + 0.01) + 1
    if count > _LARGEST_COUNT:
        raise InputError(
            f'found "{text}", which has {count} steps',
            f"accepted are at most {_LARGEST_COUNT}",
        )
    return [first + k * step for k in range(count)]


def _with_unit(text: str, unit: str) -> tuple[str, str]:
    own = _unit(text)
    return (text, own) if own else (f"{text} {unit}".strip(), unit)


def _unit(text: str) -> str:
    match = _QUANTITY.fullmatch(text.strip())
    return match["unit"] if match else ""
