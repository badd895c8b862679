"""Critical constants of gases and binary interaction parameters, for cubic equations of state."""

from __future__ import annotations

import csv
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from types import MappingProxyType


@dataclass(frozen=True, slots=True)
class CriticalPoint:
    """Critical temperature (K) and pressure (Pa), acentric factor, and where they come from."""

    temperature: float
    pressure: float
    acentric_factor: float
    source: str


@cache
def critical_points() -> Mapping[str, CriticalPoint]:
    """Published critical points of gases by record name, of the table ``critical.csv``."""
    return MappingProxyType(
        {
            row["name"]: CriticalPoint(
                float(row["Tc_K"]),
                float(row["Pc_bar"]) * 1e5,
                float(row["acentric_factor"]),
                row["source"],
            )
            for row in _rows("critical.csv")
        }
    )


@cache
def interactions(equation: str) -> Mapping[frozenset[str], float]:
    """k of pairs of gases by their record names, of one equation of state.

    They are those of the table ``interaction.csv``; every other pair has k = 0.
    """
    return MappingProxyType(
        {
            frozenset((row["first"], row["second"])): float(row["k"])
            for row in _rows("interaction.csv")
            if row["equation"] == equation
        }
    )


@dataclass(frozen=True, slots=True)
class FugacityBias:
    """Worst deviation of φ of a pure gas from its reference equation of state, in percent.

    It is the worst of the states compared, between two temperatures (K) and up to a pressure (bar).
    """

    deviation: float
    T_low: float
    T_high: float
    P_high: float


@cache
def fugacity_biases(equation: str) -> Mapping[str, FugacityBias]:
    """Deviations by record name, of the table ``fugacity_bias.csv``."""
    return MappingProxyType(
        {
            row["record"]: FugacityBias(
                float(row["deviation_percent"]),
                float(row["T_low_K"]),
                float(row["T_high_K"]),
                float(row["P_high_bar"]),
            )
            for row in _rows("fugacity_bias.csv")
            if row["equation"] == equation
        }
    )


def _rows(file: str) -> Iterator[dict[str, str]]:
    text = files("gibbsmin.data").joinpath(file).read_text(encoding="utf-8")
    yield from csv.DictReader(text.splitlines())
