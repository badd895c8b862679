"""Mixtures that a case file may name like a species: dry air."""

from __future__ import annotations

import csv
from collections.abc import Mapping
from functools import cache
from importlib.resources import files


@cache
def compositions() -> Mapping[str, Mapping[str, float]]:
    """Mole fractions by record name, of each mixture by its name; each sums to 1.

    Air is the dry standard atmosphere of ISO 2533:1975 without its traces of neon, helium,
    krypton, xenon, hydrogen and methane (26 ppm together), scaled to 1.
    """
    text = files("gibbsmin.data").joinpath("compositions.csv").read_text(encoding="utf-8")
    parts: dict[str, dict[str, float]] = {}
    for row in csv.DictReader(text.splitlines()):
        parts.setdefault(row["mixture"], {})[row["record"]] = float(row["mole_fraction"])
    return {
        name: {record: fraction / sum(mixture.values()) for record, fraction in mixture.items()}
        for name, mixture in parts.items()
    }
