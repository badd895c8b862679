"""The figures and reactions that a stage's result shows."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any

import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.results import StageOutlet

GASIFIER: dict[str, Any] = {
    "feed": {
        "wood": {
            "temperature": "25 degC",
            "pressure": "1.1 bar",
            "total": "1000 kg/h",
            "fuel": {
                "analysis": {"C": "50.8 %", "H": "6.1 %", "O": "43.05 %", "S": "0.05 %"},
                "basis": "dry and ash free",
                "moisture": "12 %",
                "lower_heating_value": "16 MJ/kg",
                "heating_value_basis": "as received",
            },
        },
        "air": {
            "temperature": "25 degC",
            "pressure": "1.1 bar",
            "unit": "kg/h",
            "amounts": {"air": 1500},
        },
    },
    "outlet": {
        "temperature": "800 degC",
        "pressure": "1.05 bar",
        "held_fraction": {"C(graphite)": "2 % of C"},
    },
    "species": {
        "consider": [
            *("CO", "CO2", "H2", "H2O(g)", "CH4", "N2", "Ar", "O2", "H2S", "NH3", "COS"),
            "C(graphite)",
        ]
    },
}
FLAME: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "25 degC",
            "pressure": "1 atm",
            "unit": "mol",
            "amounts": {"CH4": 10, "H2S": 0.01, "air": 115},
        }
    },
    "outlet": {"temperature": "1500 K", "pressure": "1 atm", "reference_oxygen": "3 %"},
    "species": {
        "consider": ["CO2", "H2O(g)", "N2", "O2", "NO", "NO2", "CO", "SO2", "SO3", "Ar", "OH"]
    },
}


def outlet_of(tables: dict[str, Any], **outlet: Any) -> StageOutlet:
    return gibbsmin.predict(
        gibbsmin.load_case({**tables, "outlet": tables["outlet"] | outlet})
    ).final


def figure(found: StageOutlet, name: str) -> float:
    return next(figure.value for figure in found.figures if figure.name == name)


# MJ/Nm3 at 25 °C (common knowledge)
LOWER = {"CO": 12.63, "H2": 10.79, "CH4": 35.8}


def test_cold_gas_efficiency_is_the_gas_over_the_fuel() -> None:
    found = outlet_of(GASIFIER)
    fractions = dict(zip((r.name for r in found.records), found.mole_fractions, strict=True))
    per_volume = sum(fractions[f"{gas}(g)"] * value for gas, value in LOWER.items())
    assert figure(found, "lower heating value of the gas") == pytest.approx(per_volume, rel=2e-3)
    gas = sum(
        n for n, record in zip(found.amounts, found.records, strict=True) if record.state == "g"
    )
    power = gas * 0.022414 * per_volume  # MW, of 1000 kg/h with 16 MJ/kg
    assert figure(found, "cold-gas efficiency") == pytest.approx(
        100 * power / (1000 / 3600 * 16), rel=3e-3
    )


def test_no_cold_gas_efficiency_where_nothing_is_gasified() -> None:
    names = [figure.name for figure in outlet_of(FLAME).figures]
    assert "cold-gas efficiency" not in names
    assert "lower heating value of the gas" not in names


def test_condensed_shares_by_mass() -> None:
    found = outlet_of(GASIFIER)
    # kg of the 2.5 kg that enter for each kg of wood; the air's own CO2 brings 0.04 % more carbon
    carbon = 0.02 * 0.88 * 0.508
    assert figure(found, "C(graphite) by mass") == pytest.approx(100 * carbon / 2.5, rel=6e-4)


def test_emissions_at_the_reference_oxygen() -> None:
    found = outlet_of(FLAME)
    dry = dict(zip((r.name for r in found.records), found.dry_mole_fractions, strict=True))
    for name in ("NO", "SO2"):
        expected = dry[f"{name}(g)"] * (0.2095 - 0.03) / (0.2095 - dry["O2(g)"])
        assert figure(found, f"{name} in the dry gas at 3 % O2") == pytest.approx(1e6 * expected)
    without = {**FLAME, "outlet": {"temperature": "1500 K", "pressure": "1 atm"}}
    assert not any("% O2" in figure.name for figure in outlet_of(without).figures)


def test_nitrogen_activity_beside_the_nitriding_potential() -> None:
    found = outlet_of(GASIFIER)
    nitrogen = next(a.value for a in found.activities if a.label == "p(N2)")
    assert figure(found, "nitrogen activity against N2 at 1 bar") == pytest.approx(nitrogen**0.5)


def test_exergy_balance_closes_with_the_lost_work() -> None:
    """Fed less leaving, and less what the heat could do, is the work lost (Gouy and Stodola)."""
    found = outlet_of(GASIFIER)
    against = "against 298.15 K and 1 atm"
    fed = figure(found, f"exergy fed {against}")
    leaving = figure(found, f"physical exergy {against}") + figure(
        found, f"chemical exergy {against}"
    )
    with_heat = found.heat / 1e3 * (1.0 - 298.15 / found.temperature)
    assert fed + with_heat - leaving == pytest.approx(found.entropy.lost_work / 1e3, rel=1e-6)


SHIFT = "CO + H2O(g) = CO2 + H2"
METHANE = "CH4 + 2 H2O(g) = CO2 + 4 H2"
BOUDOUARD = "C(graphite) + CO2 = 2 CO"


def test_named_reactions_come_first_and_the_rest_is_told_with_them() -> None:
    found = outlet_of(GASIFIER, extents=[SHIFT, METHANE, BOUDOUARD])
    assert [extent.reaction for extent in found.extents[:3]] == [
        "CO(g) + H2O(g) = CO2(g) + H2(g)",
        "CH4(g) + 2 H2O(g) = CO2(g) + 4 H2(g)",
        "C(graphite) + CO2(g) = 2 CO(g)",
    ]
    amounts = dict(zip((r.name for r in found.records), found.amounts, strict=True))
    methane, carbon = found.extents[1].value, found.extents[2].value
    # only the named reactions hold methane and carbon beside the fuel's own, which makes neither
    assert methane == pytest.approx(-amounts["CH4(g)"])
    assert carbon == pytest.approx(-amounts["C(graphite)"])


def test_named_reactions_that_span_everything_stand_alone() -> None:
    tables: dict[str, Any] = {
        "feed": {
            "gas": {
                "temperature": "800 K",
                "pressure": "10 bar",
                "unit": "mol",
                "amounts": {"CH4": 1.0, "H2O": 3.0},
            }
        },
        "outlet": {"temperature": "1000 K", "pressure": "10 bar"},
        "species": {"consider": ["CH4", "H2O(g)", "CO", "CO2", "H2"]},
    }
    found = outlet_of(tables, extents=["CH4 + 2 H2O = CO2 + 4 H2", "CO2 + H2 = CO + H2O"])
    amounts = dict(zip((r.name for r in found.records), found.amounts, strict=True))
    assert [extent.value for extent in found.extents] == pytest.approx(
        [1.0 - amounts["CH4(g)"], amounts["CO(g)"]]
    )


@pytest.mark.parametrize(
    ("outlet", "sentence"),
    [
        (
            {"extents": [SHIFT, "2 CO + 2 H2O(g) = 2 CO2 + 2 H2"]},
            "outlet.extents: found reactions that depend on each other; accepted are independent "
            "reactions.",
        ),
        (
            {"extents": ["C3H8 + 3 H2O(g) = 3 CO + 7 H2"]},
            'outlet.extents: found "C3H8(g)" in a reaction, which is neither fed nor considered; '
            "accepted are reactions between records that are.",
        ),
        (
            {"extents": ["CH4 + H2O(g) = CO + 2 H2"]},
            'outlet.extents: found "CH4 + H2O(g) = CO + 2 H2", which is not balanced: H 6 on the '
            "left and 4 on the right; accepted is a balanced reaction, here "
            '"CH4 + H2O(g) = CO + 3 H2".',
        ),
        (
            {"extents": ["C + CO2 = 2 CO"]},
            'outlet.extents: found "C", which could be single atoms in the gas or a condensed '
            "form; accepted is one of C(g), C(graphite).",
        ),
        (
            {"extents": [7]},
            "outlet.extents: found 7 in the list; accepted is a list of reactions, such as "
            '["CH4 + H2O = CO + 3 H2"].',
        ),
        (
            {"extents": SHIFT},
            f'outlet.extents: found "{SHIFT}"; accepted is a list of reactions, such as '
            '["CH4 + H2O = CO + 3 H2"].',
        ),
        (
            {"reference_oxygen": "21 %"},
            'outlet.reference_oxygen: found "21 %", which is not below the oxygen of air; '
            'accepted is a share of the dry gas below 20.95 %, such as "3 %".',
        ),
        (
            {"reference_oxygen": "3 vol"},
            'outlet.reference_oxygen: found "3 vol", which is no share; accepted is a share from '
            '0 to 1, such as 0.8 or "80 %".',
        ),
    ],
)
def test_faults_read_as_one_sentence(outlet: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        outlet_of(GASIFIER, **outlet)
    assert str(caught.value) == sentence


def test_ash_does_not_hide_the_figures_of_the_fuel() -> None:
    """A little potash in the wood leaves air ratio and cold-gas efficiency nearly unchanged."""
    with_ash = deepcopy(GASIFIER)
    fuel = with_ash["feed"]["wood"]["fuel"]
    fuel |= {"ash": "1 %", "ash_composition": {"K2O": "60 %", "SiO2": "40 %"}}
    consider = [*GASIFIER["species"]["consider"], "K2CO3(cr)", "K2CO3(l)", "KOH(g)", "SiO2(quartz)"]
    with_ash["species"] = {"consider": consider}
    found, plain = outlet_of(with_ash), outlet_of(GASIFIER)
    for name in ("air ratio, fed", "cold-gas efficiency", "lower heating value of the gas"):
        assert figure(found, name) == pytest.approx(figure(plain, name), rel=0.03)
        assert figure(found, name) != figure(plain, name)


def test_the_gasifier_of_the_examples_lies_where_practice_does() -> None:
    """With air: 4 to 6 MJ/Nm3, 65 to 80 % in the cold gas (common practice); this is the limit."""
    path = Path(__file__).parents[2] / "examples" / "biomass_gasifier" / "case.toml"
    found = gibbsmin.predict(gibbsmin.load_case(path)).stages[0]
    assert 0.25 < figure(found, "air ratio, fed") < 0.35
    assert 4.0 < figure(found, "lower heating value of the gas") < 6.0
    assert 65.0 < figure(found, "cold-gas efficiency") < 85.0
    assert 973.0 < found.temperature < 1173.0
    # 1000 kg/h with 0.88·18.6 − 0.12·2.442 = 16.07 MJ/kg
    assert figure(found, "lower heating value fed") == pytest.approx(16.075e3 / 3.6, rel=1e-3)
