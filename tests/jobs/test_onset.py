"""Onsets against direct solutions of equilibrium constants, and against saturation."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pytest
from scipy.optimize import brentq, fsolve

import gibbsmin
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.errors import InputError
from gibbsmin.jobs.crossings import find_crossings
from gibbsmin.jobs.onset import Onset
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

STEAM = {"temperature": "500 degC", "pressure": "1 bar", "unit": "mol", "amounts": {"H2O": 1.1}}
CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "500 degC",
            "pressure": "1 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0},
        },
        "steam": STEAM,
    },
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]},
    "outlet": {"temperature": "900 K", "pressure": "1 bar"},
    "onset": {"phase": "C(graphite)"},
}
IN_T = {"vary": "outlet.temperature", "first": "600 K", "last": "1400 K", "count": 41}
RATIO = {"ratio": "H2O/CH4", "scale": "steam", "first": 0.3, "last": 4.0, "count": 21}


def case(*axes: dict[str, Any], steam: float = 1.1, **top: Any) -> dict[str, Any]:
    tables = deepcopy(CASE) | {"axis": list(axes)} | top
    tables["feed"]["steam"]["amounts"]["H2O"] = steam
    return tables


def onset(tables: dict[str, Any]) -> Onset:
    return gibbsmin.onset(gibbsmin.load_case(tables))


def carbon_activity(T: float, steam: float, pressure: float = 1e5) -> float:
    """ln a(C) of the gas of CH4 + steam H2O by its two equilibrium constants, without gibbsmin's
    minimiser: extents of CH4 + H2O = CO + 3 H2 and CO + H2O = CO2 + H2, then 2 CO = C + CO2."""
    library = load_library()
    table = PropertyTable.of(
        [library[f"{name}(g)"] for name in ("CH4", "H2O", "CO", "CO2", "H2")]
        + [library["C(graphite)"]]
    )
    CH4, H2O, CO, CO2, H2, C = table.gibbs_energy(T) / (GAS_CONSTANT * T)
    C += table.records[5].molar_volume * (pressure - STANDARD_PRESSURE) / (GAS_CONSTANT * T)
    reform, shift, boudouard = CH4 + H2O - CO - 3 * H2, CO + H2O - CO2 - H2, 2 * CO - C - CO2
    log_P = np.log(pressure / STANDARD_PRESSURE)

    def fractions(u: Any) -> Any:
        """Amounts positive by construction: conversion and share of CO2 as logistic of u."""
        x, z = 1 / (1 + np.exp(-u[0])), 1 / (1 + np.exp(-u[1]))
        first = x * min(1.0, steam)
        second = z * min(first, steam - first)
        n = np.array(
            [1 - first, steam - first - second, first - second, second, 3 * first + second]
        )
        return n / n.sum()

    def residual(u: Any) -> Any:
        y = np.log(fractions(u))
        return [
            y[2] + 3 * y[4] - y[0] - y[1] + 2 * log_P - reform,
            y[3] + y[4] - y[2] - y[1] - shift,
        ]

    best = None
    for start in ((-1.0, -1.0), (-3.0, 1.0), (1.0, -1.0), (2.0, -3.0), (-4.0, 3.0), (4.0, -6.0)):
        u, _, flag, _ = fsolve(residual, start, full_output=True, xtol=1e-13)
        if flag == 1 and np.abs(residual(u)).max() < 1e-10:
            best = u
            break
    assert best is not None, "the independent solution must converge"
    y = np.log(fractions(best))
    return float(2 * y[2] - y[3] + log_P + boudouard)


def test_carbon_onsets_in_temperature_agree_with_two_equilibrium_constants() -> None:
    found = onset(case(IN_T))
    low = brentq(lambda T: carbon_activity(T, 1.1), 680.0, 760.0, xtol=1e-9)
    high = brentq(lambda T: carbon_activity(T, 1.1), 980.0, 1050.0, xtol=1e-9)
    assert found.shown == pytest.approx([low, high], abs=0.01)
    assert found.forms.tolist() == [True, False]
    assert found.certified.all()
    assert not found.there[0]
    assert found.temperature == pytest.approx(found.position)
    assert found.completeness[0].text == (
        "Complete to the grid used: 41 values of outlet.temperature."
    )


def test_a_coarse_grid_finds_what_the_driving_force_turns_between() -> None:
    """A window of carbon 12 K wide lies between grid points 200 K apart."""
    steam = 1.4186  # just below the largest ratio at which carbon forms near 873 K
    fine = onset(case(IN_T | {"count": 401}, steam=steam))
    coarse = onset(case(IN_T | {"count": 5}, steam=steam))
    assert fine.shown.size == 2
    assert coarse.shown == pytest.approx(fine.shown, abs=1e-3)
    ends_alone = onset(case(IN_T | {"count": 2}, steam=steam))
    assert ends_alone.shown == pytest.approx(fine.shown, abs=1e-3)
    assert ends_alone.certified.all()


def test_a_window_in_the_outermost_interval_is_found() -> None:
    """The driving force falls from grid point to grid point, and yet carbon forms before the
    second."""
    axis = IN_T | {"first": "790 K", "last": "1400 K", "count": 3}
    found = onset(case(axis, steam=1.4186))
    assert found.forms.tolist() == [True, False]
    assert found.certified.all()
    assert found.driving_force[0, 0] < 0.0 < found.driving_force[1, 0]


def test_a_feed_ratio_is_proved_complete_and_agrees_with_the_constants() -> None:
    found = onset(case(RATIO))
    expected = brentq(lambda r: carbon_activity(900.0, r), 1.05, 3.0, xtol=1e-10)
    assert found.shown == pytest.approx([expected], abs=1e-5)
    assert found.there[0]
    assert not found.forms[0]
    assert found.completeness[0].proved
    assert found.completeness[0].intervals > 10
    assert found.completeness[0].text == (
        "Proved: no other crossing between the ends of the axis, but for 0.001 % of it about each."
    )


def test_a_second_axis_gives_the_boundary_curve_point_by_point() -> None:
    second = {"vary": "outlet.temperature", "values": ["850 K", "950 K", "1050 K"]}
    curve = onset(case(RATIO, second))
    assert curve.row.tolist() == [0, 1, 2]
    for row, T in enumerate(("850 K", "950 K", "1050 K")):
        outlet = {"temperature": T, "pressure": "1 bar"}
        single = onset(case(RATIO, outlet=outlet))
        assert curve.shown[row] == pytest.approx(single.shown[0], rel=1e-10)


def test_along_pressure_carbon_comes_and_goes() -> None:
    axis = {
        "vary": "outlet.pressure",
        "first": "0.1 bar",
        "last": "10 bar",
        "count": 41,
        "spacing": "logarithmic",
    }
    found = onset(case(axis, steam=1.4))
    assert found.forms.tolist() == [True, False]
    assert found.certified.all()
    for pressure in found.position:
        assert carbon_activity(900.0, 1.4, pressure) == pytest.approx(0.0, abs=1e-8)


def test_both_sides_are_certified_over_many_decades_of_an_axis() -> None:
    """A side a millionth of the whole axis away would lie below vacuum."""
    axis = {"vary": "outlet.pressure", "first": "1e-4 bar", "last": "1000 bar", "count": 15}
    outlet = {"temperature": "700 K", "pressure": "1 bar"}
    found = onset(case(axis | {"spacing": "logarithmic"}, steam=1.2, outlet=outlet))
    assert found.forms.tolist() == [True, False]
    assert found.position[0] < 30.0
    assert found.certified.all()
    for pressure in found.position:
        assert carbon_activity(700.0, 1.2, pressure) == pytest.approx(0.0, abs=1e-8)


def test_every_row_of_a_boundary_is_proved() -> None:
    """Short intervals close to a crossing are the hard ones."""
    second = {"vary": "outlet.temperature", "first": "800 K", "last": "1200 K", "count": 9}
    curve = onset(case(RATIO, second))
    assert curve.row.tolist() == list(range(9))
    assert all(each.proved for each in curve.completeness)


def test_nothing_is_proved_of_a_real_gas_whose_energies_move_with_the_feed() -> None:
    outlet = CASE["outlet"] | {"gas": "Peng-Robinson"}
    (statement,) = onset(case(RATIO, outlet=outlet)).completeness
    assert not statement.proved
    assert statement.text == "Complete to the grid used: 21 values of H2O/CH4."


def test_what_cannot_be_proved_is_said() -> None:
    """Without steam there is no oxygen at the axis's end, and no potential of it to go by."""
    (statement,) = onset(case(RATIO | {"first": 0.0})).completeness
    assert not statement.proved
    assert statement.text.startswith("Not proved between 0 and ")
    assert statement.text.endswith("; complete to the grid used: 21 values.")


