"""Units: every row of the table against pint, what is asked about, and the sentences."""

import contextlib
import csv
import math
from collections.abc import Callable
from importlib.resources import files
from typing import Any

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE
from gibbsmin.errors import UnitError
from gibbsmin.units import (
    Dimension,
    read_amount,
    read_amount_unit,
    read_density,
    read_heat,
    read_heating_value,
    read_molar_energy,
    read_pressure,
    read_share,
    read_temperature,
    read_temperature_difference,
    read_volume,
    to_unit,
)
from gibbsmin.units.vocabulary import UnclearUnitError, find_unit

TEMPERATURE = 'accepted is a temperature such as "850 degC" or "1123 K".'
PRESSURE = 'accepted is a pressure such as "25 bar" (absolute) or "24 barg".'
AMOUNT = 'accepted is an amount or a flow such as "100 kmol/h", "2 t" or "50 Nm3/h".'


def table(name: str) -> list[dict[str, str]]:
    text = files("gibbsmin.data").joinpath(name).read_text(encoding="utf-8")
    return list(csv.DictReader(text.splitlines()))


@pytest.fixture(scope="module")
def registry() -> Any:
    return pint.UnitRegistry()


PINT_NAMES = {
    "degC": "degC",
    "kgf/cm2": "kgf/cm**2",
    "mmH2O": "9.80665 Pa",
    "inH2O": "25.4 * 9.80665 Pa",
    "lbmol": "453.59237 mol",
    "klb": "1000 lb",
    "short_ton": "2000 lb",
    "long_ton": "2240 lb",
    "Btu": "Btu_it",
    "kBtu": "1000 Btu_it",
    "MMBtu": "1e6 Btu_it",
    "m3": "m**3",
    "ft3": "ft**3",
    "cfm": "ft**3/min",
    "Nm3": "m**3",
    "kNm3": "1000 m**3",
    "NL": "L",
    "Sm3": "m**3",
    "kSm3": "1000 m**3",
    "MSm3": "1e6 m**3",
    "scf": "ft**3",
    "kscf": "1000 ft**3",
    "MMscf": "1e6 ft**3",
    "scfm": "ft**3/min",
    "scfh": "ft**3/h",
    "scfd": "ft**3/d",
    "MMscfd": "1e6 ft**3/d",
}
"""What a row is for pint, where pint does not know it by the row's own name."""


@pytest.mark.parametrize("row", table("units.csv"), ids=lambda row: row["unit"])
def test_each_unit_of_the_table_is_what_pint_says(row: dict[str, str], registry: Any) -> None:
    text = PINT_NAMES.get(row["unit"], row["unit"])
    expression = registry.Quantity(text)
    quantity = registry.Quantity(3.0 * expression.magnitude, expression.units)
    # 1e-9: the conventional inch of mercury carries 13 digits, all others are exact
    if row["dimension"].startswith("temperature"):
        expected = quantity.to("K").magnitude
    else:
        expected = quantity.to_base_units().magnitude
    if row["reference_T_K"]:
        volume_to_mol = float(row["reference_P_Pa"]) / (GAS_CONSTANT * float(row["reference_T_K"]))
        expected *= volume_to_mol
    found = find_unit(row["unit"], STANDARD_ATMOSPHERE)
    assert found.to_si(3.0) == pytest.approx(expected, rel=1e-9)
    assert found.dimension == Dimension(row["dimension"])
    for alias in filter(None, row["aliases"].split(";")):
        assert find_unit(alias, STANDARD_ATMOSPHERE).factor == found.factor


def test_no_unit_is_both_known_and_asked_about() -> None:
    known = [u for row in table("units.csv") for u in [row["unit"], *row["aliases"].split(";")]]
    asked = [u for row in table("unit_questions.csv") for u in row["units"].split(";")]
    assert len({*known} - {""}) == len([u for u in known if u])
    assert len({*asked}) == len(asked)
    assert not {*known} & {*asked}


@pytest.mark.parametrize(
    "unit", [u for row in table("unit_questions.csv") for u in row["units"].split(";")]
)
def test_each_ambiguous_unit_is_asked_about(unit: str) -> None:
    with pytest.raises(UnclearUnitError) as caught:
        find_unit(unit, STANDARD_ATMOSPHERE)
    assert caught.value.reason.startswith(f'whose unit "{unit}" could be ')
    assert caught.value.accepted.startswith("accepted is ")
    assert isinstance(caught.value.dimension, Dimension)


