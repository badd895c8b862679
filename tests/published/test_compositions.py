"""Published equilibrium compositions against whole predictions from the library."""

from __future__ import annotations

import numpy as np
import pytest
from published_values import CheckValue, amounts, check_values

from gibbsmin.jobs.case import load_case
from gibbsmin.jobs.predict import predict
from gibbsmin.results import StageOutlet

SCALE = {"1": 1.0, "mol": 1.0, "%": 100.0, "mol%": 100.0}
UNDISSOCIATED_N2O4 = 3.178  # vapour density relative to air, as the source takes it


@pytest.mark.parametrize("check", check_values("compositions"), ids=str)
def test_prediction_meets_the_published_composition(check: CheckValue) -> None:
    feed = amounts(check["feed"])
    pressure = f"{check['pressure']} {check['pressure_unit']}"
    stream = {"temperature": "25 degC", "pressure": pressure, "unit": "mol", "amounts": feed}
    case = load_case(
        {
            "feed": {"feed": stream},
            "outlet": {"temperature": f"{check['temperature_K']} K", "pressure": pressure},
            "species": {"consider": [name.strip() for name in check["candidates"].split(";")]},
        }
    )
    found = SCALE[check["unit"]] * quantity(check, predict(case).final, sum(feed.values()))
    assert check.meets(found), f"{found:.6g} against {check.value} ± {check.tolerance:.2g}"


def quantity(check: CheckValue, outlet: StageOutlet, fed: float) -> float:
    subject = [record.name for record in outlet.records].index(check["subject"])
    match check["quantity"]:
        case "mole fraction":
            return float(outlet.mole_fractions[subject])
        case "amount":
            return float(outlet.amounts[subject])
        case "conversion":
            return outlet.conversion[check["subject"]]
        case "vapour density":
            return UNDISSOCIATED_N2O4 * fed / float(np.sum(outlet.amounts))
    raise AssertionError(f"no such quantity: {check['quantity']}")
