"""Error bars of many states by the kernel against those of sensitivities, over whole trains."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pytest
from reactor.test_deviations import as_it_stands

import gibbsmin
from gibbsmin.jobs.error_bars import ErrorBars, deviation_form, error_bars
from gibbsmin.jobs.train import run_train
from gibbsmin.thermo.real_gas import Equation

STREAM = {"temperature": "520 degC", "pressure": "29 bar", "unit": "mol"}
TRAIN: dict[str, Any] = {
    "feed": {
        "gas": STREAM | {"amounts": {"CH4": 1.0, "N2": 0.02}},
        "steam": STREAM | {"amounts": {"H2O": 1.3}},
        "quench": STREAM | {"temperature": "30 degC", "amounts": {"H2O(l)": 0.4}},
    },
    "stage": [
        {
            "name": "reformer",
            "feeds": ["gas", "steam"],
            "temperature": "850 degC",
            "pressure": "25 bar",
            "remove": {"C(graphite)": "100 %"},
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
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)", "H2O(l)"]},
}
STATED: dict[str, Any] = {
    "uncertainty": {
        "feed.gas.amounts.CH4": "1 %",
        "feed.gas.amounts.N2": "0.005 mol",
        "feed.gas.temperature": "5 K",
        "feed.gas.pressure": "0.1 bar",
        "feed.steam": "2 %",
        "stage.reformer.temperature": "8 K",
        "stage.reformer.pressure": "1 %",
        "stage.shift.heat": "2 kJ",
        "stage.shift.pressure_drop": "0.1 bar",
        "CO(g).enthalpy": "0.5 kJ/mol",
    },
    "correlation": [
        {"between": ["CO(g).enthalpy", "CO2(g).enthalpy"], "coefficient": 0.7},
        {"between": ["feed.gas.amounts.CH4", "feed.steam"], "coefficient": -0.4},
    ],
}


def both(tables: dict[str, Any], monkeypatch: pytest.MonkeyPatch) -> list[list[ErrorBars]]:
    case = gibbsmin.load_case(tables)
    steps = list(run_train(case, case.library))
    found = []
    for form in (None, as_it_stands):
        monkeypatch.setattr(deviation_form, "after", lambda _, form=form: form)
        found.append(error_bars(case, steps, case.library))
    return found


def assert_alike(expected: list[ErrorBars], found: list[ErrorBars]) -> None:
    assert [each.stage for each in found] == [each.stage for each in expected]
    for ours, theirs in zip(found, expected, strict=True):
        assert set(ours.uncertainties) <= set(theirs.uncertainties)
        np.testing.assert_array_equal(ours.near_onset, theirs.near_onset)
        for name, size in ours.uncertainties.items():
            np.testing.assert_allclose(
                size, theirs.uncertainties[name], rtol=1e-8, atol=1e-12, err_msg=name
            )


@pytest.mark.parametrize("stated", [{}, STATED])
def test_a_train_has_the_same_error_bars_either_way(
    stated: dict[str, Any], monkeypatch: pytest.MonkeyPatch
) -> None:
    expected, found = both(deepcopy(TRAIN) | stated, monkeypatch)
    assert len(found) == 4  # the bypass joins as a step of its own
    assert found[-1].uncertainties["temperature"][0] > 0.0
    assert_alike(expected, found)


def test_real_gases_have_error_bars_by_their_sensitivities(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    tables = deepcopy(TRAIN)
    tables["stage"] = [tables["stage"][0] | {"gas": Equation.PENG_ROBINSON.value}]
    expected, found = both(tables, monkeypatch)
    assert_alike(expected, found)
    assert found[0].uncertainties["temperature"].tolist() == [0.0]
    assert "shaft work" in found[0].uncertainties
