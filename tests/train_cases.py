"""An invented train: reformer, shift with a quench and a bypass, nozzle."""

from __future__ import annotations

from typing import Any

TRAIN: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "29 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0, "N2": 0.02},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "29 bar",
            "unit": "mol",
            "amounts": {"H2O": 3.0},
        },
        "quench": {
            "temperature": "30 degC",
            "pressure": "30 bar",
            "unit": "mol",
            "amounts": {"H2O(l)": 0.4},
        },
    },
    "stage": [
        {
            "name": "reformer",
            "feeds": ["gas", "steam"],
            "temperature": "850 degC",
            "pressure": "25 bar",
        },
        {
            "name": "shift",
            "feeds": ["quench"],
            "heat": "-60 kJ",
            "pressure_drop": "0.5 bar",
            "bypass": 0.2,
            "remove": {"CO2": "30 %"},
        },
        {"name": "nozzle", "entropy": "feed", "pressure": "5 bar", "reactions": "none"},
    ],
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2", "H2O(l)"]},
}