@pytest.mark.parametrize(
    ("text", "kelvin"),
    [
        ("850 degC", 1123.15),
        ("850degC", 1123.15),
        ("850 °C", 1123.15),
        ("850 ℃", 1123.15),
        ("850 deg C", 1123.15),
        ("1562 degF", 1123.15),
        ("2021.67 degR", 1123.15),
        ("1.12315e3 K", 1123.15),
        ("\N{MINUS SIGN}20 degC", 253.15),
        (" +.5 K ", 0.5),
    ],
)
def test_temperatures(text: str, kelvin: float) -> None:
    assert read_temperature(text) == pytest.approx(kelvin, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "pascal"),
    [
        ("25 bar", 25e5),
        ("25 bara", 25e5),
        ("25 bar(a)", 25e5),
        ("25 bar abs", 25e5),
        ("24 barg", 24e5 + 90e3),
        ("24 bar(g)", 24e5 + 90e3),
        ("24 bar g", 24e5 + 90e3),
        ("24 barG", 24e5 + 90e3),
        ("300 psig", 300 * 6894.757293168361 + 90e3),
        ("300 psi", 300 * 6894.757293168361),
        ("2400 kPag", 24e5 + 90e3),
        ("30 kgf/cm2g", 30 * 98066.5 + 90e3),
        ("30 kgf/cm^2", 30 * 98066.5),
        ("30 kgf/cm²", 30 * 98066.5),
        ("-5 mmH2Og", 90e3 - 5 * 9.80665),
        ("2 ksi", 2e3 * 6894.757293168361),
        ("3 N/m^2", 3.0),
    ],
)
def test_pressures_stand_on_the_site_where_they_are_gauge(text: str, pascal: float) -> None:
    assert read_pressure(text, 90e3) == pytest.approx(pascal, rel=1e-12)


def test_gauge_pressure_without_a_site_stands_on_the_standard_atmosphere() -> None:
    assert read_pressure("0 barg") == STANDARD_ATMOSPHERE


@pytest.mark.parametrize(
    ("text", "value", "dimension"),
    [
        ("36 kmol/h", 10.0, Dimension.MOLAR_FLOW),
        ("36 kmol per hour", 10.0, Dimension.MOLAR_FLOW),
        ("1 lb-mol/hr", 0.45359237 / 3.6, Dimension.MOLAR_FLOW),
        ("86.4 t/d", 1.0, Dimension.MASS_FLOW),
        ("1 oz/min", 0.45359237 / 16 / 60, Dimension.MASS_FLOW),
        ("2 t", 2000.0, Dimension.MASS),
        # V P°/(R T): 1 m³ at 273.15 K and 101325 Pa; 22.413 969 54 L/mol (CODATA 2018)
        ("1 Nm3", 1 / 22.41396954e-3, Dimension.NORMAL_VOLUME),
        ("3600 Nm³/h", 1 / 22.41396954e-3, Dimension.NORMAL_VOLUME_FLOW),
        # common practice: 379.48 scf to the lbmol
        ("379.48 scf", 453.59237, Dimension.NORMAL_VOLUME),
        ("24 MMSCFD", 1e6 / 3600 / 379.48 * 453.59237, Dimension.NORMAL_VOLUME_FLOW),
    ],
)
def test_amounts(text: str, value: float, dimension: Dimension) -> None:
    measure = read_amount(text)
    # 1.4e-5: 379.48 scf/lbmol is rounded to five digits
    assert measure.value == pytest.approx(value, rel=1.4e-5 if "scf" in text.lower() else 1e-9)
    assert measure.unit.dimension is dimension


def test_heats_and_temperature_differences() -> None:
    assert read_heat("-1.5 MW").value == -1.5e6
    assert read_heat("1 Gcal/h").value == pytest.approx(4.184e9 / 3600)
    assert read_heat("1 MMBtu/hr").value == pytest.approx(293071.07, rel=1e-7)
    assert read_heat("2 kJ").unit.dimension is Dimension.ENERGY
    assert read_temperature_difference("10 degC") == pytest.approx(10.0)
    assert read_temperature_difference("-18 degF") == pytest.approx(-10.0)
    assert read_temperature_difference("10 delta_degC") == 10.0


