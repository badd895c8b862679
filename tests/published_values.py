"""Reads the tables of published check values that lie in ``tests/published``.

Every row of a check table carries its value with unit, a tolerance with the reason for it, and
the source with the way the value was got from it: "read" (seen in print), "recalled" (from
memory) or "solved" (our own solution of inputs that the source prints).
"""

from __future__ import annotations

import csv
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path

import janaf
import numpy as np
import numpy.typing as npt

from gibbsmin.constants import REFERENCE_TEMPERATURE

TABLES = Path(__file__).parent / "published"
PROVENANCES = ("read", "recalled", "solved")


@dataclass(frozen=True)
class CheckValue:
    """One published value: ``tolerance`` is absolute, ``row`` holds the other columns."""

    id: str
    value: float
    tolerance: float
    row: Mapping[str, str]

    def __getitem__(self, column: str) -> str:
        return self.row[column]

    def __str__(self) -> str:
        return self.id

    def meets(self, found: float) -> bool:
        """Whether a figure of ours agrees within the tolerance; NaN never does."""
        return abs(found - self.value) <= self.tolerance


def rows(table: str) -> list[dict[str, str]]:
    """All rows of a table, as they are written."""
    with (TABLES / f"{table}.csv").open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def check_values(table: str) -> list[CheckValue]:
    """The rows of a check table, relative tolerances made absolute."""
    return [_check_value(row) for row in rows(table)]


def amounts(text: str) -> dict[str, float]:
    """Read ``"CH4 2; H2O 3"``."""
    pairs = (part.rsplit(maxsplit=1) for part in text.split(";"))
    return {name.strip(): float(amount) for name, amount in pairs}


@dataclass(frozen=True)
class MainTable:
    """Columns of one published table of the main source, in its own units."""

    T: npt.NDArray[np.float64]
    S: npt.NDArray[np.float64]
    dfH: npt.NDArray[np.float64]
    log10_Kf: npt.NDArray[np.float64]

    def line(self, T: float) -> int:
        """The line of a tabulated temperature; a transition stands there twice and is refused."""
        (line,) = np.flatnonzero(T == self.T)
        return int(line)

    @property
    def dfH298(self) -> float:
        """kJ/mol"""
        return float(self.dfH[self.line(REFERENCE_TEMPERATURE)])


@cache
def main_table(record: str) -> MainTable:
    """The published table of a record (or of a bare formula's reference state)."""
    (index,) = (row["table"] for row in rows("main_tables") if row["record"] == record)
    frame = janaf.Table(index=index).df
    columns = ("T(K)", "S", "delta-f H", "log Kf")
    return MainTable(*(frame[name].to_numpy() for name in columns))


def _check_value(row: dict[str, str]) -> CheckValue:
    value, tolerance = float(row["value"]), float(row["tolerance"])
    if row["tolerance_kind"] == "relative":
        tolerance *= abs(value)
    return CheckValue(row["id"], value, tolerance, row)
