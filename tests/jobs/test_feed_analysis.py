"""Streams given by analysis: shares, lumps, mass, and the water of a dry gas."""

from __future__ import annotations

from typing import Any

import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.reactor.streams import Stream

GOOD: dict[str, Any] = {
    "temperature": "300 K",
    "pressure": "2 bar",
    "total": "100 mol",
    "analysis": {"CH4": "90 %", "N2": "8 %", "CO2": 0.02},
}


def read(**changes: Any) -> Stream:
    feed = {key: value for key, value in {**GOOD, **changes}.items() if value is not None}
    tables = {"feed": {"gas": feed}, "outlet": {"temperature": "900 K", "pressure": "1 bar"}}
    return gibbsmin.load_case(tables).feeds[0]


def test_shares_of_a_total() -> None:
    stream = read()
    assert stream.amounts == pytest.approx({"CH4(g)": 90.0, "N2(g)": 8.0, "CO2(g)": 2.0})
    assert stream.remarks == ()
    assert read(total="3.6 kmol/h").amounts["CH4(g)"] == pytest.approx(0.9)


def test_shares_by_mass() -> None:
    stream = read(total="1 kg", basis="mass", analysis={"CH4": "50 %", "N2": "50 %"})
    # 500 g of each; molar masses 16.043 and 28.014 g/mol
    expected = {"CH4(g)": 500 / 16.043, "N2(g)": 500 / 28.014}
    assert stream.amounts == pytest.approx(expected, rel=1e-4)


def test_an_analysis_that_nearly_adds_up_is_scaled_and_said_so() -> None:
    stream = read(analysis={"CH4": "90 %", "N2": "9.8 %"})
    assert sum(stream.amounts.values()) == pytest.approx(100.0)
    assert stream.remarks == ("The analysis of gas adds up to 99.8 % and is scaled to 100 %.",)
    case = gibbsmin.load_case(
        {
            "feed": {"gas": {**GOOD, "analysis": {"CH4": "90 %", "N2": "9.8 %"}}},
            "outlet": {"temperature": "900 K", "pressure": "1 bar"},
        }
    )
    assert gibbsmin.predict(case).final.notes == stream.remarks


def test_lumps_are_split_as_stated() -> None:
    stream = read(
        analysis={"N2": "78 %", "O2+Ar": "22 %"}, lumps={"O2+Ar": {"O2": 0.96, "Ar": 0.04}}
    )
    assert stream.amounts == pytest.approx({"N2(g)": 78.0, "O2(g)": 21.12, "Ar(g)": 0.88})


def test_water_comes_on_top_of_the_dry_gas() -> None:
    assert read(steam_ratio=0.4).amounts["H2O(g)"] == pytest.approx(40.0)
    water = read(water_dew_point="60 degC").amounts["H2O(g)"]
    # vapour pressure of water at 60 °C, 0.1995 bar (steam tables, recalled); the liquid's fit and
    # the ideal gas are within 1 % of it
    assert water / (100.0 + water) == pytest.approx(0.1995 / 2.0, rel=0.01)


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        (
            {"analysis": {"CH4": "90 %", "N2": "3.2 %"}},
            "feed.gas.analysis: found an analysis that adds up to 93.2 %; accepted is 99.5 to "
            "100.5 %.",
        ),
        (
            {"lumps": {"C2+": {"C2H6": 1.0}}},
            "feed.gas.lumps.C2+: found a lump that the analysis does not name; accepted is one of "
            "CH4, N2, CO2.",
        ),
        (
            {"analysis": {"C2+": 1.0}, "lumps": {"C2+": {"C2H6": 0.7, "C3H8": 0.2}}},
            "feed.gas.lumps.C2+: found shares that add up to 0.9; accepted are shares that add up "
            "to 1.",
        ),
        (
            {"water_dew_point": "125 degC"},
            "feed.gas.water_dew_point: found a dew point of 398.15 K, at which water alone reaches "
            "the stream's 2 bar; accepted is a lower one.",
        ),
        (
            {"water_dew_point": "25 degC", "steam_ratio": 0.1},
            "feed.gas.steam_ratio: found steam_ratio beside water_dew_point; accepted is one of "
            "the two.",
        ),
        (
            {"amounts": {"CH4": 1}},
            "feed.gas.analysis: found analysis beside amounts; accepted is one of the two.",
        ),
        (
            {"total": None},
            "feed.gas.total: found nothing; accepted is an amount or a flow such as "
            '"100 kmol/h", "2 t" or "50 Nm3/h".',
        ),
        (
            {"analysis": None, "amounts": {"CH4": 1}, "unit": "mol"},
            "feed.gas.total: found total without an analysis; accepted is an analysis with it, or "
            "amounts alone.",
        ),
    ],
)
def test_faults_read_as_one_sentence(changes: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        read(**changes)
    assert str(caught.value) == sentence
