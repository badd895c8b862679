"""Error bars of whole trains, against the train solved anew; what a case may state of them."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pytest
from train_cases import TRAIN

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.sensitivity import Sensitivities
from gibbsmin.results import Outlet


def tables(**top: Any) -> dict[str, Any]:
    return deepcopy(TRAIN) | top


def bars(case: dict[str, Any]) -> tuple[Sensitivities, ...]:
    return gibbsmin.uncertainty(gibbsmin.load_case(case))


def change(found: Sensitivities, result: str, name: str) -> float:
    inputs = [each.name for each in found.inputs]
    return float(found.matrix[0, found.results.index(result), inputs.index(name)])


def put(case: dict[str, Any], place: tuple[Any, ...], value: Any) -> dict[str, Any]:
    case = deepcopy(case)
    table = case
    for key in place[:-1]:
        table = table[key]
    table[place[-1]] = value
    return case


# input, where it stands, its unit, its value in that unit, and one step of it in that unit
INPUTS = {
    "feed.gas.temperature": (("feed", "gas", "temperature"), "degC", 520.0, 10.0),
    "feed.quench.amounts.H2O(l)": (("feed", "quench", "amounts", "H2O(l)"), "", 0.4, 0.004),
    "feed.steam": (("feed", "steam", "amounts", "H2O"), "", 3.0, 0.03),
    "stage.reformer.temperature": (("stage", 0, "temperature"), "degC", 850.0, 10.0),
    "stage.reformer.pressure": (("stage", 0, "pressure"), "bar", 25.0, 1.0),
    "stage.shift.heat": (("stage", 1, "heat"), "kJ", -60.0, 1.0),
    "stage.shift.pressure_drop": (("stage", 1, "pressure_drop"), "bar", 0.5, 0.1),
    "stage.nozzle.pressure": (("stage", 2, "pressure"), "bar", 5.0, 1.0),
}


def results_of(outlet: Outlet, stage: int) -> dict[str, float]:
    found = outlet.stages[stage]
    values = {
        "temperature": found.temperature,
        "pressure": found.pressure,
        "heat": found.heat,
        "shaft work": found.shaft_work,
        "entropy generation": found.entropy.value,
        "lost work": found.entropy.lost_work,
    }
    for record, n, y, dry in zip(
        found.records, found.amounts, found.mole_fractions, found.dry_mole_fractions, strict=True
    ):
        values[f"amount {record.name}"] = float(n)
        values[f"fraction {record.name}"] = float(y)
        values[f"dry fraction {record.name}"] = float(dry)
    return values | {f"conversion {name}": share for name, share in found.conversion.items()}


@pytest.mark.parametrize("name", INPUTS)
def test_a_step_changes_every_stage_as_it_does_when_solved_anew(name: str) -> None:
    place, unit, value, step = INPUTS[name]
    found = bars(tables())

    def solved(factor: float) -> list[dict[str, float]]:
        given = value + factor * step
        moved = put(tables(), place, f"{given!r} {unit}" if unit else given)
        outlet = gibbsmin.predict(gibbsmin.load_case(moved))
        return [results_of(outlet, k) for k in range(len(found))]

    h = 2e-3
    here, far, near = solved(0.0), [solved(2 * h), solved(-2 * h)], [solved(h), solved(-h)]
    compared = 0
    for k, stage in enumerate(found):
        for result in here[k]:
            if result not in stage.results or np.isnan(here[k][result]):
                continue
            central = (
                8 * (near[0][k][result] - near[1][k][result])
                - (far[0][k][result] - far[1][k][result])
            ) / (12 * h)
            # Round-off of the difference: 1e-13 of the value (of RT per mole for heats) over h.
            floor = 1e-9 * max(abs(here[k][result]), 1.0)
            if result in ("heat", "shaft work", "lost work"):
                floor = 1e-9 * 1e5
            assert change(stage, result, name) == pytest.approx(central, rel=1e-6, abs=floor)
            compared += 1
    assert compared > 80


def test_a_bypass_has_an_entry_for_the_reaction_and_one_for_the_joined_streams() -> None:
    names = [found.stage for found in bars(tables())]
    assert names == ["reformer", "shift", "shift, bypass joined", "nozzle"]


def test_one_stated_uncertainty_makes_all_of_the_variance_where_records_are_exact() -> None:
    (found, *_) = bars(tables(uncertainty={"stage.reformer.temperature": "5 K"}))
    inputs = [each.name for each in found.inputs]
    assert found.uncertainty("temperature")[0] == pytest.approx(5.0, rel=1e-12)
    row = found.results.index("temperature")
    shares = found.contributions[0, row] / found.contributions[0, row].sum()
    assert shares[inputs.index("stage.reformer.temperature")] == pytest.approx(1.0, abs=1e-12)


def test_shares_and_units_say_the_same() -> None:
    by_share = {
        "feed.steam.amounts.H2O": "2 %",
        "stage.reformer.pressure": "1 %",
        "stage.shift.heat": "5 %",
        "feed.gas.pressure": "1 %",
    }
    in_units = {
        "feed.steam.amounts.H2O": "0.06 mol",
        "stage.reformer.pressure": "0.25 bar",
        "stage.shift.heat": "3 kJ",
        "feed.gas.pressure": "0.29 bar",
    }
    for one, other in zip(
        bars(tables(uncertainty=by_share)), bars(tables(uncertainty=in_units)), strict=True
    ):
        assert one.uncertainties == pytest.approx(other.uncertainties, rel=1e-9, nan_ok=True)


def test_tables_may_nest_as_the_file_format_has_it() -> None:
    nested = {"stage": {"reformer": {"temperature": "5 K"}}, "CO(g)": {"enthalpy": "2 kJ/mol"}}
    flat = {"stage.reformer.temperature": "5 K", "CO(g).enthalpy": "2 kJ/mol"}
    one, other = bars(tables(uncertainty=nested)), bars(tables(uncertainty=flat))
    assert one[0].uncertainties == pytest.approx(other[0].uncertainties, nan_ok=True)


def test_fully_correlated_amounts_are_a_whole_stream() -> None:
    """CH4 and N2 of the gas each unsure by 1 % and fully correlated: the whole stream by 1 %."""
    each = {"feed.gas.amounts.CH4": "1 %", "feed.gas.amounts.N2": "1 %"}
    together = [
        {"between": ["feed.gas.amounts.CH4", "feed.gas.amounts.N2"], "coefficient": 1.0},
    ]
    exact = {
        f"{name}.{kind}": f"0 {unit}"
        for name in ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "N2(g)", "H2O(l)")
        for kind, unit in (("enthalpy", "kJ/mol"), ("entropy", "J/(mol K)"))
    }
    one = bars(tables(uncertainty=exact | each, correlation=together))
    other = bars(tables(uncertainty=exact | {"feed.gas": "1 %"}))
    for a, b in zip(one, other, strict=True):
        assert a.uncertainties == pytest.approx(b.uncertainties, rel=1e-6, abs=1e-12, nan_ok=True)
    apart = bars(tables(uncertainty=exact | each))
    row = apart[0].results.index("heat")
    assert abs(apart[0].uncertainties[0, row] / one[0].uncertainties[0, row] - 1.0) > 1e-5


def test_a_phase_near_its_onset_is_named() -> None:
    case: dict[str, Any] = {
        "feed": {
            "gas": {
                "temperature": "900 K",
                "pressure": "1 bar",
                "unit": "mol",
                "amounts": {"CO": 1.0, "CO2": 0.05, "N2": 1.0},
            }
        },
        "outlet": {"temperature": "1050 K", "pressure": "1 bar"},
        "species": {"consider": ["CO", "CO2", "N2", "C(graphite)"]},
        "uncertainty": {"outlet.temperature": "10 K"},
    }
    (near,) = bars(case)
    assert near.phases == ("C(graphite)",)
    amount = near.phase_amounts[0, 0]
    assert amount > 0.0
    assert near.near_onset[0, 0] == (amount < 2.0 * near.uncertainty("amount C(graphite)")[0])
    cold = put(case, ("outlet", "temperature"), "900 K")
    assert not bars(cold)[0].near_onset.any()
    onset = put(case, ("outlet", "temperature"), "1200 K")
    (absent,) = bars(put(onset, ("uncertainty", "outlet.temperature"), "200 K"))
    assert absent.phase_amounts[0, 0] == 0.0
    assert absent.near_onset[0, 0]


def test_a_state_without_derivatives_has_no_error_bars() -> None:
    case: dict[str, Any] = {
        "feed": {
            "lime": {
                "temperature": "900 K",
                "pressure": "1 bar",
                "unit": "mol",
                "amounts": {"CaO(cr)": 1.0, "Al2O3(alpha)": 1.0},
            }
        },
        "outlet": {"temperature": "1050 K", "pressure": "1 bar"},
        "species": {"consider": ["CaO(cr)", "Al2O3(alpha)", "CaAl2O4(cr)"]},
    }
    (found,) = bars(case)
    assert np.isnan(found.uncertainty("heat")).all()


NUMBERS = "feed.gas, feed.steam, feed.quench, stage.reformer, stage.shift, stage.nozzle"
ACCEPTED = (
    f"accepted is a number of {NUMBERS}, or of a record, such as "
    '"feed.gas.temperature" or "CO(g).enthalpy"'
)


@pytest.mark.parametrize(
    ("stated", "sentence"),
    [
        (
            {"stage.reformer.heat": "1 kJ"},
            'uncertainty.stage.reformer.heat: found "stage.reformer.heat", which names no number '
            f"that the case gives; {ACCEPTED}",
        ),
        (
            {"outlet.temperature": "3 K"},
            'uncertainty.outlet.temperature: found "outlet.temperature", which names no number '
            f"that the case gives; {ACCEPTED}",
        ),
        (
            {"feed.gas": "1 bar"},
            'uncertainty.feed.gas: found "1 bar", which is no share; accepted is a share from 0 '
            'to 1, such as 0.8 or "80 %"',
        ),
        (
            {"stage.reformer.temperature": "1 %"},
            'uncertainty.stage.reformer.temperature: found "1 %", which does not read as a number '
            'and a unit; accepted is a temperature difference such as "10 K"',
        ),
        (
            {"CO(g).enthalpy": "-1 kJ/mol"},
            'uncertainty.CO(g).enthalpy: found "-1 kJ/mol", which is negative; accepted is 0 or '
            "more",
        ),
        (
            {"CO(g).entropy": "1 kJ/mol"},
            'uncertainty.CO(g).entropy: found "1 kJ/mol", which is no entropy of one mole; '
            'accepted is an entropy of one mole such as "0.5 J/(mol K)"',
        ),
        (
            "5 K",
            'uncertainty: found "5 K"; accepted is a table such as '
            '{ "outlet.temperature" = "3 K", "feed.gas" = "1 %" }',
        ),
    ],
)
def test_what_is_no_uncertainty_is_refused(stated: Any, sentence: str) -> None:
    with pytest.raises(InputError) as error:
        gibbsmin.load_case(tables(uncertainty=stated))
    assert str(error.value) == f"{sentence}."


def correlation(first: Any, second: Any, coefficient: Any = 0.5) -> list[dict[str, Any]]:
    return [{"between": [first, second], "coefficient": coefficient}]


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        (
            correlation("CO(g).enthalpy", "CO(g).enthalpy"),
            "correlation.1.between: found a list; accepted are two different numbers, such as "
            '["CO(g).enthalpy", "CO2(g).enthalpy"]',
        ),
        (
            correlation("CO(g).enthalpy", "CO2(g).enthalpy", 1.5),
            "correlation.1.coefficient: found 1.5; accepted is a number from -1 to 1",
        ),
        (
            correlation("CO(g).enthalpy", "stage.reformer.volume"),
            'correlation.1.between: found "stage.reformer.volume", which names no number that '
            f"the case gives; {ACCEPTED}",
        ),
    ],
)
def test_what_is_no_correlation_is_refused(given: Any, sentence: str) -> None:
    with pytest.raises(InputError) as error:
        gibbsmin.load_case(tables(correlation=given))
    assert str(error.value) == f"{sentence}."


def test_correlations_that_contradict_each_other_are_refused() -> None:
    names = ["CO(g).enthalpy", "CO2(g).enthalpy", "H2O(g).enthalpy"]
    given = [
        *correlation(names[0], names[1], 0.9),
        *correlation(names[1], names[2], 0.9),
        *correlation(names[0], names[2], -0.9),
    ]
    with pytest.raises(InputError) as error:
        bars(tables(correlation=given))
    assert str(error.value) == (
        "correlation: found correlations that contradict each other (smallest eigenvalue -0.8); "
        "accepted is a matrix that is positive semidefinite."
    )


def test_a_correlation_of_a_record_that_takes_no_part_is_refused() -> None:
    with pytest.raises(InputError) as error:
        bars(tables(correlation=correlation("CO(g).enthalpy", "SO2(g).enthalpy")))
    assert str(error.value) == (
        'correlation: found "SO2(g).enthalpy", which takes no part in the case; accepted is a '
        "number that its results rest on."
    )
