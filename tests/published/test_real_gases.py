"""Cubic equations of state against the reference equations of pure gases."""

from __future__ import annotations

import numpy as np
import pytest
from published_values import CheckValue, check_values

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.real_gas import Equation, RealGas

VALUES = check_values("real_gases")


def found(equation: Equation, check: CheckValue) -> float:
    gas = RealGas.of(equation, [load_library()[check["record"]]])
    T, P = float(check["temperature_K"]), float(check["pressure_bar"]) * 1e5
    if check["quantity"] == "second virial coefficient":
        P = 1.0
        slope = gas.state(T, P, [1.0]).log_fugacity[0] / P
        return float(1e6 * GAS_CONSTANT * T * slope)
    state = gas.state(T, P, [1.0])
    if check["quantity"] == "compressibility":
        return float(state.Z)
    return float(np.exp(state.log_fugacity[0]))


@pytest.mark.parametrize("equation", Equation, ids=lambda equation: equation.value)
@pytest.mark.parametrize("check", VALUES, ids=str)
def test_reference_equation_is_met(equation: Equation, check: CheckValue) -> None:
    assert check.meets(found(equation, check)), found(equation, check)


def test_eight_gases_are_covered() -> None:
    kinds = [check["record"] for check in VALUES if check["quantity"] == "fugacity coefficient"]
    assert len(set(kinds)) == 8
    assert len(kinds) >= 30