@pytest.mark.parametrize(
    ("read", "value", "sentence"),
    [
        (read_temperature, "850 bar", f'found "850 bar", which is a pressure; {TEMPERATURE}'),
        (read_temperature, 850, f"found 850, a number without a unit; {TEMPERATURE}"),
        (read_temperature, "850", f'found "850", a number without a unit; {TEMPERATURE}'),
        (read_temperature, True, f"found true, which is no quantity; {TEMPERATURE}"),
        (read_temperature, ["1 K"], f"found a list, which is no quantity; {TEMPERATURE}"),
        (read_temperature, "nan K", f'found "nan K", which is not finite; {TEMPERATURE}'),
        (read_temperature, "1e999 K", f'found "1e999 K", which is not finite; {TEMPERATURE}'),
        (
            read_temperature,
            "1e300 K",
            f'found "1e300 K", which is too large to reckon with; {TEMPERATURE}',
        ),
        (
            read_temperature,
            "-300 degC",
            f'found "-300 degC", which is not above absolute zero; {TEMPERATURE}',
        ),
        (
            read_temperature,
            "1,123 K",
            f'found "1,123 K", which does not read as a number and a unit; {TEMPERATURE}',
        ),
        (
            read_temperature,
            "850 C",
            'found "850 C", whose unit "C" could be degrees Celsius or the coulomb; '
            'accepted is "degC" for degrees Celsius.',
        ),
        (
            read_temperature,
            "850 T",
            f'found "850 T", whose unit "T" could be the tonne or the tesla; {TEMPERATURE}',
        ),
        (read_pressure, "-2 barg", f'found "-2 barg", which is not above vacuum; {PRESSURE}'),
        (
            read_pressure,
            "9e24 bar",
            'found "9e24 bar"; accepted is a pressure from 1e-20 to 1e20 Pa.',
        ),
        (
            read_pressure,
            "1e-300 bar",
            'found "1e-300 bar"; accepted is a pressure from 1e-20 to 1e20 Pa.',
        ),
        (read_pressure, "25 degC", f'found "25 degC", which is a temperature; {PRESSURE}'),
        (
            read_pressure,
            "30 kpa",
            f'found "30 kpa", whose unit "kpa" is not known (nearest: "kPa"); {PRESSURE}',
        ),
        (
            read_pressure,
            "30 kg/cm2",
            'found "30 kg/cm2", whose unit "kg/cm2" could be a mass over an area or a pressure; '
            'accepted is "kgf/cm2" or "psi", with g for gauge.',
        ),
        (read_amount, "-5 kg", f'found "-5 kg", which is negative; {AMOUNT}'),
        (
            read_amount,
            "5 m3/h",
            f'found "5 m3/h", which is a volume flow at no stated condition; {AMOUNT}',
        ),
        (
            read_amount,
            "5 ton/d",
            'found "5 ton/d", whose unit "ton" could be the metric or the short or the long ton; '
            'accepted is "t" (tonne, 1000 kg), "short_ton" (2000 lb) or "long_ton" (2240 lb).',
        ),
        (
            read_amount,
            "5 kmol//h",
            f'found "5 kmol//h", whose unit "kmol//h" is not known (nearest: "kmol/h"); {AMOUNT}',
        ),
        (
            read_amount,
            "5 kmol/m",
            'found "5 kmol/m", whose unit "m" could be the minute or the metre; '
            'accepted is "min" for the minute.',
        ),
        (
            read_temperature,
            "5 K*2",
            f'found "5 K*2", whose unit "K*2" is not known; {TEMPERATURE}',
        ),
        (
            read_heat,
            "5 mol/l",
            'found "5 mol/l", which is a quantity of another kind; '
            'accepted is a heat such as "1.5 MW", "2 Gcal/h" or "30 kJ".',
        ),
        (
            read_amount_unit,
            5,
            "found 5, which is no unit; "
            'accepted is a unit of amount or flow such as "kmol/h", "t" or "Nm3/h".',
        ),
        (
            read_amount_unit,
            "bar",
            'found "bar", which is a pressure; '
            'accepted is a unit of amount or flow such as "kmol/h", "t" or "Nm3/h".',
        ),
    ],
)
def test_refusals_read_as_one_sentence(read: Any, value: object, sentence: str) -> None:
    with pytest.raises(UnitError) as caught:
        read(value)
    assert str(caught.value) == sentence


@pytest.mark.parametrize("unit", ["degC", "barg", "kmol/h", "Nm3/h", "MMBtu/h", "degF"])
def test_writing_in_a_unit_undoes_reading_on_arrays(unit: str) -> None:
    numbers = np.array([[0.0, 25.0], [1e3, -3.0]])
    si = find_unit(unit, 95e3).to_si(numbers)
    np.testing.assert_allclose(to_unit(si, unit, 95e3), numbers, rtol=1e-12, atol=1e-9)


def test_writing_in_an_unclear_unit_is_refused() -> None:
    with pytest.raises(UnitError) as caught:
        to_unit(300.0, "C")
    assert str(caught.value) == (
        'found "C", whose unit "C" could be degrees Celsius or the coulomb; '
        'accepted is "degC" for degrees Celsius.'
    )


@given(st.text(st.sampled_from("0123456789.eE+- KCbargpsi/*^()molhNn3³°_%,µ"), max_size=14))
def test_any_text_is_read_or_refused(text: str) -> None:
    for read in (read_temperature, read_pressure):
        with contextlib.suppress(UnitError):
            value = read(text)
            assert math.isfinite(value)
            assert value > 0.0


