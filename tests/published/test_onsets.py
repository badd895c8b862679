"""Where a solid or liquid first forms, against measured vapour pressures and carbon's boundary."""

from __future__ import annotations

from typing import Any

import pytest
from published_values import CheckValue, amounts, check_values

import gibbsmin

COOLING = {"vary": "outlet.temperature", "first": "250 K", "last": "900 K", "count": 14}
"""The axis of a vapour that cools."""


@pytest.mark.parametrize("check", check_values("onsets"), ids=str)
def test_onset(check: CheckValue) -> None:
    """A row with a ``fault`` is a known fault of the library's; it must be one still."""
    found = gibbsmin.onset(gibbsmin.load_case(tables(check)))
    (place,) = found.shown.tolist()
    assert found.certified.all()
    if check["quantity"] == "onset on cooling":
        value = place - 273.15 if check["unit"] == "degC" else place
    else:
        value = 100.0 * place / (1.0 + place)
    assert check.meets(value) == (not check["fault"]), value


def tables(check: CheckValue) -> dict[str, Any]:
    """A stage at given temperature: the vapour cools, or one gas is added to 1 mol of another."""
    varied = f"feed.gas.amounts.{check['varies']}"
    added = {"vary": varied, "first": "0.001 mol", "last": "100 mol", "count": 11}
    cooling = check["quantity"] == "onset on cooling"
    return {
        "feed": {
            "gas": {
                "temperature": "900 K",
                "pressure": check["pressure"],
                "unit": "mol",
                "amounts": amounts(check["feed"]),
            }
        },
        "outlet": {"temperature": check["temperature"] or "900 K", "pressure": check["pressure"]},
        "species": {"consider": [name.strip() for name in check["candidates"].split(";")]},
        "onset": {"phase": check["phase"]},
        "axis": [COOLING if cooling else added | {"spacing": "logarithmic"}],
    }
