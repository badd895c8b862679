"""Services at work: what they leave aside is not missed, gangue passes, sulphur condenses."""

from __future__ import annotations

from typing import Any

import pytest

import gibbsmin
from gibbsmin.results import StageOutlet


def stream(amounts: dict[str, float], temperature: str, pressure: str = "1 bar") -> Any:
    return {"temperature": temperature, "pressure": pressure, "unit": "mol", "amounts": amounts}


def outlet(feed: dict[str, Any], **stage: Any) -> StageOutlet:
    (found,) = gibbsmin.predict(gibbsmin.load_case({"feed": feed, "outlet": stage})).stages
    return found


def amounts(stage: StageOutlet) -> dict[str, float]:
    return dict(zip((r.name for r in stage.records), stage.amounts.tolist(), strict=True))


METHANOL = {"gas": stream({"H2": 7.0, "CO": 1.5, "CO2": 0.5, "N2": 0.2}, "500 K", "80 bar")}


def test_carbon_is_not_missed_where_the_service_rules_it_out() -> None:
    stage = outlet(METHANOL, service="methanol", temperature="520 K", pressure="80 bar")
    (carbon,) = (entry for entry in stage.audit if entry.record.name == "C(graphite)")
    assert carbon.activity > 1e3
    assert carbon.left_out
    assert not carbon.warns
    assert not any("considered" in warning for warning in stage.warnings)
    listed = ["H2", "CO", "CO2", "CH3OH", "H2O", "N2"]
    case = {
        "feed": METHANOL,
        "outlet": {"temperature": "520 K", "pressure": "80 bar"},
        "species": {"consider": listed},
    }
    (unserved,) = gibbsmin.predict(gibbsmin.load_case(case)).stages
    assert next(e for e in unserved.audit if e.record.name == "C(graphite)").warns


def test_ammonia_is_not_missed_in_a_methanator() -> None:
    feed = {"gas": stream({"H2": 3.0, "N2": 1.0, "CO": 0.01}, "570 K", "26 bar")}
    stage = outlet(feed, service="methanation", temperature="600 K", pressure="26 bar")
    (ammonia,) = (entry for entry in stage.audit if entry.record.name == "NH3(g)")
    assert ammonia.would_reach > 0.1
    assert not any("NH3(g)" in warning for warning in stage.warnings)


def test_gangue_passes_for_want_of_a_candidate() -> None:
    ore = {"Fe2O3(cr)": 1.0, "SiO2(quartz)": 0.1, "Al2O3(alpha)": 0.05}
    feed = {"ore": stream(ore, "300 K"), "gas": stream({"H2": 20.0}, "1100 K")}
    stage = outlet(feed, service="oxide reduction", temperature="1050 K", pressure="1 bar")
    left = amounts(stage)
    assert left["SiO2(quartz)"] == pytest.approx(0.1, rel=1e-12)
    assert left["Al2O3(alpha)"] == pytest.approx(0.05, rel=1e-12)
    assert left["Fe(alpha)"] == pytest.approx(2.0, rel=1e-9)
    assert not stage.warnings, "what gangue could form is not missed"
    (note,) = (note for note in stage.notes if note.startswith("Service"))
    assert "unchanged for want of a candidate SiO2(quartz), Al2O3(alpha), key reactions" in note


def test_sulphur_vapour_condenses_while_the_rest_is_held() -> None:
    gas = {"S2": 1.0, "S8": 0.1, "H2S": 0.5, "SO2": 0.25, "H2": 0.3, "H2O": 3.0, "N2": 6.0}
    stage = outlet(
        {"gas": stream(gas, "600 K")},
        service="sulphur condenser",
        temperature="420 K",
        pressure="1 bar",
    )
    left = amounts(stage)
    for name in ("H2S", "SO2", "H2", "H2O", "N2"):
        assert left[f"{name}(g)"] == pytest.approx(gas[name], rel=1e-9)
    assert left["S(l)"] > 0.98 * 2.8
    assert [extent.reaction for extent in stage.extents][-1] == "S2(g) = 2 S(l)"
    assert not stage.warnings, "no route by way of what is held"


def test_no_route_leads_through_what_is_inert() -> None:
    """With hydrogen sulphide and hydrogen inert, only sulphur's own vapour tells of sulphur."""
    gas = {"H2S": 0.5, "SO2": 0.3, "H2": 0.5, "S8": 0.001, "CO": 0.5, "CO2": 1.0, "N2": 6.0}
    stage = outlet(
        {"gas": stream(gas | {"H2O": 3.0}, "550 K")},
        service="sulphur recovery converter",
        temperature="550 K",
        pressure="1 bar",
    )
    routes = [route.text for entry in stage.audit for route in entry.routes]
    assert not any("H2 " in f"{text} " and "H2O" not in text for text in routes)
    assert not any(word == "CO" for text in routes for word in text.split())


def test_what_is_inert_shows_its_own_pressure() -> None:
    feed = {"gas": stream({"NH3": 1.0, "O2": 2.0, "N2": 7.0}, "500 K", "5 bar")}
    species = {"consider": ["NO", "H2O", "O2", "N2", "NH3"], "inert": ["N2"]}
    case = {
        "feed": feed,
        "outlet": {"temperature": "1150 K", "pressure": "5 bar"},
        "species": species,
    }
    (stage,) = gibbsmin.predict(gibbsmin.load_case(case)).stages
    (nitrogen,) = (each for each in stage.activities if each.record == "N2(g)")
    column = [record.name for record in stage.records].index("N2(g)")
    assert nitrogen.value == pytest.approx(5.0 * stage.mole_fractions[column], rel=1e-9)


def test_what_passes_a_cooler_unchanged_and_would_not_is_warned_of() -> None:
    gas = {"S2": 1.0, "S(g)": 0.01, "OH": 0.02, "H2O": 3.0, "N2": 6.0}
    stage = outlet(
        {"gas": stream(gas, "1500 K")},
        reactions="none",
        condense=["S(l)"],
        temperature="420 K",
        pressure="1 bar",
    )
    assert stage.warnings[-2:] == (
        "Nothing reacts here, so that fragments which recombine in a cooling gas stay in it "
        "(OH(g)): leave them out of the stage before, or let this one react.",
        "Solid or liquid S forms from lone atoms alone where nothing reacts, not from S2(g): let "
        'the stage react, by service = "sulphur condenser".',
    )