def test_water_drops_out_at_its_saturation() -> None:
    """Air with 10 % steam at 5 bar: water forms at p(H2O) = 0.5 bar, on cooling."""
    tables = {
        "feed": {
            "gas": {
                "temperature": "150 degC",
                "pressure": "5 bar",
                "unit": "mol",
                "amounts": {"N2": 0.9, "H2O": 0.1},
            }
        },
        "species": {"consider": ["N2", "H2O", "H2O(l)"]},
        "outlet": {"temperature": "100 degC", "pressure": "5 bar"},
        "onset": {"phase": "H2O(l)"},
        "axis": [
            {"vary": "outlet.temperature", "first": "20 degC", "last": "150 degC", "count": 14}
        ],
    }
    found = onset(tables)
    library = load_library()
    table = PropertyTable.of([library["H2O(g)"], library["H2O(l)"]])

    def excess(T: float) -> float:
        gas, liquid = table.gibbs_energy(T)
        liquid += table.records[1].molar_volume * (5e5 - STANDARD_PRESSURE)
        return float((liquid - gas) / (GAS_CONSTANT * T) - np.log(0.5e5 / STANDARD_PRESSURE))

    assert found.shown == pytest.approx([brentq(excess, 300.0, 400.0) - 273.15], abs=1e-6)
    assert not found.forms[0]
    assert found.there[0]


