"""Stages as plants run them: adiabatic, held, in trains; published cases and round trips."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.results import Outlet, StageOutlet

COMBUSTION = ["CH4", "O2", "N2", "CO", "CO2", "H2O", "H2", "OH", "O", "H", "NO", "N", "HO2"]


def stream(
    amounts: dict[str, float], temperature: str = "298.15 K", pressure: str = "1 atm"
) -> Any:
    return {"temperature": temperature, "pressure": pressure, "unit": "mol", "amounts": amounts}


def case(feed: dict[str, Any], *stages: dict[str, Any], consider: Any = "all") -> dict[str, Any]:
    return {
        "feed": feed,
        "stage": [{"name": f"stage {i + 1}", **stage} for i, stage in enumerate(stages)],
        "species": {"consider": consider},
    }


def predict(tables: dict[str, Any]) -> Outlet:
    return gibbsmin.predict(gibbsmin.load_case(tables))


def only(tables: dict[str, Any]) -> StageOutlet:
    (stage,) = predict(tables).stages
    return stage


def amount(stage: StageOutlet, name: str) -> float:
    return dict(zip((r.name for r in stage.records), stage.amounts.tolist(), strict=True))[name]


REFORMER = case(
    {
        "gas": stream({"CH4": 1.0, "N2": 0.02}, "520 degC", "29 bar"),
        "steam": stream({"H2O": 3.0}, "520 degC", "29 bar"),
    },
    {"temperature": "850 degC", "pressure": "25 bar"},
    consider=["CH4", "H2O", "CO", "CO2", "H2", "N2"],
)


def reformer(**stage: Any) -> dict[str, Any]:
    tables = deepcopy(REFORMER)
    tables["stage"][0] |= stage
    return tables


def flame(feed: dict[str, float]) -> dict[str, Any]:
    return case(
        {"mixture": stream(feed)}, {"heat": "0 kJ", "pressure": "1 atm"}, consider=COMBUSTION
    )


# Turns, An Introduction to Combustion, Table B.1, and Law, Combustion Physics; recalled from
# memory.  The books differ by 5-10 K among each other, hence 12 K.
FLAMES = [
    ({"CH4": 1.0, "O2": 2.0, "N2": 2.0 * 3.76}, 2226.0),
    ({"H2": 1.0, "O2": 0.5, "N2": 0.5 * 3.76}, 2390.0),
    ({"CO": 1.0, "O2": 0.5, "N2": 0.5 * 3.76}, 2385.0),
    ({"C2H2": 1.0, "O2": 2.5, "N2": 2.5 * 3.76}, 2539.0),
    ({"C2H4": 1.0, "O2": 3.0, "N2": 3.0 * 3.76}, 2369.0),
    ({"C3H8": 1.0, "O2": 5.0, "N2": 5.0 * 3.76}, 2267.0),
]


@pytest.mark.parametrize(("feed", "published"), FLAMES, ids=lambda x: str(x)[:12])
def test_adiabatic_flame(feed: dict[str, float], published: float) -> None:
    flame = case(
        {"mixture": stream(feed)}, {"heat": "0 kJ", "pressure": "1 atm"}, consider=COMBUSTION
    )
    assert only(flame).temperature == pytest.approx(published, abs=12.0)


def test_adiabatic_temperature_fed_back_needs_no_heat() -> None:
    flame = case(
        {"mixture": stream(FLAMES[0][0])},
        {"heat": "0 kJ", "pressure": "1 atm"},
        consider=COMBUSTION,
    )
    adiabatic = only(flame)
    flame["stage"][0] |= {"temperature": f"{adiabatic.temperature!r} K"}
    del flame["stage"][0]["heat"]
    isothermal = only(flame)
    released = 802.3e3  # J, lower heating value of a mole of methane: the scale of the change
    assert abs(isothermal.heat) < 1e-9 * released
    np.testing.assert_allclose(isothermal.amounts, adiabatic.amounts, rtol=1e-9)


def test_reversible_stage_generates_no_entropy() -> None:
    turbine = case(
        {"gas": stream({"N2": 0.7, "CO2": 0.1, "H2O": 0.2}, "1500 K", "10 bar")},
        {"entropy": "feed", "pressure": "1 bar"},
        consider=["N2", "CO2", "H2O", "CO", "H2", "O2", "OH", "NO"],
    )
    stage = only(turbine)
    entering = 250.0  # J/K, the order of the stream's entropy
    assert abs(stage.entropy.value) < 1e-9 * entering
    assert stage.heat == 0.0
    assert stage.shaft_work < -10e3
    assert stage.temperature < 1100.0


def test_heat_is_taken_up_at_the_melting_point() -> None:
    # Alumina melts at 2327 K and takes up about 111 kJ/mol (NIST-JANAF Tables, 4th ed., 1998).
    def heated(kilojoule: float) -> StageOutlet:
        return only(
            case(
                {"alumina": stream({"Al2O3(alpha)": 1.0}, "2300 K")},
                {"heat": f"{kilojoule} kJ", "pressure": "1 atm"},
                consider=["Al2O3(alpha)", "Al2O3(l)"],
            )
        )

    third, half = heated(40.0), heated(60.0)
    assert third.temperature == pytest.approx(2327.0, abs=0.5)
    assert half.temperature == pytest.approx(third.temperature, abs=1e-6)
    melting = 20e3 / (amount(half, "Al2O3(l)") - amount(third, "Al2O3(l)"))
    assert melting == pytest.approx(111e3, rel=0.01)
    assert half.notes[0].startswith("Heat is taken up at constant temperature: ")


def test_closed_vessel_meets_its_volume_and_its_energy() -> None:
    # Constant-volume combustion is hotter than at constant pressure, and the pressure rises.
    feed = {"mixture": stream(FLAMES[1][0])}
    moles = sum(FLAMES[1][0].values())
    volume = moles * 8.31446261815324 * 298.15 / 101325.0
    stage = only(case(feed, {"heat": "0 kJ", "volume": f"{volume!r} m3"}, consider=COMBUSTION))
    gas = stage.amounts.sum()
    assert stage.pressure * volume == pytest.approx(gas * 8.31446261815324 * stage.temperature)
    open_flame = only(flame(FLAMES[1][0]))
    assert stage.temperature > open_flame.temperature + 200.0
    assert stage.heat == 0.0
    assert stage.entropy.value > 0.0


def log_quotient(stage: StageOutlet, reaction: dict[str, float]) -> float:
    pressures = dict(zip((r.name for r in stage.records), stage.mole_fractions, strict=True))
    return sum(nu * np.log(pressures[name] * stage.pressure / 1e5) for name, nu in reaction.items())


REFORMING = {"CH4(g)": -1.0, "H2O(g)": -1.0, "CO(g)": 1.0, "H2(g)": 3.0}
SHIFT = {"CO(g)": -1.0, "H2O(g)": -1.0, "CO2(g)": 1.0, "H2(g)": 1.0}


def log_constant(reaction: dict[str, float], kelvin: float) -> float:
    from gibbsmin.thermo.library import load_library
    from gibbsmin.thermo.properties import PropertyTable

    table = PropertyTable.of([load_library()[name] for name in reaction])
    energy = table.gibbs_energy(kelvin) @ np.array(list(reaction.values()))
    return float(-energy / (8.31446261815324 * kelvin))


def test_an_approach_sets_its_reaction_and_leaves_the_other_at_equilibrium() -> None:
    stage = only(reformer(approach=[{"reaction": "CH4 + H2O = CO + 3 H2", "approach": "15 K"}]))
    assert log_quotient(stage, REFORMING) == pytest.approx(
        log_constant(REFORMING, 1108.15), abs=1e-10
    )
    assert log_quotient(stage, SHIFT) == pytest.approx(log_constant(SHIFT, 1123.15), abs=1e-10)
    assert stage.notes == (
        '"CH4 + H2O = CO + 3 H2" is set to equilibrium at 1108.15 K, an approach of 15 K; its '
        "key is CH4(g).",
    )


def test_an_approach_of_nothing_is_equilibrium() -> None:
    plain = only(REFORMER)
    held = only(reformer(approach=[{"reaction": "CH4 + H2O = CO + 3 H2", "approach": "0 K"}]))
    np.testing.assert_allclose(held.amounts, plain.amounts, rtol=1e-12, atol=1e-14)


def test_with_the_others_frozen_only_the_named_reaction_runs() -> None:
    tables = case(
        {"gas": stream({"CO": 1.0, "H2O": 2.0, "CO2": 0.2, "H2": 1.0, "CH4": 0.3})},
        {
            "temperature": "700 K",
            "pressure": "20 atm",
            "others": "frozen",
            "approach": [{"reaction": "CO + H2O = CO2 + H2", "approach": "10 K", "key": "CO"}],
        },
        consider=["CO", "H2O", "CO2", "H2", "CH4"],
    )
    stage = only(tables)
    assert amount(stage, "CH4(g)") == pytest.approx(0.3, rel=1e-12)
    # shift is exothermic: short of equilibrium means at equilibrium 10 K hotter
    assert log_quotient(stage, SHIFT) == pytest.approx(log_constant(SHIFT, 710.0), abs=1e-10)


def test_fixed_conversion_and_held_slip() -> None:
    converted = only(reformer(conversion={"CH4": "10 %"}))
    assert converted.conversion["CH4(g)"] == pytest.approx(0.1, rel=1e-12)
    slipping = only(reformer(held_fraction={"CH4": "8 % dry"}))
    dry = dict(zip((r.name for r in slipping.records), slipping.dry_mole_fractions, strict=True))
    assert dry["CH4(g)"] == pytest.approx(0.08, rel=1e-10)


def test_carbon_margin_inside_the_tube_is_told_by_each_route() -> None:
    # At 10 % conversion and 1000 K the cracking of methane asks for carbon, though the exit does
    # not: the figures are the two constants with the gas's own pressures.
    stage = only(reformer(conversion={"CH4": "10 %"}, temperature="1000 K"))
    (carbon,) = [entry for entry in stage.audit if entry.record.name == "C(graphite)"]
    routes = {route.text: route.log_activity for route in carbon.routes}
    cracking = {"CH4(g)": -1.0, "H2(g)": 2.0}
    boudouard = {"CO(g)": -2.0, "CO2(g)": 1.0}
    for text, gas, solid in (
        ("CH4 = C + 2 H2", cracking, {**cracking, "C(graphite)": 1.0}),
        ("2 CO = C + CO2", boudouard, {**boudouard, "C(graphite)": 1.0}),
    ):
        pressed = 5.3e-6 * (stage.pressure - 1e5) / (8.31446261815324 * 1000.0)
        expected = log_constant(solid, 1000.0) - log_quotient(stage, gas) - pressed
        assert routes[text] == pytest.approx(expected, abs=1e-9)
    assert routes["CH4 = C + 2 H2"] > 0.0 > routes["2 CO = C + CO2"]
    activities = {activity.label: activity.value for activity in stage.activities}
    assert "a(C)" not in activities  # no single one would be true
    for text in ("CH4 = C + 2 H2", "2 CO = C + CO2"):
        assert np.log(activities[f"a(C) by {text}"]) == pytest.approx(routes[text], abs=1e-9)


def test_a_held_share_leaves_the_shift_at_equilibrium_and_a_held_fraction_does_not() -> None:
    shared = only(reformer(held_fraction={"CH4": "30 % of C"}))
    assert log_quotient(shared, SHIFT) == pytest.approx(
        log_constant(SHIFT, shared.temperature), abs=1e-10
    )
    assert shared.notes == ()
    held = only(reformer(held_fraction={"CH4": "8 % dry"}))
    # CO + H2O = CO2 + H2 makes one mole of dry gas
    off = abs(log_quotient(held, SHIFT) - log_constant(SHIFT, held.temperature))
    assert off > 1e-3
    (note,) = held.notes
    assert note == (
        "The held fraction of CH4(g) weighs on the gas's other reactions: one that changes its "
        f"moles by 1 is {100 * np.expm1(off):.2g} % off its constant. A held share of an "
        'element, such as "2 % of C", leaves them at equilibrium.'
    )
    pressures = {activity.label: activity.value for activity in held.activities}
    fractions = dict(zip((r.name for r in held.records), held.mole_fractions, strict=True))
    assert pressures["p(N2)"] == pytest.approx(fractions["N2(g)"] * held.pressure / 1e5)


def test_a_train_passes_on_what_is_left() -> None:
    tables = case(
        {"gas": stream({"CO2": 1.0, "H2O": 2.0, "N2": 1.0}, "500 K", "10 bar"),
         "air": stream({"air": 1.0}, "300 K", "10 bar")},
        {"temperature": "320 K", "pressure_drop": "0.5 bar", "reactions": "none",
         "condense": ["H2O"], "remove": {"H2O(l)": 1.0, "CO2": "95 %"}},
        {"heat": "0 kJ", "pressure": "9 bar", "reactions": "none", "feeds": ["air"]},
    )  # fmt: skip
    dried, mixed = predict(tables).stages
    assert dried.pressure == pytest.approx(9.5e5)
    assert dried.removed["CO2(g)"] == pytest.approx(0.95)
    assert amount(mixed, "CO2(g)") == pytest.approx(0.05 + 0.000314, abs=2e-4)
    assert amount(mixed, "H2O(g)") == pytest.approx(amount(dried, "H2O(g)"), rel=1e-12)
    assert amount(mixed, "H2O(g)") < 0.05
    assert 300.0 < mixed.temperature < 320.0
    assert mixed.entropy.value > 0.0


def test_a_bypass_joins_the_outlet() -> None:
    through, joined = predict(reformer(bypass="20 %")).stages
    whole = only(REFORMER)
    np.testing.assert_allclose(through.amounts, 0.8 * whole.amounts, rtol=1e-10)
    assert amount(joined, "CH4(g)") == pytest.approx(amount(through, "CH4(g)") + 0.2, rel=1e-12)
    assert joined.temperature < through.temperature
    assert joined.heat == 0.0


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        (
            {"heat": "0 kJ"},
            "stage.stage 1.heat: found heat beside temperature; accepted is one of temperature, "
            "heat, "
            "heat_loss and entropy.",
        ),
        (
            {"pressure": None},
            "stage.stage 1.pressure: found nothing; accepted is one of pressure, pressure_drop and "
            "volume.",
        ),
        (
            {"temperature": "85000 K"},
            "stage.stage 1.temperature: found a temperature of 85000 K; accepted is one from "
            "100 K to 6000 K.",
        ),
        (
            {"temperature": None, "heat": "-9000 kJ"},
            "stage.stage 1.heat: found a heat of -9000 kJ, which no temperature between 100 K and "
            "6000 K meets; accepted is another heat, or a temperature in its place.",
        ),
        (
            {"temperature": None, "heat": "0 kJ", "species": {"consider": ["CO", "H2", "N2"]}},
            "stage.stage 1.species.consider: found candidates that cannot hold the feed's "
            "elements in "
            "their proportions; accepted is a list that can, for instance one with CH4(g), "
            "N2(g), H2O(g).",
        ),
        (
            {"temperature": None, "heat": "5 kW"},
            'stage.stage 1.heat: found a heat in "kW", while the feeds are in "mol"; accepted is a '
            "quantity, such as kJ.",
        ),
        (
            {"approach": [{"reaction": "CH4 + H2O = CO + 3 H2", "approach": "9 K"}] * 2},
            "stage.stage 1.approach: found reactions that depend on each other: "
            '"CH4 + H2O = CO + 3 H2", "CH4 + H2O = CO + 3 H2"; accepted are independent '
            "reactions.",
        ),
        (
            {"approach": [{"reaction": "CO + H2O = CO2 + H2", "approach": "9 K"}]},
            'stage.stage 1.approach: found no key for "CO + H2O = CO2 + H2", in which H2O(g) and '
            "CO2(g) are equally large; accepted is a key, the record that the approach holds "
            "back.",
        ),
        (
            {"held_fraction": {"CH4": "2 % of carbon"}},
            'stage.stage 1.held_fraction.CH4(g): found "carbon", which CH4(g) does not hold; '
            "accepted "
            "is one of its elements: C, H.",
        ),
        (
            {"conversion": {"CO": 0.5}},
            'stage.stage 1.conversion: found "CO(g)", which does not enter the stage; accepted '
            "is a "
            "record that does: CH4(g), H2O(g), N2(g).",
        ),
        (
            {"conversion": {"CH4": "180 %"}},
            'stage.stage 1.conversion.CH4: found "180 %", which is not between 0 and 1; accepted '
            "is a "
            'share from 0 to 1, such as 0.8 or "80 %".',
        ),
        (
            {"feeds": ["oil"]},
            'stage.stage 1.feeds: found "oil", which is no stream; accepted is each stream once: '
            "gas, "
            "steam.",
        ),
        (
            {"pressure": None, "pressure_drop": "-1 bar"},
            'stage.stage 1.pressure_drop: found "-1 bar", which is negative; accepted is a '
            'difference of pressures such as "0.5 bar".',
        ),
        (
            {"pressure": None, "pressure_drop": "40 bar"},
            "stage.stage 1.pressure_drop: found a drop of 40 bar from 29 bar; accepted is a drop "
            "that "
            "leaves a pressure above zero.",
        ),
    ],
)  # fmt: skip
def test_faults_of_stages_read_as_one_sentence(changes: dict[str, Any], sentence: str) -> None:
    tables = reformer(**changes)
    tables["stage"][0] = {k: v for k, v in tables["stage"][0].items() if v is not None}
    with pytest.raises(InputError) as caught:
        predict(tables)
    assert str(caught.value) == sentence


def test_a_closed_vessel_takes_no_flows() -> None:
    tables = case(
        {"gas": stream({"CH4": 1.0, "H2O": 2.0}, "600 K", "1 bar") | {"unit": "mol/s"}},
        {"temperature": "900 K", "volume": "2 m3"},
        consider=["CH4", "H2O(g)", "CO", "CO2", "H2"],
    )
    with pytest.raises(InputError) as caught:
        predict(tables)
    assert str(caught.value) == (
        "stage.stage 1.volume: found the volume of a closed vessel, while the feeds flow, in "
        '"mol/s"; accepted is a pressure, or feeds that are quantities.'
    )


def test_a_named_solid_that_is_absent_is_said_to_bound_only() -> None:
    tables = case(
        {"gas": stream({"CH4": 1.0, "H2O": 3.0}, "800 K", "20 bar")},
        {
            "temperature": "1000 K",
            "pressure": "20 bar",
            "approach": [{"reaction": "CH4 = C(graphite) + 2 H2", "approach": "30 K"}],
        },
        consider=["CH4", "H2O(g)", "CO", "CO2", "H2", "C(graphite)"],
    )
    (note,) = only(tables).notes
    assert note == (
        '"CH4 = C(graphite) + 2 H2" is set to equilibrium at 970.00 K, an approach of 30 K; its '
        "key is CH4(g). C(graphite) is absent, so it only bounds the outlet."
    )


def test_figures_of_the_gas() -> None:
    stage = only(
        case(
            {"air": stream({"N2": 0.79, "O2": 0.21}, "300 K", "1 bar")},
            {"temperature": "300 K", "pressure": "1 bar"},
            consider=["N2", "O2"],
        )
    )
    figures = {figure.name: figure.value for figure in stage.figures}
    # dry air of 79/21 at 300 K and 1 bar, an ideal gas; Cp of air 29.1 J/mol/K, ratio 1.400: common
    # values of the textbooks
    assert figures["molar mass of the gas"] == pytest.approx(28.85, abs=0.01)
    assert figures["density of the gas"] == pytest.approx(
        28.85e-3 * 1e5 / (8.314463 * 300), rel=1e-3
    )
    assert figures["heat capacity of the gas, frozen"] == pytest.approx(29.15, abs=0.1)
    assert figures["isentropic exponent, frozen"] == pytest.approx(1.400, abs=0.002)
    assert figures["isentropic exponent at equilibrium"] == pytest.approx(1.400, abs=0.002)
    assert figures["heat capacity at equilibrium over frozen"] == pytest.approx(1.0, abs=1e-9)
    whole = figures["heat capacity of the outlet, frozen"]
    assert figures["heat capacity of the outlet at equilibrium"] == pytest.approx(whole)
    assert "solids and liquids by mass" not in figures


def test_adiabatic_bed_with_an_approach() -> None:
    # An exothermic reaction short of equilibrium as written: at equilibrium 20 K hotter.
    tables = case(
        {"gas": stream({"CO": 1.0, "H2O": 3.0, "H2": 4.0, "CO2": 0.5}, "600 K", "20 bar")},
        {
            "heat": "0 kJ",
            "pressure": "20 bar",
            "approach": [{"reaction": "CO + H2O = CO2 + H2", "approach": "20 K", "key": "CO"}],
        },
        consider=["CO", "H2O", "H2", "CO2"],
    )
    stage = only(tables)
    assert log_quotient(stage, SHIFT) == pytest.approx(
        log_constant(SHIFT, stage.temperature + 20.0), abs=1e-10
    )
    free = deepcopy(tables)
    del free["stage"][0]["approach"]
    assert 600.0 < stage.temperature < only(free).temperature


def test_figures_of_the_trade() -> None:
    tables = case(
        {
            "gas": stream({"CH4": 1.0, "SO2": 0.002}, "500 K", "1 bar"),
            "air": stream({"O2": 2.4, "N2": 9.0, "SO3": 0.0005}, "300 K", "1 bar"),
        },
        {"temperature": "450 K", "pressure": "1 bar"},
        consider=["CO2", "H2O", "O2", "N2", "SO2(g)", "SO3(g)"],
    )
    tables["stage"][0]["species"] = {
        "consider": ["CO2", "H2O(g)", "O2", "N2", "SO2(g)", "SO3(g)"],
        "inert": ["SO2(g)", "SO3(g)"],
    }
    stage = only(tables)
    figures = {figure.name: figure.value for figure in stage.figures}
    assert figures["air ratio, fed"] == pytest.approx(1.2, rel=0.01)
    # 16 % water at 1 bar: 55.3 °C in the steam tables (recalled); 40 ppm SO3 lies some 80 K above,
    # common practice
    assert figures["water dew point"] == pytest.approx(55.3, abs=1.0)
    assert 130.0 < figures["acid dew point (Verhoff and Banchero)"] < 160.0
    assert "H2/CO" not in figures
    outlet = only(REFORMER)
    reformed = {figure.name: figure.value for figure in outlet.figures}
    assert reformed["steam to carbon, fed"] == pytest.approx(3.0, rel=1e-12)
    y = dict(zip((r.name for r in outlet.records), outlet.mole_fractions, strict=True))
    assert reformed["H2/CO"] == pytest.approx(y["H2(g)"] / y["CO(g)"], rel=1e-12)
    assert reformed["(H2 − CO2)/(CO + CO2)"] == pytest.approx(
        (y["H2(g)"] - y["CO2(g)"]) / (y["CO(g)"] + y["CO2(g)"]), rel=1e-12
    )


def test_a_service_proposes_what_the_case_leaves_open() -> None:
    tables = deepcopy(REFORMER)
    tables["stage"][0]["service"] = "steam reforming"
    del tables["species"]
    stage = only(tables)
    names = [record.name for record in stage.records]
    assert {"CH4(g)", "CO(g)", "H2(g)", "C(graphite)", "N2(g)"} <= set(names)
    assert stage.notes[0].startswith("Service steam reforming (common practice): considered are")
    given = deepcopy(REFORMER)
    given["stage"][0]["service"] = "steam reforming"
    assert [record.name for record in only(given).records] == [
        "CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "N2(g)",
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("drop", "pressure"), [("0 bar", 29e5), ("0.5 bar", 28.5e5), ("0.5 barg", 28.5e5)]
)
def test_a_drop_is_a_difference_of_pressures(drop: str, pressure: float) -> None:
    tables = reformer(pressure_drop=drop)
    del tables["stage"][0]["pressure"]
    assert only(tables).pressure == pytest.approx(pressure, rel=1e-12)


def test_two_stages_of_one_name_are_refused() -> None:
    tables = case(
        {"gas": stream({"CH4": 1.0, "H2O": 3.0})},
        {"name": "bed", "temperature": "900 K", "pressure": "1 bar"},
        {"name": "bed", "temperature": "800 K", "pressure": "1 bar"},
    )
    with pytest.raises(InputError) as caught:
        gibbsmin.load_case(tables)
    assert str(caught.value) == (
        'stage: found two stages named "bed"; accepted is a name of its own for each stage.'
    )


def test_a_service_that_does_not_exist() -> None:
    with pytest.raises(InputError) as caught:
        only(reformer(service="steam reformin"))
    assert str(caught.value) == (
        'stage.stage 1.service: found the service "steam reformin"; accepted is one of steam '
        "reforming, shift, low-temperature shift, methanation, ammonia, methanol, SO2 oxidation, "
        "sulphur recovery, sulphur recovery converter, sulphur condenser, combustion, "
        "gasification, oxide reduction, carburising."
    )


def test_a_loss_is_a_share_of_the_lower_heating_value() -> None:
    tables = flame({"CH4": 1.0, "O2": 2.0, "N2": 7.52})
    adiabatic = only(tables)
    del tables["stage"][0]["heat"]
    tables["stage"][0]["heat_loss"] = "10 %"
    stage = only(tables)
    # lower heating value of methane at 25 °C, 802.3 kJ/mol: ISO 6976:2016, recalled
    assert stage.heat == pytest.approx(-80.23e3, rel=1e-3)
    assert stage.temperature < adiabatic.temperature - 100.0


def test_a_feed_without_a_heating_value_cannot_lose_a_share_of_it() -> None:
    tables = case(
        {"ore": stream({"Fe2O3(cr)": 1.0, "H2": 3.0}, "900 K")},
        {"heat_loss": "5 %", "pressure": "1 atm"},
        consider=["Fe(alpha)", "H2", "H2O(g)", "Fe2O3(cr)"],
    )
    with pytest.raises(InputError) as caught:
        only(tables)
    assert str(caught.value) == (
        'stage.stage 1.heat_loss: found "Fe2O3(cr)" in the feed, which has no heating value to '
        "lose a "
        "share of; accepted is a heat in its place."
    )


def test_extents_and_where_the_carbon_went() -> None:
    stage = only(REFORMER)
    extents = {extent.reaction: extent.value for extent in stage.extents}
    assert set(extents) == {
        "CH4(g) + H2O(g) = CO(g) + 3 H2(g)",
        "CO(g) + H2O(g) = CO2(g) + H2(g)",
    }
    reforming, shift = extents.values()
    assert reforming == pytest.approx(1.0 - amount(stage, "CH4(g)"), rel=1e-12)
    assert shift == pytest.approx(amount(stage, "CO2(g)"), rel=1e-12)
    carbon = {found.record: found for found in stage.yields if found.element == "C"}
    assert sum(found.share for found in carbon.values()) == pytest.approx(1.0, rel=1e-12)
    assert carbon["CO(g)"].share == pytest.approx(amount(stage, "CO(g)"), rel=1e-12)
    made = amount(stage, "CO(g)") + amount(stage, "CO2(g)")
    assert carbon["CO2(g)"].selectivity == pytest.approx(amount(stage, "CO2(g)") / made, rel=1e-12)
    assert carbon["CH4(g)"].selectivity == 0.0