@pytest.mark.parametrize(
    ("given", "expected"),
    [("2 m3", 2.0), ("500 L", 0.5), ("1 ft3", 0.028316846592)],
)
def test_volumes(given: str, expected: float) -> None:
    assert read_volume(given) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(
    ("given", "expected"),
    [(0.8, 0.8), (1, 1.0), ("80 %", 0.8), ("80%", 0.8), ("0.5", 0.5), ("250 ppm", 2.5e-4)],
)
def test_shares(given: object, expected: float) -> None:
    assert read_share(given) == pytest.approx(expected, rel=1e-15)


@pytest.mark.parametrize(
    ("given", "expected"),
    [("5 kJ/mol", 5e3), ("-1 kcal/mol", -4184.0), ("7 MJ/kmol", 7e3)],
)
def test_molar_energies(given: str, expected: float) -> None:
    assert read_molar_energy(given) == pytest.approx(expected, rel=1e-12)


SHARE = 'accepted is a share from 0 to 1, such as 0.8 or "80 %".'
MOLAR_ENERGY = 'accepted is an energy of one mole such as "5 kJ/mol".'
VOLUME = 'accepted is a volume such as "2 m3" or "500 L".'


@pytest.mark.parametrize(
    ("read", "value", "sentence"),
    [
        (read_share, 1.2, f"found 1.2, which is not between 0 and 1; {SHARE}"),
        (read_share, "-3 %", f'found "-3 %", which is not between 0 and 1; {SHARE}'),
        (read_share, "half", f'found "half", which is no share; {SHARE}'),
        (read_share, True, f"found true, which is no share; {SHARE}"),
        (read_share, float("nan"), f"found nan, which is not between 0 and 1; {SHARE}"),
        (
            read_molar_energy,
            "5 kJ",
            f'found "5 kJ", which is no energy of one mole; {MOLAR_ENERGY}',
        ),
        (read_molar_energy, 5, f"found 5, which is no energy of one mole; {MOLAR_ENERGY}"),
        (read_molar_energy, "5 bar/mol", f'found "5 bar/mol"; {MOLAR_ENERGY}'),
        (read_volume, "0 m3", f'found "0 m3", which is not above zero; {VOLUME}'),
        (read_volume, "2 Nm3", f'found "2 Nm3", which is a normal volume; {VOLUME}'),
    ],
)
def test_what_is_no_volume_share_or_molar_energy(
    read: Callable[[object], float], value: object, sentence: str
) -> None:
    with pytest.raises(UnitError) as caught:
        read(value)
    assert str(caught.value) == sentence


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("28.5 MJ/kg", 28.5e6),
        ("6800 kcal/kg", 6800 * 4184.0),
        ("12200 Btu/lb", 12200 * 2326.0),
        ("5 kWh/kg", 18e6),
        ("28.5 GJ/t", 28.5e6),
    ],
)
def test_heating_values(text: str, value: float) -> None:
    assert read_heating_value(text) == pytest.approx(value, rel=1e-3)


@pytest.mark.parametrize(
    ("text", "value"), [("0.96 kg/L", 960.0), ("960 kg/m3", 960.0), ("0.96 t/m3", 960.0)]
)
def test_densities(text: str, value: float) -> None:
    assert read_density(text) == pytest.approx(value)


HEATING_VALUE = (
    'accepted is a heat of a mass such as "28.5 MJ/kg", "6800 kcal/kg" or "12200 Btu/lb".'
)
DENSITY = 'accepted is a density such as "0.96 kg/L" or "960 kg/m3".'


@pytest.mark.parametrize(
    ("reader", "given", "sentence"),
    [
        (read_heating_value, 28.5, f"found 28.5; {HEATING_VALUE}"),
        (read_heating_value, None, f"found nothing; {HEATING_VALUE}"),
        (
            read_heating_value,
            "28 MJ/Nm3",
            f'found "28 MJ/Nm3", which is no heat of a mass; {HEATING_VALUE}',
        ),
        (
            read_heating_value,
            "28 MW/kg",
            f'found "28 MW/kg", which is no heat of a mass; {HEATING_VALUE}',
        ),
        (read_heating_value, "28 bar/kg", f'found "28 bar/kg"; {HEATING_VALUE}'),
        (
            read_heating_value,
            "0 MJ/kg",
            f'found "0 MJ/kg", which is not above zero; {HEATING_VALUE}',
        ),
        (read_density, "960", f'found "960"; {DENSITY}'),
        (read_density, "960 mol/L", f'found "960 mol/L", which is no mass of a volume; {DENSITY}'),
        (read_density, "0 kg/L", f'found "0 kg/L", which is no mass of a volume; {DENSITY}'),
        (read_density, "1 kg/kg", f'found "1 kg/kg"; {DENSITY}'),
    ],
)
def test_faults_of_heating_values_and_densities(
    reader: Callable[[object], float], given: object, sentence: str
) -> None:
    with pytest.raises(UnitError) as caught:
        reader(given)
    assert str(caught.value) == sentence
