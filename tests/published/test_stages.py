"""Closed vessels, isothermal burning and reversible work against the textbooks."""

from __future__ import annotations

from typing import Any

import pytest
from published_values import CheckValue, amounts, check_values

import gibbsmin
from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE
from gibbsmin.results import StageOutlet


@pytest.mark.parametrize("check", check_values("stages"), ids=str)
def test_stage(check: CheckValue) -> None:
    found = figure(check["quantity"], outlet(check))
    assert check.meets(found), found


def outlet(check: CheckValue) -> StageOutlet:
    streams = [amounts(text) for text in check["streams"].split("|")]
    T = check["feed_temperature_K"]
    stage: dict[str, Any] = {"temperature": f"{check['outlet_temperature_K']} K"}
    if check["room"] == "closed vessel":
        moles = sum(sum(stream.values()) for stream in streams)
        room = moles * GAS_CONSTANT * float(T) / STANDARD_ATMOSPHERE
        # a hair wider than the feed, so that rounding does not ask for a compressor
        stage["volume"] = f"{room * (1.0 + 1e-12)} m3"
    else:
        stage["pressure"] = check["room"]
    case = gibbsmin.load_case(
        {
            "feed": {
                f"stream {k}": {
                    "temperature": f"{T} K",
                    "pressure": "1 atm",
                    "unit": "mol",
                    "amounts": stream,
                }
                for k, stream in enumerate(streams)
            },
            "outlet": stage,
            "species": {"consider": check["consider"].split("; ")},
        }
    )
    found = gibbsmin.predict(case).final
    assert found.certified
    return found


def figure(quantity: str, found: StageOutlet) -> float:
    entropy = found.entropy
    return {
        "heat": found.heat,
        "pressure": found.pressure,
        "entropy generation": entropy.value,
        "entropy change": entropy.value + found.heat / entropy.boundary_temperature,
        "lost work": entropy.lost_work,
    }[quantity]
