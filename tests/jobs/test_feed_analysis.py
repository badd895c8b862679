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


def test_moist_air_by_its_relative_humidity() -> None:
    changes: dict[str, Any] = {"total": None, "analysis": None, "unit": "mol", "pressure": "1 atm"}
    changes |= {"temperature": "30 degC", "amounts": {"air": 100}}
    air = read(**changes, relative_humidity="60 %").amounts
    # 4.246 kPa of saturation at 30 °C (steam tables, recalled); the library's water is within 1 %
    vapour = 0.6 * 4.246 / 101.325
    assert air["H2O(g)"] == pytest.approx(100.0 * vapour / (1.0 - vapour), rel=0.01)
    assert sum(air.values()) - air["H2O(g)"] == pytest.approx(100.0)
    # the same air by its dew point, 21.4 °C (Magnus formula, recalled)
    by_dew_point = read(**changes, water_dew_point="21.39 degC").amounts["H2O(g)"]
    assert by_dew_point == pytest.approx(air["H2O(g)"], rel=0.01)
    assert read(**changes, relative_humidity=0.0).amounts.get("H2O(g)", 0.0) == 0.0
    # only the gas of a stream takes up water
    wetted = read(**{**changes, "amounts": {"air": 100, "C(graphite)": 50}}, relative_humidity=0.6)
    assert wetted.amounts["H2O(g)"] == pytest.approx(air["H2O(g)"])


def test_humidity_of_the_outside_air_holds_for_air_that_is_heated_and_compressed() -> None:
    changes: dict[str, Any] = {"total": None, "analysis": None, "unit": "mol"}
    changes |= {"amounts": {"air": 100}}
    outside = read(**changes, temperature="30 degC", pressure="1 atm", relative_humidity="60 %")
    heated = read(
        **changes, temperature="350 degC", pressure="3 bar", relative_humidity="60 % at 30 degC"
    )
    assert heated.amounts == pytest.approx(outside.amounts)


def test_air_in_an_analysis_brings_its_parts() -> None:
    stream = read(analysis={"air": "90 %", "CO2": "10 %"})
    assert stream.amounts["O2(g)"] == pytest.approx(90.0 * 0.20948, rel=1e-4)
    assert stream.amounts["CO2(g)"] == pytest.approx(10.0 + 90.0 * 0.0004, rel=0.01)
    assert sum(stream.amounts.values()) == pytest.approx(100.0)


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        (
            {"temperature": "130 degC", "relative_humidity": "80 %"},
            "feed.gas.relative_humidity: found 80 % of saturation at 403.15 K, at which water "
            "alone reaches 2 bar; accepted is a lower one.",
        ),
        (
            {"relative_humidity": "60 % at 20"},
            'feed.gas.relative_humidity: found "20", a number without a unit; accepted is a '
            'temperature such as "850 degC" or "1123 K".',
        ),
        (
            {"relative_humidity": "130 %"},
            'feed.gas.relative_humidity: found "130 %", which is not between 0 and 1; accepted is '
            'a share from 0 to 1, such as 0.8 or "80 %".',
        ),
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
            "2 bar; accepted is a lower one.",
        ),
        (
            {"water_dew_point": "25 degC", "steam_ratio": 0.1},
            "feed.gas.steam_ratio: found steam_ratio beside water_dew_point; accepted is one of "
            "water_dew_point, steam_ratio and relative_humidity.",
        ),
        (
            {"amounts": {"CH4": 1}},
            "feed.gas.analysis: found analysis beside amounts; accepted is one of amounts, "
            "analysis and fuel.",
        ),
        (
            {"total": None},
            "feed.gas.total: found nothing; accepted is an amount or a flow such as "
            '"100 kmol/h", "2 t" or "50 Nm3/h".',
        ),
        (
            {"analysis": None, "amounts": {"CH4": 1}, "unit": "mol"},
            "feed.gas.total: found total with amounts; accepted is total with analysis or fuel.",
        ),
    ],
)
def test_faults_read_as_one_sentence(changes: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        read(**changes)
    assert str(caught.value) == sentence
