"""Fuels by elements and heating value: pure substances treated as fuels must be recovered."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.errors import InputError
from gibbsmin.thermo.fuel import BURNT_TO, Basis, Fuel, fuel_record
from gibbsmin.thermo.fuel_correlations import (
    FUEL_SOURCES,
    liquid_entropy,
    liquid_heat_capacity,
    solid_entropy,
    solid_heat_capacity,
    usual_heating_value,
)
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.species import Phase, Species

LIBRARY = load_library()
WEIGHTS = LIBRARY.atomic_weights

COAL = Fuel(
    {"C": 0.6554, "H": 0.0424, "O": 0.0741, "N": 0.0136, "S": 0.0095, "Cl": 0.0010},
    ash=0.1240,
    moisture=0.0800,
)


def shares_of(counts: dict[str, float]) -> dict[str, float]:
    masses = {e: n * WEIGHTS[e] for e, n in counts.items()}
    total = sum(masses.values())
    return {e: mass / total for e, mass in masses.items()}


def as_fuel(
    counts: dict[str, float], heating_value: float, phase: Phase, density: float = 1000.0
) -> Species:
    return fuel_record("sample", shares_of(counts), heating_value, phase, density, LIBRARY)


@pytest.mark.parametrize(
    ("name", "combustion", "phase"),
    [
        ("C(graphite)", "C(graphite) + O2(g) = CO2(g)", Phase.SOLID),
        ("C6H6(l)", "C6H6(l) + 15/2 O2(g) = 6 CO2(g) + 3 H2O(l)", Phase.LIQUID),
        ("C2H5OH(l)", "C2H5OH(l) + 3 O2(g) = 2 CO2(g) + 3 H2O(l)", Phase.LIQUID),
        ("C4H4S(l)", "C4H4S(l) + 6 O2(g) = 4 CO2(g) + 2 H2O(l) + SO2(g)", Phase.LIQUID),
        ("CO(NH2)2(cr)", "CO(NH2)2(cr) + 3/2 O2(g) = CO2(g) + 2 H2O(l) + N2(g)", Phase.SOLID),
        ("CH3Cl(g)", "CH3Cl(g) + 3/2 O2(g) = CO2(g) + H2O(l) + HCl(g)", Phase.LIQUID),
    ],
)
def test_heating_value_of_a_pure_substance_recovers_its_enthalpy_of_formation(
    name: str, combustion: str, phase: Phase
) -> None:
    known = LIBRARY[name]
    released = -float(Reaction.read(combustion, LIBRARY).enthalpy(298.15))
    found = as_fuel(dict(known.elements), released / known.molar_mass, phase)
    carbon = dict(known.elements)["C"]
    assert found.dfH298 * carbon == pytest.approx(known.dfH298, abs=2.0)
    assert found.molar_mass * carbon == pytest.approx(known.molar_mass)


def crystal(C: int, H: int, O: int = 0, N: int = 0) -> dict[str, float]:  # noqa: E741
    return {e: float(n) for e, n in {"C": C, "H": H, "O": O, "N": N}.items() if n}


# J/(mol K) at 298.15 K: CRC Handbook of Chemistry and Physics, 95th edition, Standard Thermodynamic
# Properties, as a table in the package chemicals 1.5.2 (read).
CRYSTALS = [
    ("naphthalene", crystal(10, 8), 167.4),
    ("anthracene", crystal(14, 10), 207.5),
    ("phenanthrene", crystal(14, 10), 215.1),
    ("pyrene", crystal(16, 10), 224.9),
    ("perylene", crystal(20, 12), 264.6),
    ("biphenyl", crystal(12, 10), 209.4),
    ("2-naphthol", crystal(10, 8, 1), 179.0),
    ("phenol", crystal(6, 6, 1), 144.0),
    ("diphenyl ether", crystal(12, 10, 1), 233.9),
    ("benzoic acid", crystal(7, 6, 2), 167.6),
    ("phthalic acid", crystal(8, 6, 4), 207.9),
    ("hexadecanoic acid", crystal(16, 32, 2), 452.4),
    ("octadecane", crystal(18, 38), 480.2),
]


@pytest.mark.parametrize(("name", "counts", "entropy"), CRYSTALS)
def test_entropy_of_solids_lies_within_its_stated_spread(
    name: str, counts: dict[str, float], entropy: float
) -> None:
    mass = sum(n * WEIGHTS[e] for e, n in counts.items())
    value, spread = solid_entropy(shares_of(counts))
    assert abs(value * mass - entropy) <= spread * mass, name


def test_entropy_of_graphite() -> None:
    # 5.74 J/(mol K); the equation gives 37.1635 − 31.4767
    assert solid_entropy({"C": 1.0})[0] * WEIGHTS["C"] == pytest.approx(5.687, abs=0.001)


def test_sugars_have_the_wider_spread() -> None:
    # α-D-glucose 209.2 J/(mol K), recalled from memory
    counts = crystal(6, 12, 6)
    mass = sum(n * WEIGHTS[e] for e, n in counts.items())
    value, spread = solid_entropy(shares_of(counts))
    assert value * mass > 1.25 * 209.2
    assert abs(value * mass - 209.2) < spread * mass


@pytest.mark.parametrize("name", ["n-C16H34(l)", "n-C12H26(l)", "n-C10H22(l)"])
def test_entropy_of_heavy_liquids_lies_below_by_what_is_left_out(name: str) -> None:
    record = LIBRARY[name]
    value, spread = liquid_entropy(record.molar_mass / record.molar_volume)
    whole = value * record.molar_mass + 44.0
    # within the spread; without the 44 J/(mol K) of a molecule it is low
    assert abs(whole - record.S298) < spread * record.molar_mass
    assert value * record.molar_mass < record.S298


def test_heat_capacity_of_solids() -> None:
    # Coal near room temperature has 1.0 to 1.3 kJ/(kg K) (common knowledge), 3 R an atom far above.
    shares = COAL.matter_shares
    room, hot = solid_heat_capacity(shares, [298.15, 20000.0])
    assert 1000.0 < room < 1300.0
    atoms = sum(share / WEIGHTS[e] for e, share in shares.items())
    assert hot == pytest.approx(3 * 8.314462618 * atoms, rel=1e-3)
    record = as_fuel({"C": 1.0, "H": 0.8, "O": 0.1}, 33e6, Phase.SOLID)
    T = np.array([280.0, 298.15, 400.0, 570.0])
    expected = record.molar_mass * solid_heat_capacity(shares_of({"C": 1.0, "H": 0.8, "O": 0.1}), T)
    found = PropertyTable.of([record]).heat_capacity(T)[:, 0]
    assert found == pytest.approx(expected, rel=1e-4)


def test_heat_capacity_of_oils() -> None:
    # 0.403 cal/(g K) at 0 °C and 0.484 at 100 °C for a specific gravity of 1
    constant, slope = liquid_heat_capacity(999.0)
    assert constant + slope * 273.15 == pytest.approx(0.403 * 4184.0)
    assert constant + slope * 373.15 == pytest.approx(0.484 * 4184.0)


def test_heat_capacity_of_oils_meets_pure_hydrocarbons_as_stated() -> None:
    # The docstring states 8 %, measured on these; the equation was made for oils, which mix them.
    records = [
        record
        for record in LIBRARY.records
        if record.phase is Phase.LIQUID
        and [symbol for symbol, _ in record.elements] == ["C", "H"]
        and record.molar_mass > 0.09
        and np.isfinite(record.molar_volume)
    ]
    assert len(records) >= 15
    known = PropertyTable.of(records).heat_capacity(298.15)
    coefficients = [liquid_heat_capacity(r.molar_mass / r.molar_volume) for r in records]
    found = [
        (constant + slope * 298.15) * record.molar_mass
        for (constant, slope), record in zip(coefficients, records, strict=True)
    ]
    assert float(np.sqrt(np.mean(np.log(found / known) ** 2))) == pytest.approx(0.08, abs=0.01)


@pytest.mark.parametrize(
    ("kind", "basis", "value"),
    [
        # by hand from 26.00 MJ/kg higher as received: moisture 8 %, ash 12.4 %, and water formed
        # (0.0424/1.008 − 0.0010/35.45)/2 = 21.018 mol/kg with 44.00 kJ/mol of evaporation
        ("higher", Basis.AS_RECEIVED, 26.000),
        ("higher", Basis.DRY, 26.000 / 0.92),
        ("higher", Basis.DRY_AND_ASH_FREE, 26.000 / 0.796),
        ("lower", Basis.AS_RECEIVED, 26.000 - (21.018 + 0.08 / 0.018015) * 0.04400),
        ("lower", Basis.DRY, (26.000 - 21.018 * 0.04400) / 0.92),
        ("lower", Basis.DRY_AND_ASH_FREE, (26.000 - 21.018 * 0.04400) / 0.796),
    ],
)
def test_every_basis_of_the_heating_value_means_the_same_fuel(
    kind: str, basis: Basis, value: float
) -> None:
    found = COAL.higher_heating_value(1e6 * value, kind, basis, LIBRARY)  # type: ignore[arg-type]
    assert found == pytest.approx(26.0e6 / 0.796, rel=1e-4)


def test_usual_heating_value_of_pure_substances() -> None:
    # Higher heating values of the library's own combustion; the correlation's stated mean error is
    # 1.45 %, its worst cases about 5 %.
    for name, bound in (("C6H6(l)", 0.02), ("n-C16H34(l)", 0.03), ("C(graphite)", 0.07)):
        record = LIBRARY[name]
        counts = dict(record.elements)
        formed = counts["C"] * LIBRARY["CO2(g)"].dfH298 + counts.get("H", 0.0) / 2 * (
            LIBRARY["H2O(l)"].dfH298
        )
        true = (record.dfH298 - formed) / record.molar_mass
        assert usual_heating_value(shares_of(counts), 0.0) == pytest.approx(true, rel=bound)


def test_ash_lowers_the_usual_heating_value() -> None:
    assert usual_heating_value({"C": 0.8}, 0.2) == pytest.approx(1e6 * (0.3491 * 80 - 0.0211 * 20))


def test_the_record_names_its_sources_and_is_no_candidate() -> None:
    record = as_fuel({"C": 1.0, "H": 0.8}, 33e6, Phase.SOLID)
    library = LIBRARY.extended([record], FUEL_SOURCES)
    for key in (record.source_enthalpy, record.source_entropy, record.source_heat_capacity):
        assert library.source(key).key == key
    assert library["sample(am)"] is record
    assert record not in library.of_elements(["C", "H", "O"])
    assert LIBRARY["C6H6(g)"] in library.of_elements(["C", "H", "O"])
    assert "estimated" in record.remark
    assert record.u_S298 == pytest.approx(0.15 * record.S298)
    assert set(dict(record.elements)) <= {"H", *BURNT_TO}


@pytest.mark.parametrize(
    ("shares", "sentence"),
    [
        ({"H": 1.0}, "found a fuel without carbon; accepted is an analysis with carbon."),
        (
            {"C": 0.5, "H": 0.001, "Cl": 0.499},
            "found more chlorine than hydrogen to bind it; accepted is an analysis whose chlorine "
            "burns to HCl.",
        ),
    ],
)
def test_faults_of_the_analysis(shares: dict[str, float], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        fuel_record("sample", shares, 30e6, Phase.SOLID, 1000.0, LIBRARY)
    assert str(caught.value) == sentence


def test_record_is_a_species_with_finite_figures() -> None:
    record = as_fuel({"C": 1.0, "H": 1.6, "S": 0.01}, 42e6, Phase.LIQUID, 950.0)
    assert isinstance(record, Species)
    assert record.name == "sample(l)"
    assert record.molar_volume == pytest.approx(record.molar_mass / 950.0)
    assert record.u_S298 == pytest.approx(0.1 * record.S298)
    assert np.isfinite(PropertyTable.of([record]).gibbs_energy(350.0)).all()
