"""Reads the tables of published check values that lie in ``tests/published``.

Every row of a check table carries its value with unit, a tolerance with the reason for it, and
the source with the way the value was got from it: "read" (seen in print), "recalled" (from
memory) or "solved" (our own solution of inputs that the source prints).
"""

from __future__ import annotations

import csv
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

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


def _check_value(row: dict[str, str]) -> CheckValue:
    value, tolerance = float(row["value"]), float(row["tolerance"])
    if row["tolerance_kind"] == "relative":
        tolerance *= abs(value)
    return CheckValue(row["id"], value, tolerance, row)
