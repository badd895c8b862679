"""The water that a gas carries beside what its amounts or its analysis tell."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError
from gibbsmin.reactor.dew_points import water_saturation_pressure
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase

if TYPE_CHECKING:
    from gibbsmin.jobs.feed_schema import FeedTable

_WATER = "H2O(g)"


def with_water(
    name: str, table: FeedTable, amounts: Mapping[str, float], library: Library
) -> dict[str, float]:
    """Amounts with water by dew point, relative humidity or steam ratio on top of the gas.

    Raises
    ------
    InputError
        where the water alone would reach the stream's pressure.
    """
    gas = sum(n for record, n in amounts.items() if library[record].phase is Phase.GAS)
    steam = _steam(name, table, gas, library)
    return {**amounts, _WATER: amounts.get(_WATER, 0.0) + steam} if steam else dict(amounts)


def _steam(name: str, table: FeedTable, gas: float, library: Library) -> float:
    """Moles of water on top of the moles of gas."""
    if table.steam_ratio is not None:
        return table.steam_ratio * gas
    P = table.pressure
    if table.water_dew_point is not None:
        key, vapour = "water_dew_point", _saturation(table.water_dew_point, library)
        found = f"a dew point of {table.water_dew_point:.2f} K"
    elif table.relative_humidity is not None:
        humidity = table.relative_humidity
        T, P = humidity.temperature or table.temperature, humidity.pressure or table.pressure
        key, vapour = "relative_humidity", humidity.share * _saturation(T, library)
        found = f"{100 * humidity.share:g} % of saturation at {T:.2f} K"
    else:
        return 0.0
    fraction = vapour / P
    if fraction >= 1.0:
        raise InputError(
            f"found {found}, at which water alone reaches {P / 1e5:g} bar",
            "accepted is a lower one",
            key=f"feed.{name}.{key}",
        )
    return gas * fraction / (1.0 - fraction)


def _saturation(temperature: float, library: Library) -> float:
    return float(water_saturation_pressure(temperature, library))