def test_an_adiabatic_stage_of_a_train_is_searched_as_well() -> None:
    tables = case({"ratio": "O2/CH4", "scale": "oxygen", "first": 0.05, "last": 0.9, "count": 18})
    del tables["outlet"]
    tables["feed"]["oxygen"] = {**STEAM, "amounts": {"O2": 0.5}}
    tables["stage"] = [
        {"name": "mixer", "heat": "0 kJ", "pressure": "1 bar", "reactions": "none"},
        {"name": "burner", "heat": "0 kJ", "pressure": "1 bar"},
    ]
    tables["onset"] = {"phase": "C(graphite)", "stage": "burner"}
    tables["species"]["consider"].append("O2")
    found = onset(tables)
    assert found.shown.size >= 1
    assert found.certified.all()
    assert found.completeness[0].text.startswith("Complete to the grid used")


def test_carbon_comes_and_goes_with_oxygen_as_the_stage_heats_itself() -> None:
    """Cold, methane is stable; hot, oxygen and steam take up the carbon.  Enough steam keeps it
    away.  Every crossing lies on the boundary in temperature of its own feed."""
    oxygen = {"ratio": "O2/CH4", "scale": "oxygen", "first": 0.01, "last": 0.9, "count": 30}
    steam = {"vary": "feed.steam.amounts.H2O", "values": ["0.9 mol", "1.1 mol", "1.25 mol"]}
    tables = case(oxygen, steam)
    tables["feed"]["oxygen"] = {**STEAM, "amounts": {"O2": 0.5}}
    for stream in tables["feed"].values():
        stream["temperature"] = "650 K"
    tables["species"]["consider"].append("O2")
    tables["outlet"] = {"heat": "0 kJ", "pressure": "1 bar"}
    found = onset(tables)
    assert found.row.tolist() == [0, 0, 1, 1]
    assert found.forms.tolist() == [True, False, True, False]
    assert found.certified.all()
    assert not found.there.any()
    for ratio, row, T in zip(found.shown, found.row, found.temperature, strict=True):
        still = deepcopy(tables)
        still["feed"]["oxygen"]["amounts"]["O2"] = ratio
        still["feed"]["steam"]["amounts"]["H2O"] = steam["values"][row]
        still["outlet"] = {"temperature": "900 K", "pressure": "1 bar"}
        still["axis"] = [IN_T | {"first": f"{T - 20} K", "last": f"{T + 20} K", "count": 5}]
        assert onset(still).shown == pytest.approx([T], abs=1e-6)


