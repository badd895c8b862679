"""Feeds of a fuel known by its elements and heating value alone."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from published_values import CheckValue, amounts, check_values

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.reactor.inlet import inlet_of
from gibbsmin.results import StageOutlet
from gibbsmin.thermo.library import load_library

# Invented: a hard coal.
COAL: dict[str, Any] = {
    "analysis": {
        "C": "65.54 %",
        "H": "4.24 %",
        "O": "7.41 %",
        "N": "1.36 %",
        "S": "0.95 %",
        "Cl": "0.1 %",
    },
    "basis": "as received",
    "moisture": "8 %",
    "ash": "12.4 %",
    "lower_heating_value": "26 MJ/kg",
}
AIR = {"temperature": "298.15 K", "pressure": "1 bar", "unit": "mol", "amounts": {"air": 400}}
REMOVED = object()


def case_of(fuel: dict[str, Any], *, name: str = "coal", **feed: Any) -> Case:
    stream = {"temperature": "298.15 K", "pressure": "1 bar", "total": "1 kg", "fuel": fuel} | feed
    return gibbsmin.load_case(
        {
            "feed": {
                name: {key: value for key, value in stream.items() if value is not REMOVED},
                "air": deepcopy(AIR),
            },
            "outlet": {"heat": "0 kJ", "pressure": "1 bar"},
        }
    )


def changed(**changes: Any) -> dict[str, Any]:
    return {key: v for key, v in {**deepcopy(COAL), **changes}.items() if v is not REMOVED}


def outlet_of(fuel: dict[str, Any], **feed: Any) -> StageOutlet:
    return gibbsmin.predict(case_of(fuel, **feed)).final


def test_matter_moisture_and_inert_ash() -> None:
    case = case_of(COAL)
    coal = case.feeds[0]
    assert list(coal.amounts) == ["coal(am)", "H2O(l)"]
    record = case.library["coal(am)"]
    assert coal.amounts["coal(am)"] * record.molar_mass == pytest.approx(1.0 - 0.124 - 0.08)
    assert coal.amounts["coal(am)"] == pytest.approx(0.6554 / 0.012011, rel=1e-5)
    assert coal.amounts["H2O(l)"] == pytest.approx(0.08 / 0.018015, rel=1e-4)
    assert coal.warnings == ()
    spread = record.u_S298 / record.molar_mass
    assert coal.remarks == (
        f"The entropy of coal, {record.S298 / record.molar_mass:.0f} ± {spread:.0f} J/(kg K) of "
        "its dry and ash-free matter, is an estimate by W. Eiserman, P. Johnson, W. L. Conger, "
        "Estimating thermodynamic properties of coal, char, tar and ash, Fuel Processing "
        "Technology 3, 39-53 (1980) (coefficients recalled from memory, found to meet 43 organic "
        "crystals of the CRC Handbook within 14 % (root mean square)).",
        "The enthalpy of formation of coal follows from its higher heating value, 34.07 MJ/kg dry "
        "and ash free.",
        "The ash of coal, 12.4 % as received, is taken as inert and left out of the balances, its "
        "heat too.",
    )


def test_burning_gives_off_the_heating_value() -> None:
    """Burnt at 25 °C with more than enough air, all water vapour: the lower heating value."""
    case = case_of(COAL)
    cold = gibbsmin.load_case(
        {
            "feed": {
                "coal": {
                    "temperature": "25 degC",
                    "pressure": "1 bar",
                    "total": "1 kg",
                    "fuel": COAL,
                },
                "air": AIR,
            },
            "outlet": {"temperature": "25 degC", "pressure": "1 bar"},
            "species": {"consider": ["CO2", "H2O(g)", "SO2", "HCl", "N2", "O2", "Ar"]},
        }
    )
    found = gibbsmin.predict(cold).final
    assert found.certified
    assert -found.heat == pytest.approx(26.0e6, rel=1e-4)
    assert case.own_records[0].name in found.conversion
    assert found.conversion["coal(am)"] == 1.0


@st.composite
def fuels(draw: st.DrawFn) -> tuple[dict[str, Any], float]:
    """A fuel of any composition, and its lower heating value as received in MJ/kg.

    The evaporation of water at 25 °C, 44.00 kJ/mol, is taken off by hand.
    """
    carbon = draw(st.floats(0.4, 0.9))
    parts = draw(st.tuples(*[st.floats(0.0, 1.0)] * 4))
    rest = (1.0 - carbon) / (sum(parts) + 1e-3)
    matter = {"C": carbon, "H": (parts[0] + 1e-3) * rest}
    matter |= {e: share * rest for e, share in zip("ONS", parts[1:], strict=True)}
    moisture, ash = draw(st.floats(0.0, 0.4)), draw(st.floats(0.0, 0.4))
    lower_dry = draw(st.floats(10.0, 40.0)) * (1.0 - ash)
    basis = draw(st.sampled_from(["as received", "dry", "dry and ash free"]))
    of_dry = {"as received": 1.0 - moisture, "dry": 1.0, "dry and ash free": 1.0 / (1.0 - ash)}
    scale = (1.0 - ash) * of_dry[basis]
    fuel: dict[str, Any] = {
        "analysis": {e: share * scale for e, share in matter.items()},
        "basis": basis,
        "moisture": moisture,
        "ash": ash * (1.0 - moisture) if basis == "as received" else ash,
    }
    if draw(st.booleans()):
        higher_dry = lower_dry + (1.0 - ash) * matter["H"] / 2.016 * 44.004
        fuel |= {"higher_heating_value": f"{higher_dry} MJ/kg", "heating_value_basis": "dry"}
    else:
        fuel |= {"lower_heating_value": f"{lower_dry} MJ/kg", "heating_value_basis": "dry"}
    return fuel, lower_dry * (1.0 - moisture) - moisture / 18.015 * 44.004


@given(fuels())
@settings(max_examples=40, deadline=None)
def test_any_fuel_gives_off_its_lower_heating_value(drawn: tuple[dict[str, Any], float]) -> None:
    fuel, expected = drawn
    tables = {
        "feed": {
            "fuel": {"temperature": "25 degC", "pressure": "1 bar", "total": "1 kg", "fuel": fuel},
            "air": {
                "temperature": "25 degC",
                "pressure": "1 bar",
                "unit": "mol",
                "amounts": {"O2": 400},
            },
        },
        "outlet": {"temperature": "25 degC", "pressure": "1 bar"},
        "species": {"consider": ["CO2", "H2O(g)", "SO2", "N2", "O2"]},
    }
    found = gibbsmin.predict(gibbsmin.load_case(tables)).final
    assert found.certified
    assert -found.heat == pytest.approx(1e6 * expected, rel=1e-3, abs=5e3)
    masses = sum(
        n * record.molar_mass for n, record in zip(found.amounts, found.records, strict=True)
    )
    ash = fuel["ash"] * (1.0 if fuel["basis"] == "as received" else 1.0 - fuel["moisture"])
    assert masses == pytest.approx(1.0 - ash + 400 * 0.031998, rel=1e-5)


def test_a_pure_liquid_given_as_a_fuel_burns_like_itself() -> None:
    record = load_library()["C6H6(l)"]
    formed = 6 * load_library()["CO2(g)"].dfH298 + 3 * load_library()["H2O(l)"].dfH298
    heating_value = (record.dfH298 - formed) / record.molar_mass
    carbon = 6 * 12.0107 / (1e3 * record.molar_mass)
    fuel = {
        "analysis": {"C": carbon, "H": 1.0 - carbon},
        "basis": "dry and ash free",
        "higher_heating_value": f"{heating_value} J/kg",
        "phase": "liquid",
        "density": "0.874 kg/L",
    }
    by_fuel = outlet_of(fuel, name="benzene fraction", total="39.06 g")
    known = gibbsmin.predict(
        gibbsmin.load_case(
            {
                "feed": {
                    "benzene": {
                        "temperature": "298.15 K",
                        "pressure": "1 bar",
                        "unit": "g",
                        "amounts": {"C6H6(l)": 39.06},
                    },
                    "air": AIR,
                },
                "outlet": {"heat": "0 kJ", "pressure": "1 bar"},
            }
        )
    ).final
    assert by_fuel.certified
    assert by_fuel.temperature == pytest.approx(known.temperature, abs=0.05)
    assert by_fuel.entropy.value == pytest.approx(known.entropy.value, rel=0.01)


# The coal above on other bases, by hand: over 92 % dry, over 79.6 % dry and ash free.
DRY = {e: f"{float(text[:-2]) / 0.92} %" for e, text in COAL["analysis"].items()}
DRY_AND_ASH_FREE = {e: f"{float(text[:-2]) / 0.796} %" for e, text in COAL["analysis"].items()}


@pytest.mark.parametrize(
    "fuel",
    [
        changed(analysis=DRY, basis="dry", ash=0.124 / 0.92, heating_value_basis="as received"),
        changed(
            analysis=DRY_AND_ASH_FREE,
            basis="dry and ash free",
            ash=0.124 / 0.92,
            heating_value_basis="as received",
        ),
        # evaporation of 0.08/18.015 kmol/kg at 44.004 MJ/kmol, and of the water of combustion,
        # 21.018 mol/kg
        changed(
            lower_heating_value=REMOVED, higher_heating_value=f"{26 + 0.19541 + 0.92488} MJ/kg"
        ),
        changed(heating_value_basis="dry", lower_heating_value=f"{(26 + 0.19541) / 0.92} MJ/kg"),
    ],
)
def test_every_basis_means_the_same_coal(fuel: dict[str, Any]) -> None:
    expected, found = case_of(COAL), case_of(fuel)
    for name, amount in expected.feeds[0].amounts.items():
        assert found.feeds[0].amounts[name] == pytest.approx(amount, rel=1e-5)
    enthalpies = [inlet_of(c.feeds[:1], c.library).enthalpy[0] for c in (expected, found)]
    assert enthalpies[1] == pytest.approx(enthalpies[0], abs=2e3)  # J of 26 MJ


def test_ash_of_known_composition_takes_part() -> None:
    fuel = changed(ash_composition={"SiO2": "55 %", "Al2O3": "30 %", "CaO": "15 %"})
    coal = case_of(fuel).feeds[0]
    names = list(coal.amounts)
    assert names[2:] == ["SiO2(quartz)", "Al2O3(alpha)", "CaO(cr)"]
    assert coal.amounts["CaO(cr)"] == pytest.approx(0.124 * 0.15 / 0.056077, rel=1e-4)
    assert not any("inert" in remark for remark in coal.remarks)


def test_a_loss_is_a_share_of_the_heating_value_of_a_fuel_with_ash() -> None:
    oxides = {"SiO2": "55 %", "Al2O3": "30 %", "CaO": "15 %"}
    common = {"temperature": "298.15 K", "pressure": "1 bar"}
    lossy = gibbsmin.load_case(
        {
            "feed": {
                "coal": {**common, "total": "5 kg", "fuel": changed(ash_composition=oxides)},
                "air": {**common, "unit": "mol", "amounts": {"air": 2000}},
            },
            "outlet": {"heat_loss": "3 %", "pressure": "1 bar"},
            "species": {
                "consider": [
                    *("CO2", "H2O(g)", "SO2", "HCl", "N2", "O2", "Ar", "CO", "NO"),
                    *("SiO2(quartz)", "SiO2(l)", "Al2O3(alpha)", "CaO(cr)"),
                ]
            },
        }
    )
    found = gibbsmin.predict(lossy).final
    assert found.certified
    assert -found.heat == pytest.approx(0.03 * 5 * 26e6, rel=1e-3)


def test_analysis_that_nearly_adds_up_is_scaled_and_said_so() -> None:
    coal = case_of(changed(moisture="8.3 %")).feeds[0]
    assert coal.remarks[0] == (
        "The analysis of coal adds up to 100.3 % with ash and moisture and is scaled to 100 %."
    )
    assert coal.amounts["H2O(l)"] == pytest.approx(0.083 / 0.018015, rel=1e-4)


def test_an_unusual_heating_value_is_warned_of() -> None:
    # by hand, in per cent of the dry coal: 0.3491·71.24 + 1.1783·4.609 + 0.1005·1.033
    # − 0.1034·8.054 − 0.0151·1.478 − 0.0211·13.48 = 29.26
    found = outlet_of(changed(lower_heating_value="12 MJ/kg"))
    assert found.warnings[-1] == (
        "The heating value of coal is 14.26 MJ/kg (higher, dry), while its elements usually give "
        "29.26 MJ/kg (Channiwala and Parikh, 2002): look at its unit and its basis."
    )


def test_the_fuel_itself_is_no_candidate() -> None:
    found = outlet_of(COAL)
    assert "coal(am)" not in [record.name for record in found.records]
    assert "coal(am)" not in [entry.record.name for entry in found.audit]


@pytest.mark.parametrize(
    ("fuel", "feed", "sentence"),
    [
        (
            changed(lower_heating_value=REMOVED),
            {},
            "feed.coal.fuel.higher_heating_value: found no heating value; accepted is one of "
            'higher_heating_value and lower_heating_value, such as "28.5 MJ/kg".',
        ),
        (
            changed(higher_heating_value="27 MJ/kg"),
            {},
            "feed.coal.fuel.lower_heating_value: found lower_heating_value beside "
            "higher_heating_value; accepted is one of higher_heating_value and "
            'lower_heating_value, such as "28.5 MJ/kg".',
        ),
        (
            changed(ash="2.4 %"),
            {},
            "feed.coal.fuel.analysis: found an analysis that adds up to 90 % with ash and "
            "moisture, as received; accepted is 99.5 to 100.5 %.",
        ),
        (
            changed(basis="dry and ash free"),
            {},
            "feed.coal.fuel.analysis: found an analysis that adds up to 79.6 %, dry and ash free; "
            "accepted is 99.5 to 100.5 %.",
        ),
        (
            changed(basis=REMOVED),
            {},
            'feed.coal.fuel.basis: found nothing; accepted is "as received", "dry" or '
            '"dry and ash free".',
        ),
        (
            changed(basis="wet"),
            {},
            'feed.coal.fuel.basis: found "wet"; accepted is "as received", "dry" or '
            '"dry and ash free".',
        ),
        (
            changed(analysis={"C": "80 %", "Fe": "20 %"}),
            {},
            "feed.coal.fuel.analysis.Fe: found what is no element of a fuel; accepted is C, H, O, "
            "N, S or Cl.",
        ),
        (
            changed(analysis=REMOVED),
            {},
            "feed.coal.fuel.analysis: found nothing; accepted is a table of elements and their "
            'shares by mass, such as { C = "72 %", H = "5 %", O = "12 %" }.',
        ),
        (
            changed(analysis={"H": "90 %", "O": "10 %"}, basis="dry and ash free"),
            {},
            "feed.coal.fuel.analysis: found a fuel without carbon; accepted is an analysis with "
            "carbon.",
        ),
        (
            changed(basis="dry and ash free", analysis={"C": 1.0}, ash="50 %", moisture="100 %"),
            {},
            "feed.coal.fuel.ash: found ash and moisture that leave no fuel; accepted are shares "
            "that leave some.",
        ),
        (
            changed(lower_heating_value="26 MJ"),
            {},
            'feed.coal.fuel.lower_heating_value: found "26 MJ"; accepted is a heat of a mass such '
            'as "28.5 MJ/kg", "6800 kcal/kg" or "12200 Btu/lb".',
        ),
        (
            changed(lower_heating_value="26 kJ/kg"),
            {},
            "feed.coal.fuel.lower_heating_value: found a heating value that makes 1.44 MJ/kg, "
            "higher, of the dry and ash-free fuel; accepted is 3 to 60 MJ/kg of it.",
        ),
        (
            changed(phase="gas"),
            {},
            'feed.coal.fuel.phase: found "gas"; accepted is "solid" or "liquid".',
        ),
        (
            changed(phase="liquid"),
            {},
            "feed.coal.fuel.density: found no density of a liquid fuel, from which its entropy "
            'and heat capacity are estimated; accepted is a density such as "0.96 kg/L".',
        ),
        (
            changed(density="1.3 kg/L"),
            {},
            "feed.coal.fuel.density: found a density of a solid fuel, for which it has no use; "
            'accepted is a density of a liquid one, with phase = "liquid".',
        ),
        (
            changed(ash_composition={"SiO2": "55 %", "CaO": "15 %"}),
            {},
            "feed.coal.fuel.ash_composition: found an ash composition that adds up to 70 %; "
            "accepted is 99.5 to 100.5 %.",
        ),
        (
            changed(ash_composition={"CO": 1.0}),
            {},
            'feed.coal.fuel.ash_composition.CO: found "CO", of which the library holds gas alone; '
            "accepted are solids or liquids.",
        ),
        (
            changed(ash_composition="slag"),
            {},
            'feed.coal.fuel.ash_composition: found "slag"; accepted is "inert", or a table of '
            'oxides and their shares by mass, such as { SiO2 = "55 %", Al2O3 = "30 %", '
            'CaO = "15 %" }.',
        ),
        (
            COAL,
            {"total": "2 kmol"},
            'feed.coal.total: found "kmol" of a fuel, whose molecules are not known; accepted is '
            'a mass as received, such as "2 t" or "500 kg/h".',
        ),
        (
            COAL,
            {"total": REMOVED},
            "feed.coal.total: found nothing; accepted is an amount or a flow such as "
            '"100 kmol/h", "2 t" or "50 Nm3/h".',
        ),
        (
            COAL,
            {"steam_ratio": 0.1},
            "feed.coal.steam_ratio: found steam_ratio with fuel; accepted is steam_ratio with "
            "amounts or analysis.",
        ),
        (
            COAL,
            {"name": "methanol"},
            'feed.methanol: found a fuel called "methanol", as records of the library are; '
            "accepted is a name of its own.",
        ),
        (
            COAL,
            {"name": "CO2"},
            'feed.CO2: found a fuel called "CO2", as records of the library are; accepted is a '
            "name of its own.",
        ),
    ],
)
def test_faults_read_as_one_sentence(
    fuel: dict[str, Any], feed: dict[str, Any], sentence: str
) -> None:
    with pytest.raises(InputError) as caught:
        case_of(fuel, **feed)
    assert str(caught.value) == sentence


GENERATOR = [c for c in check_values("compositions") if c.id.startswith("SVNA13.13")]


@pytest.mark.parametrize("check", GENERATOR, ids=str)
def test_coal_gas_generator_with_carbon_given_as_a_fuel(check: CheckValue) -> None:
    """The textbook's generator, its carbon known by analysis and heating value alone."""
    feed = amounts(check["feed"])
    carbon = feed.pop("C(graphite)")
    fuel = {
        "analysis": {"C": "100 %"},
        "basis": "dry",
        "higher_heating_value": "32.76 MJ/kg",  # 393.5 kJ/mol
    }
    case = gibbsmin.load_case(
        {
            "feed": {
                "coke": {
                    "temperature": "25 degC",
                    "pressure": "20 bar",
                    "total": f"{carbon * 12.011} g",
                    "fuel": fuel,
                },
                "gas": {
                    "temperature": "25 degC",
                    "pressure": "20 bar",
                    "unit": "mol",
                    "amounts": feed,
                },
            },
            "outlet": {
                "temperature": f"{check['temperature_K']} K",
                "pressure": f"{check['pressure']} {check['pressure_unit']}",
            },
            "species": {"consider": check["candidates"].split("; ")},
        }
    )
    found = gibbsmin.predict(case).final
    fractions = dict(zip((r.name for r in found.records), found.mole_fractions, strict=True))
    assert check.meets(fractions[check["subject"]])
