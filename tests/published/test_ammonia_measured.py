"""Measured equilibrium of ammonia synthesis against real gases; nothing is fitted to it."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from published_values import CheckValue, check_values

from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import at_temperature
from gibbsmin.reactor.model import stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.real_gas import Equation

VALUES = check_values("ammonia_measured")
NAMES = ("H2(g)", "N2(g)", "NH3(g)")


@cache
def fractions(equation: Equation | None) -> dict[str, float]:
    library = load_library()
    chemistry = Chemistry(Selection(consider=NAMES), equation=equation)
    model = stage_model(chemistry, [library["H2(g)"], library["N2(g)"]], library)
    T = np.array([float(check["temperature_K"]) for check in VALUES])
    P = np.array([float(check["pressure_bar"]) * 1e5 for check in VALUES])
    found = at_temperature(model, T, P, np.tile([3.0, 1.0], (T.size, 1)))
    assert found.solution.certified.all()
    share = 100.0 * found.amounts[:, 2] / found.amounts.sum(axis=1)
    return dict(zip((check.id for check in VALUES), share.tolist(), strict=True))


@pytest.mark.parametrize("check", VALUES, ids=str)
def test_measured_ammonia_is_met(check: CheckValue) -> None:
    found = fractions(Equation.SOAVE_REDLICH_KWONG)[check.id]
    assert check.meets(found), found


MEASURED = [check for check in VALUES if check.id.startswith("LD-")]


@pytest.mark.parametrize("check", MEASURED, ids=str)
def test_measured_ammonia_is_met_by_the_other_equation_too(check: CheckValue) -> None:
    found = fractions(Equation.PENG_ROBINSON)[check.id]
    assert check.meets(found), found


def test_an_ideal_gas_misses_at_pressure() -> None:
    misses = [fractions(None)[check.id] / check.value - 1.0 for check in VALUES]
    assert min(misses) < -0.25
