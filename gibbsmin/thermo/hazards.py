"""Which substances are toxic or flammable, so that a report can name them.

The list covers what a reactor outlet is likely to hold; it is a reminder and no substitute for a
safety data sheet.
"""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files


@dataclass(frozen=True)
class Hazard:
    """Hazard of one formula, and the source of the classification."""

    formula: str
    toxic: bool
    flammable: bool
    source: str


@cache
def hazards() -> dict[str, Hazard]:
    """Hazards by formula."""
    text = files("gibbsmin.data").joinpath("hazards.csv").read_text(encoding="utf-8")
    return {
        row["formula"]: Hazard(
            row["formula"], row["toxic"] == "1", row["flammable"] == "1", row["source"]
        )
        for row in csv.DictReader(text.splitlines())
    }
