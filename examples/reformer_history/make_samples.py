"""Makes the invented history: sixty samples of a reformer whose truth is known.

The approach of reforming grows from 2 K to 22 K (a slow loss of activity), the analyser reads
CO2 high by 8 % of its reading in one sample, and from sample 41 on the steam meter shows 6 % more
than flows.  Readings carry errors of the standard uncertainties that the tool assumes.

    python examples/reformer_history/make_samples.py > examples/reformer_history/samples.csv
"""

from __future__ import annotations

import csv
import sys
from pathlib import Path

import numpy as np

import gibbsmin

SAMPLES = 60
BAD_DAY, BAD_ANALYTE, BAD_SHARE = 23, "CO2(g)", 0.08
METER_FROM, METER_SHARE = 41, 0.06
RECORDS = ("H2(g)", "CO(g)", "CO2(g)", "CH4(g)", "N2(g)")


def truth(number: int, temperature: float) -> tuple[dict[str, float], float]:
    """Dry fractions and moles of steam to a mole of dry gas."""
    tables = dict(TABLES)
    tables["outlet"] = {
        "temperature": f"{temperature!r} degC",
        "pressure": "24 barg",
        "approach": [
            {
                "reaction": "CH4 + H2O = CO + 3 H2",
                "approach": f"{2.0 + 20.0 * number / (SAMPLES - 1)!r} K",
                "key": "CH4",
            },
        ],
    }
    outlet = gibbsmin.predict(gibbsmin.load_case(tables)).final
    names = [record.name for record in outlet.records]
    dry = {name: float(outlet.dry_mole_fractions[names.index(name)]) for name in RECORDS}
    water = float(outlet.mole_fractions[names.index("H2O(g)")])
    return dry, water / (1.0 - water)


def read_tables() -> dict[str, object]:
    import tomllib

    tables = tomllib.loads((Path(__file__).parent / "case.toml").read_text(encoding="utf-8"))
    del tables["sample"]
    return tables


TABLES = read_tables()


def main() -> None:
    random = np.random.default_rng(2024)
    writer = csv.writer(sys.stdout, lineterminator="\n")
    names = [name.removesuffix("(g)") for name in RECORDS]
    fractions = [f"{name}, %" for name in names]
    conditions = ["temperature, degC", "pressure, barg"]
    writer.writerow(["time", *conditions, *fractions, "steam ratio", "feed.steam, kmol/h"])
    for number in range(SAMPLES):
        temperature = float(random.normal(850.0, 4.0))
        dry, steam = truth(number, temperature)
        row = [f"week {number + 1}", f"{temperature + random.normal(0.0, 3.0):.1f}"]
        row.append(f"{24.0 + random.normal(0.0, 0.05):.2f}")
        for name in RECORDS:
            y = dry[name]
            u = float(np.hypot(0.01 * y, 0.0002))
            reading = y + random.normal(0.0, u)
            if number + 1 == BAD_DAY and name == BAD_ANALYTE:
                reading *= 1.0 + BAD_SHARE
            row.append(f"{100.0 * reading:.3f}")
        row.append(f"{steam * (1.0 + random.normal(0.0, 0.02)):.4f}")
        shown = 320.0 * (1.0 + random.normal(0.0, 0.01))
        if number + 1 >= METER_FROM:
            shown *= 1.0 + METER_SHARE
        row.append(f"{shown:.1f}")
        writer.writerow(row)


if __name__ == "__main__":
    main()
