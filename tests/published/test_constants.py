"""Published equilibrium constants, gas ratios and decomposition pressures against the library."""

from __future__ import annotations

from math import log

import pytest
from published_values import CheckValue, check_values

from gibbsmin.constants import STANDARD_ATMOSPHERE, STANDARD_PRESSURE
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.species import Phase

UNIT_PRESSURE = {"bar": STANDARD_PRESSURE, "atm": STANDARD_ATMOSPHERE}
MMHG = STANDARD_ATMOSPHERE / 760


@pytest.mark.parametrize("check", check_values("constants"), ids=str)
def test_library_meets_the_published_constant(check: CheckValue) -> None:
    found = published_quantity(check)
    assert check.meets(found), f"{found:.6g} against {check.value} ± {check.tolerance:.2g}"


def published_quantity(check: CheckValue) -> float:
    """The constant as the source expresses it, with its pressure unit as standard pressure."""
    reaction = Reaction.read(check["reaction"], load_library())
    log10_K = float(reaction.log10_K(float(check["temperature_K"])))
    log10_K -= moles_of_gas_formed(reaction) * log10_ratio(check["pressure_unit"])
    match check["quantity"]:
        case "K":
            return 10**log10_K
        case "ln K":
            return log10_K * log(10)
        case "log10 K":
            return log10_K
        case "pressure in mmHg":
            return 10**log10_K * UNIT_PRESSURE[check["pressure_unit"]] / MMHG
    raise AssertionError(f"no such quantity: {check['quantity']}")


def moles_of_gas_formed(reaction: Reaction) -> float:
    return sum(
        float(number)
        for number, substance in reaction.terms
        if len(substance.forms) == 1 and substance.forms[0].phase is Phase.GAS
    )


def log10_ratio(unit: str) -> float:
    return log(UNIT_PRESSURE[unit] / STANDARD_PRESSURE) / log(10)
