"""What is said of many states at once."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import gibbsmin
from gibbsmin.jobs.conditions import conditions_of
from gibbsmin.jobs.scan_remarks import scan_remarks

AMMONIA: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "400 degC",
            "pressure": "300 bar",
            "unit": "mol",
            "amounts": {"H2": 3.0, "N2": 1.0},
        }
    },
    "outlet": {"temperature": "450 degC", "pressure": "150 bar"},
    "species": {"consider": ["H2", "N2", "NH3"]},
    "axis": [{"vary": "outlet.pressure", "values": ["1 bar", "200 bar", "10 bar"]}],
}


def remarks(**top: Any) -> tuple[str, ...]:
    case = gibbsmin.load_case(deepcopy(AMMONIA) | top)
    return scan_remarks(case, conditions_of(case))


def test_an_ideal_gas_is_told_of_in_the_state_where_it_misleads_most() -> None:
    (told,) = remarks()
    assert told.startswith("The gas is taken as ideal; an equation of state would move ")
    assert told.endswith(' at 723.15 K and 200 bar: set gas = "Soave-Redlich-Kwong".')


def test_nothing_is_said_at_low_pressure_or_of_a_real_gas() -> None:
    assert remarks(axis=[{"vary": "outlet.pressure", "values": ["1 bar", "2 bar"]}]) == ()
    assert remarks(outlet=AMMONIA["outlet"] | {"gas": "Peng-Robinson"}) == ()


def test_states_that_are_refused_or_unsolved_do_not_hide_the_others() -> None:
    drops = {"vary": "outlet.pressure_drop", "values": ["1 bar", "310 bar", "290 bar"]}
    drop = {"temperature": "450 degC", "pressure_drop": "1 bar"}
    (told,) = remarks(outlet=drop, axis=[drops])
    assert told.endswith(' at 723.15 K and 299 bar: set gas = "Soave-Redlich-Kwong".')
    heats = {"vary": "outlet.heat", "values": ["-5000 kJ", "0 kJ"]}
    (told,) = remarks(outlet={"heat": "0 kJ", "pressure": "250 bar"}, axis=[heats])
    assert told.endswith(' and 250 bar: set gas = "Soave-Redlich-Kwong".')


def test_states_of_different_equations_are_looked_at_apart() -> None:
    """A held share of the wet gas shapes the balance, so that no batch holds two of them."""
    gas = AMMONIA["feed"]["gas"] | {"amounts": {"H2": 3.0, "CO": 1.0, "CO2": 1.0, "H2O": 1.0}}
    held = {"vary": "outlet.held_fraction.CH3OH", "values": ["1 %", "5 %"]}
    outlet = {
        "temperature": "250 degC",
        "pressure": "150 bar",
        "held_fraction": {"CH3OH": "5 % wet"},
    }
    species = {"consider": ["H2", "CO", "CO2", "H2O", "CH3OH"]}
    (told,) = remarks(feed={"gas": gas}, outlet=outlet, axis=[held], species=species)
    assert told.endswith(' at 523.15 K and 150 bar: set gas = "Soave-Redlich-Kwong".')