def test_crossings_of_a_known_function_are_all_found() -> None:
    """sin over three rows of different phase: every zero, and pairs between grid points."""

    def function(x: Any, row: Any) -> Any:
        return np.sin(x) - np.array([0.0, 0.5, 0.995])[row]

    found = find_crossings(function, np.linspace(0.5, 9.0, 12), 3)
    exact = []
    for level in (0.0, 0.5, 0.995):
        base = np.arcsin(level)
        zeros = [base + 2 * np.pi * k for k in range(3)]
        zeros += [np.pi - base + 2 * np.pi * k for k in range(3)]
        exact.append(sorted(z for z in zeros if 0.5 < z < 9.0))
    for row in range(3):
        assert found.position[found.row == row] == pytest.approx(exact[row], abs=1e-12)


def test_a_change_of_sign_that_cannot_be_closed_in_on_is_told() -> None:
    def function(x: Any, row: Any) -> Any:
        return np.where(np.abs(x - 3.0) < 0.1 * row, np.nan, x - 3.0)

    found = find_crossings(function, np.linspace(0.0, 7.0, 8)[[0, 2, 4, 7]], 2)
    assert found.row.tolist() == [0]
    assert found.lost_row.tolist() == [1]
    assert found.lost[:, 0] == pytest.approx([2.9, 3.1], abs=1e-9)
    assert not found.unsolved.any()


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            {"onset": {"phase": "CO"}},
            'onset.phase: found "CO(g)", which is a gas; accepted is a solid or liquid, such as '
            '"C(graphite)" or "H2O(l)".',
        ),
        (
            {"onset": {"phase": "S(l)"}},
            'onset.phase: found "S(l)", which is no candidate of outlet; accepted is a record to '
            "consider, made of the feed's elements.",
        ),
        (
            {"onset": {"phase": "C(graphite)", "stage": "shift"}},
            'onset.stage: found "shift", which is no stage; accepted is one of outlet.',
        ),
        (
            {"axis": []},
            "axis: found no axis; accepted is one [[axis]] to search along, and perhaps a second "
            "for a curve.",
        ),
        (
            {"axis": [{"vary": "outlet.temperature", "values": ["900 K"]}]},
            "axis.1: found a single value to search along; accepted is an axis with first, last "
            "and count.",
        ),
        (
            {"axis": [{"vary": "outlet.colour", "first": 1, "last": 2, "count": 3}]},
            'axis.1.vary: found "outlet.colour", which names no number of the case; accepted is '
            "one of outlet.temperature, outlet.pressure, outlet.boundary_temperature, "
            "outlet.bypass.",
        ),
    ],
)
def test_what_cannot_be_searched_is_refused(change: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as error:
        onset(case(IN_T) | change)
    assert str(error.value) == sentence


def test_a_case_without_the_table_is_refused() -> None:
    tables = case(IN_T)
    del tables["onset"]
    with pytest.raises(InputError) as error:
        onset(tables)
    assert str(error.value) == (
        "onset: found no [onset] table; accepted is one, such as [onset] with phase = "
        '"C(graphite)".'
    )


def test_an_onset_is_as_unsure_as_the_numbers_it_rests_on() -> None:
    """The crossing moved by one standard uncertainty of a number, solved anew."""
    stated = {"feed.steam": "1 %", "CO(g).enthalpy": "0.5 kJ/mol"}
    exact = {
        f"{name}.{kind}": f"0 {unit}"
        for name in ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")
        for kind, unit in (("enthalpy", "kJ/mol"), ("entropy", "J/(mol K)"))
    }
    stated |= {"outlet.temperature": "30 K"}  # what is looked for: of no account
    tables = case(IN_T) | {"uncertainty": exact | stated}
    loaded = gibbsmin.load_case(tables)
    found = gibbsmin.onset(loaded)
    size = gibbsmin.onset_uncertainty(loaded, found)
    assert size.shape == (2,)

    def moved_by_steam(share: float) -> np.ndarray:
        return onset(case(IN_T, steam=1.1 * (1.0 + share))).position

    by_steam = 0.01 * (moved_by_steam(1e-3) - moved_by_steam(-1e-3)) / 2e-3
    only_steam = gibbsmin.load_case(tables | {"uncertainty": exact | {"feed.steam": "1 %"}})
    alone = gibbsmin.onset_uncertainty(only_steam, gibbsmin.onset(only_steam))
    assert alone == pytest.approx(np.abs(by_steam), rel=1e-3)
    assert np.all(size > alone)


def test_an_axis_without_a_crossing_has_no_uncertainty() -> None:
    loaded = gibbsmin.load_case(case(IN_T, steam=9.0))
    assert gibbsmin.onset_uncertainty(loaded, gibbsmin.onset(loaded)).size == 0
