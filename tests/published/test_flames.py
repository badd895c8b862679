"""Adiabatic flames against the textbooks: with dissociation, and with complete combustion."""

from __future__ import annotations

import pytest
from published_values import CheckValue, amounts, check_values

import gibbsmin

DISSOCIATING = [
    "N2", "O2", "CO2", "H2O", "CO", "H2", "OH", "O", "H", "NO", "N", "NO2", "HO2", "CH4",
]  # fmt: skip
COMPLETE = ["N2", "O2", "CO2", "H2O(g)"]


@pytest.mark.parametrize("check", check_values("flames"), ids=str)
def test_flame(check: CheckValue) -> None:
    # Fuel and air are two streams: the books count the air's own mixing, not that of both.
    feed = amounts(check["feed"])
    fuel, *air = feed
    common = {"temperature": f"{check['temperature_K']} K", "pressure": "1 atm", "unit": "mol"}
    case = gibbsmin.load_case(
        {
            "feed": {
                "fuel": {**common, "amounts": {fuel: feed[fuel]}},
                "air": {**common, "amounts": {name: feed[name] for name in air}},
            },
            "outlet": {"heat": "0 kJ", "pressure": "1 atm"},
            "species": {
                "consider": DISSOCIATING if check["consider"] == "dissociating" else COMPLETE
            },
        }
    )
    (stage,) = gibbsmin.predict(case).stages
    assert stage.certified
    found = stage.temperature if check["quantity"] == "temperature" else stage.entropy.value
    assert check.meets(found), found
