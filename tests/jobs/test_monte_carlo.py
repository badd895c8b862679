"""Random draws of a case's numbers, against first-order error bars and against probabilities."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy.stats import norm
from train_cases import TRAIN

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.monte_carlo import QUANTILES
from gibbsmin.present.monte_carlo_view import draw_sentences

REFORMER: dict[str, Any] = {
    "feed": {name: TRAIN["feed"][name] for name in ("gas", "steam")},
    "outlet": {"temperature": "850 degC", "pressure": "25 bar"},
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2"]},
    "uncertainty": {
        "feed.steam": "1 %",
        "feed.gas.amounts.CH4": "0.5 %",
        "feed.gas.temperature": "5 K",
        "outlet.temperature": "3 K",
        "outlet.pressure": "0.2 bar",
    },
    "correlation": [{"between": ["CO.enthalpy", "CO2.enthalpy"], "coefficient": 0.8}],
}
_REFORMING = {"reaction": "CH4 + H2O = CO + 3 H2", "approach": "10 K"}
UNSURE_TRAIN: dict[str, Any] = TRAIN | {
    "stage": [TRAIN["stage"][0] | {"approach": [_REFORMING]}, *TRAIN["stage"][1:]],
    "uncertainty": {
        "feed.gas.amounts.CH4": "0.5 %",
        "feed.quench": "1 %",
        "stage.reformer.temperature": "2 K",
        "stage.shift.heat": "1 kJ",
        "stage.shift.pressure_drop": "0.05 bar",
    },
}
VESSEL: dict[str, Any] = {
    "feed": {
        "charge": {
            "temperature": "25 degC",
            "pressure": "1 bar",
            "unit": "mol",
            "amounts": {"H2": 2.0, "O2": 1.4, "N2": 8.0},
        }
    },
    "outlet": {"heat": "0 kJ", "volume": "270 L"},
    "species": {"consider": ["H2", "O2", "N2", "H2O", "OH", "NO"]},
    "uncertainty": {"feed.charge.amounts.H2": "0.5 %", "outlet.volume": "0.5 L"},
}
BURNER: dict[str, Any] = VESSEL | {
    "outlet": {"heat": "-20 kJ", "pressure": "1 bar"},
    "uncertainty": {"feed.charge.amounts.H2": "0.5 %", "outlet.heat": "2 kJ"},
}


@pytest.mark.parametrize(
    ("tables", "draws"),
    [(REFORMER, 100_000), (BURNER, 100_000), (UNSURE_TRAIN, 4_000), (VESSEL, 2_000)],
    ids=["isothermal", "adiabatic", "train", "vessel"],
)
def test_spread_of_the_draws_is_the_first_order_error_bar(
    tables: dict[str, Any], draws: int
) -> None:
    """Within 3 %, and within four standard errors of a standard deviation of fewer draws."""
    case = gibbsmin.load_case(deepcopy(tables))
    bars, found = gibbsmin.uncertainty(case), gibbsmin.monte_carlo(case, draws)
    allowed = max(0.03, 4.0 / np.sqrt(2.0 * draws))
    compared = 0
    for first_order, spread in zip(bars, found.stages, strict=True):
        assert spread.stage == first_order.stage
        assert spread.solved == draws
        for place, result in enumerate(spread.results):
            size = first_order.uncertainty(result)[0]
            # Anything less is the round-off of a number that is the same in every draw.
            if size > 1e-9 * max(abs(spread.means[place]), 1e-3):
                assert spread.deviations[place] == pytest.approx(size, rel=allowed), result
                compared += 1
    assert compared > 15 * len(bars)


def test_a_phase_is_as_likely_as_its_onset_says() -> None:
    """With temperature alone unsure carbon is there in the draws on its side of the onset."""
    tables = deepcopy(REFORMER)
    del tables["correlation"]
    tables["feed"]["steam"]["amounts"]["H2O"] = 0.87
    tables["outlet"] = {"temperature": "850 degC", "pressure": "25 bar"}
    tables["species"]["consider"].append("C(graphite)")
    records = ["CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "N2(g)", "C(graphite)"]
    exact = {name: {"enthalpy": "0 kJ/mol", "entropy": "0 J/(mol K)"} for name in records}
    tables["uncertainty"] = exact | {"outlet.temperature": "6 K"}
    onset = tables | {
        "onset": {"phase": "C(graphite)"},
        "axis": [
            {"vary": "outlet.temperature", "first": "800 degC", "last": "900 degC", "count": 7}
        ],
    }
    crossing = gibbsmin.onset(gibbsmin.load_case(onset))
    (place,), (forms,) = crossing.shown, crossing.forms
    draws = 20_000
    spread = gibbsmin.monte_carlo(gibbsmin.load_case(tables), draws).stages[0]
    below = norm.cdf((place - 850.0) / 6.0)
    expected = 1.0 - below if forms else below
    assert 0.02 < expected < 0.98
    sampling = np.sqrt(expected * (1.0 - expected) / draws)
    assert spread.phases == ("C(graphite)",)
    assert spread.probabilities[0] == pytest.approx(expected, abs=4.0 * sampling)


def test_the_seed_alone_decides_the_draws() -> None:
    case = gibbsmin.load_case(deepcopy(REFORMER))
    first, again, other = (gibbsmin.monte_carlo(case, 300, seed) for seed in (5, 5, 6))
    np.testing.assert_array_equal(first.stages[0].deviations, again.stages[0].deviations)
    assert np.all(first.stages[0].means[-3:] != other.stages[0].means[-3:])


def test_quantiles_are_those_of_a_normal_number() -> None:
    """A given temperature comes out as it was drawn."""
    spread = gibbsmin.monte_carlo(gibbsmin.load_case(deepcopy(REFORMER)), 100_000).stages[0]
    place = spread.results.index("temperature")
    expected = 1123.15 + 3.0 * norm.ppf(QUANTILES)
    np.testing.assert_allclose(spread.quantiles[:, place], expected, atol=0.06)
    assert spread.means[place] == pytest.approx(1123.15, abs=0.04)


def test_amounts_below_zero_are_cut_off_and_counted() -> None:
    tables = deepcopy(REFORMER)
    tables["uncertainty"] = {"feed.gas.amounts.N2": "50 %"}
    found = gibbsmin.monte_carlo(gibbsmin.load_case(tables), 10_000)
    expected = 10_000 * norm.cdf(-2.0)
    assert found.cut_off == pytest.approx(expected, abs=4.0 * np.sqrt(expected))
    assert found.stages[0].solved == 10_000


@pytest.mark.parametrize("draws", [-5, 99, 200_001])
def test_numbers_of_draws_that_are_refused(draws: int) -> None:
    with pytest.raises(InputError) as error:
        gibbsmin.monte_carlo(gibbsmin.load_case(deepcopy(REFORMER)), draws)
    assert str(error.value) == (
        f"monte-carlo: found {draws} draws; accepted is a number from 100 to 200000."
    )


def test_a_negative_seed_is_refused() -> None:
    with pytest.raises(InputError) as error:
        gibbsmin.monte_carlo(gibbsmin.load_case(deepcopy(REFORMER)), 100, seed=-1)
    assert str(error.value) == "seed: found -1; accepted is a whole number that is not negative."


def test_what_ends_a_prediction_ends_its_error_bars(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    """An unanswered stage is the last one told, and no draw of it counts."""
    monkeypatch.setattr("gibbsmin.reactor.settle._ROUNDS", 1)
    tables = deepcopy(REFORMER)
    stage = tables.pop("outlet") | {"gas": "Peng-Robinson"}
    tables["stage"] = [stage | {"name": "first"}, stage | {"name": "second"}]
    del tables["uncertainty"]["outlet.temperature"], tables["uncertainty"]["outlet.pressure"]
    case = gibbsmin.load_case(tables)
    outlet = gibbsmin.predict(case)
    assert [told.certified for told in outlet.stages] == [False]
    (bars,) = gibbsmin.uncertainty(case)
    assert np.isnan(bars.uncertainty("heat")).all()
    found = gibbsmin.monte_carlo(case, 100)
    (spread,) = found.stages
    assert spread.solved == 0
    assert np.isnan(spread.means).all()
    for ending in (".json", ".csv", ".xlsx"):
        gibbsmin.write_outlet(outlet, tmp_path / f"outlet{ending}", (bars,), found)
    assert draw_sentences(found)[1] == (
        "first: 100 of the draws have no certified answer and are left out."
    )
