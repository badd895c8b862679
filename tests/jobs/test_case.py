"""Case files as engineers write and mistype them.

One good case; each test changes one thing in it.
"""

import pickle
from collections.abc import Mapping
from copy import deepcopy
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case, load_case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.compositions import compositions
from gibbsmin.jobs.predict import predict
from gibbsmin.jobs.scan import scan
from gibbsmin.jobs.uncertainty import uncertainty
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.specification import Specification
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.tables import Source

TEXT = """\
title = "Reformer outlet"
site_pressure = "0.9 bar"
[feed.gas]
temperature = "520 degC"
pressure = "30 bar"
unit = "kmol/h"
[feed.gas.amounts]
CH4 = 100
N2 = 2
[feed.steam]
temperature = "520 degC"
pressure = "29 barg"
unit = "kmol/h"
amounts = { H2O = 300 }
[outlet]
temperature = "850 degC"
pressure = "25 bar"
[species]
consider = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]
"""

TABLES: dict[str, Any] = {
    "title": "Reformer outlet",
    "site_pressure": "0.9 bar",
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "kmol/h",
            "amounts": {"CH4": 100, "N2": 2},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "29 barg",
            "unit": "kmol/h",
            "amounts": {"H2O": 300},
        },
    },
    "outlet": {"temperature": "850 degC", "pressure": "25 bar"},
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]},
}

TEMPERATURE = 'accepted is a temperature such as "850 degC" or "1123 K".'
PRESSURE = 'accepted is a pressure such as "25 bar" (absolute) or "24 barg".'
AMOUNT = 'accepted is an amount or a flow such as "100 kmol/h", "2 t" or "50 Nm3/h".'
AMOUNT_UNIT = 'accepted is a unit of amount or flow such as "kmol/h", "t" or "Nm3/h".'
STREAMS = "accepted is one table for each stream, such as [feed.gas]."
NAMES = 'accepted is a list of species, such as ["CH4", "H2O"].'
NAMES_OR_ALL = 'accepted is "all" or a list of species, such as ["CH4", "H2O"].'
TOML = 'accepted is TOML, where text and quantities such as "850 degC" stand in quotes.'
PATH = "accepted is the path of a case file in TOML."

REMOVED = object()


def changed(key: str, value: object) -> dict[str, Any]:
    """The good case with one value set, or removed; the key's parts stand between slashes."""
    tables = deepcopy(TABLES)
    *folders, last = key.split("/")
    table = tables
    for folder in folders:
        table = table[folder]
    if value is REMOVED:
        del table[last]
    else:
        table[last] = value
    return tables


def feed_amounts(case: Case, index: int = 0) -> Mapping[str, float]:
    return case.feeds[index].amounts


def test_the_good_case_in_si(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(TEXT, encoding="utf-8")
    case = load_case(path)
    gas, steam = case.feeds
    assert (case.title, case.file, case.site_pressure) == ("Reformer outlet", str(path), 0.9e5)
    assert (gas.name, gas.unit, gas.is_flow) == ("gas", "kmol/h", True)
    assert (gas.temperature, gas.pressure) == (793.15, 30e5)
    assert gas.amounts == pytest.approx({"CH4(g)": 100 / 3.6, "N2(g)": 2 / 3.6})
    assert steam.pressure == pytest.approx(29.9e5)
    assert case.stages == (
        StageCase(
            name="outlet",
            key="outlet",
            feeds=("gas", "steam"),
            chemistry=Chemistry(
                Selection(
                    consider=(
                        "CH4(g)",
                        "H2O(g)",
                        "CO(g)",
                        "CO2(g)",
                        "H2(g)",
                        "N2(g)",
                        "C(graphite)",
                    )
                )
            ),
            specification=Specification(temperature=1123.15, pressure=25e5),
            boundary_temperature=None,
            surroundings_temperature=298.15,
            bypass=0.0,
            removed={},
        ),
    )


def test_records_of_the_case_extend_the_library() -> None:
    case = load_case(TABLES)
    assert case.library is load_library()
    source = Source("plant", "The plant's own measurements", "the user's")
    record = replace(
        load_library()["CH4(g)"], name="mine(g)", formula="mine", source_enthalpy=source.key
    )
    extended = replace(case, own_records=(record,), own_sources=(source,))
    assert extended.library["mine(g)"] is record
    assert extended.library.source("plant") is source
    assert extended.library["CO2(g)"] is load_library()["CO2(g)"]
    assert extended.library is extended.library  # made once
    gas = replace(case.feeds[0], amounts={"mine(g)": 100.0, "N2(g)": 2.0})
    known = replace(case.feeds[0], amounts={"CH4(g)": 100.0, "N2(g)": 2.0})
    steam = case.feeds[1]
    found = predict(replace(extended, feeds=(gas, steam))).final
    expected = predict(replace(case, feeds=(known, steam))).final
    assert found.certified
    assert found.heat == pytest.approx(expected.heat, rel=1e-12)
    axis = Axis("outlet.temperature", np.array([1123.15]), np.array([1123.15]), "K")
    table = scan(replace(extended, feeds=(gas, steam), axes=(axis,))).table
    assert table["heat, kW"].iloc[0] == pytest.approx(expected.heat / 1e3, rel=1e-9)
    bars = uncertainty(replace(extended, feeds=(gas, steam)))
    assert len(bars) == 1


def test_file_and_mapping_give_the_same_case(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_bytes(b"\xef\xbb\xbf" + TEXT.replace("\n", "\r\n").encode())
    of_file, of_mapping = load_case(str(path)), load_case(TABLES)
    assert of_file.feeds == of_mapping.feeds
    assert of_file.stages == of_mapping.stages
    assert of_mapping.file == ""
    assert pickle.loads(pickle.dumps(of_mapping)) == of_mapping  # noqa: S301 our own bytes


def test_the_example_of_the_reformer_loads() -> None:
    case = load_case(Path(__file__).parents[2] / "examples" / "reformer" / "case.toml")
    steam = feed_amounts(case, 1)["H2O(g)"]
    gas = feed_amounts(case)
    # as its comment says, to the digits given
    assert steam / (gas["CH4(g)"] + 2 * gas["C2H6(g)"]) == pytest.approx(3.0, abs=0.005)


def test_what_may_be_left_out_is_left_out() -> None:
    tables = deepcopy(TABLES)
    del tables["title"], tables["site_pressure"], tables["species"]
    case = load_case(tables)
    assert case.title == ""
    assert case.site_pressure == 101325.0
    assert case.feeds[1].pressure == pytest.approx(29e5 + 101325.0)
    assert case.stages[0].chemistry.selection == Selection("all", (), ())


def test_the_other_keys_of_outlet_and_species() -> None:
    tables = deepcopy(TABLES)
    tables["outlet"] |= {
        "boundary_temperature": "950 degC",
        "surroundings_temperature": "15 degC",
    }
    tables["species"] = {"consider": "all", "leave_out": ["C(graphite)"], "inert": ["N2(g)"]}
    stage = load_case(tables).stages[0]
    assert stage.boundary_temperature == pytest.approx(1223.15)
    assert stage.surroundings_temperature == pytest.approx(288.15)
    assert stage.chemistry.selection == Selection("all", ("C(graphite)",), ("N2(g)",))


def test_amounts_by_mass_normal_volume_and_with_their_own_units() -> None:
    molar_mass = load_library()["CH4(g)"].molar_mass
    by_mass = load_case(changed("feed/gas", TABLES["feed"]["gas"] | {"unit": "kg/s"}))
    assert feed_amounts(by_mass)["CH4(g)"] == pytest.approx(100 / molar_mass)
    by_volume = load_case(changed("feed/gas/unit", "Nm3/h"))
    assert feed_amounts(by_volume)["CH4(g)"] == pytest.approx(100 / 22.41396954e-3 / 3600)
    own = load_case(changed("feed/gas/amounts/CH4", "3.6 t/h"))
    assert feed_amounts(own)["CH4(g)"] == pytest.approx(1 / molar_mass)
    assert own.feeds[0].unit == "kmol/h"
    tables = changed("feed/gas/amounts", {"CH4": "20 mol/s", "N2": np.float64(0.0)})
    tables["feed"]["gas"]["amounts"]["N2"] = "0 kg/h"
    del tables["feed"]["gas"]["unit"]
    no_unit = load_case(tables)
    assert feed_amounts(no_unit) == {"CH4(g)": 20.0, "N2(g)": 0.0}
    assert no_unit.feeds[0].unit == "mol/s"


def test_numbers_of_numpy_count_as_numbers() -> None:
    case = load_case(changed("feed/gas/amounts/CH4", np.int64(360)))
    assert feed_amounts(case)["CH4(g)"] == pytest.approx(100.0)


def test_air_brings_its_parts_beside_what_is_there() -> None:
    case = load_case(changed("feed/gas/amounts", {"air": 360, "N2": 36}))
    amounts = feed_amounts(case)
    air = compositions()["air"]
    assert set(amounts) == {"N2(g)", "O2(g)", "Ar(g)", "CO2(g)"}
    assert amounts["N2(g)"] == pytest.approx(100 * air["N2(g)"] + 10)
    assert sum(amounts.values()) == pytest.approx(110.0)


def test_air_by_mass_counts_with_its_mean_molar_mass() -> None:
    tables = changed("feed/gas/amounts", {"Air": 1.0})
    tables["feed"]["gas"]["unit"] = "kg/s"
    # ISO 2533:1975 gives 28.964420 g/mol for the whole of dry air (recalled from memory); the
    # traces left out and later atomic weights change it by less than 1e-4 of itself
    assert sum(feed_amounts(load_case(tables)).values()) == pytest.approx(1 / 28.96442e-3, rel=1e-4)


def test_composition_of_air_sums_to_one() -> None:
    for mixture in compositions().values():
        assert sum(mixture.values()) == pytest.approx(1.0, abs=1e-15)


@pytest.mark.parametrize(
    ("key", "value", "sentence"),
    [
        ("title", 3, 'title: found 3; accepted is text, such as "Reformer outlet".'),
        (
            "site_pressure",
            "1.013",
            f'site_pressure: found "1.013", a number without a unit; {PRESSURE}',
        ),
        (
            "site_pressure",
            "0 barg",
            'site_pressure: found "0 barg", which is a gauge pressure; accepted is an absolute '
            'pressure such as "1.013 bar".',
        ),
        ("feed", REMOVED, f"feed: found nothing; {STREAMS}"),
        ("feed", {}, f"feed: found nothing; {STREAMS}"),
        ("feed", [1], f"feed: found a list; {STREAMS}"),
        ("feed/temperature", "5 K", f'feed.temperature: found "5 K"; {STREAMS}'),
        (
            "feed/gas/temprature",
            "520 degC",
            'feed.gas.temprature: found an unknown key (nearest: "temperature"); '
            "accepted is temperature, pressure, unit, amounts, total, analysis, basis, lumps, "
            "water_dew_point, steam_ratio, relative_humidity or fuel.",
        ),
        (
            "outlet/x",
            1,
            "outlet.x: found an unknown key; accepted is temperature, heat, heat_loss, entropy, "
            "pressure, pressure_drop, volume, service, boundary_temperature, "
            "surroundings_temperature, reference_oxygen, reactions, condense, conversion, "
            "held_fraction, approach, others, offset, activity, remove, extents, bypass or gas.",
        ),
        (
            "oulet",
            {},
            'oulet: found an unknown key (nearest: "outlet"); '
            "accepted is title, site_pressure, feed, outlet, stage, species, axis, onset, target, "
            "sample, uncertainty or correlation.",
        ),
        (
            "feed/gas/temperature",
            REMOVED,
            f"feed.gas.temperature: found nothing; {TEMPERATURE}",
        ),
        ("feed/steam/pressure", REMOVED, f"feed.steam.pressure: found nothing; {PRESSURE}"),
        ("feed/gas/unit", REMOVED, f"feed.gas.unit: found nothing; {AMOUNT_UNIT}"),
        (
            "feed/gas/amounts",
            REMOVED,
            "feed.gas.amounts: found nothing; accepted is a table of species and amounts, "
            "such as { CH4 = 100, N2 = 2 }.",
        ),
        (
            "feed/gas/amounts",
            {},
            "feed.gas.amounts: found an empty table; accepted is a table of species and amounts, "
            "such as { CH4 = 100, N2 = 2 }.",
        ),
        (
            "outlet",
            REMOVED,
            "outlet: found neither; accepted is one [outlet], or [[stage]] tables in order.",
        ),
        (
            "feed/gas/temperature",
            "850 bar",
            f'feed.gas.temperature: found "850 bar", which is a pressure; {TEMPERATURE}',
        ),
        (
            "feed/gas/temperature",
            "-300 degC",
            'feed.gas.temperature: found "-300 degC", which is not above absolute zero; '
            f"{TEMPERATURE}",
        ),
        (
            "outlet/pressure",
            "-0.95 barg",
            f'outlet.pressure: found "-0.95 barg", which is not above vacuum; {PRESSURE}',
        ),
        ("outlet/pressure", 25, f"outlet.pressure: found 25, a number without a unit; {PRESSURE}"),
        (
            "outlet/boundary_temperature",
            "900 C",
            'outlet.boundary_temperature: found "900 C", whose unit "C" could be degrees Celsius '
            'or the coulomb; accepted is "degC" for degrees Celsius.',
        ),
        ("feed/gas/unit", "bar", f'feed.gas.unit: found "bar", which is a pressure; {AMOUNT_UNIT}'),
        (
            "feed/steam/unit",
            "kg",
            'feed.steam.unit: found "kg", which is a quantity, while feed.gas is a flow in '
            '"kmol/h"; accepted are flows in all streams or quantities in all.',
        ),
        (
            "feed/gas/amounts/CH4",
            "100 kg",
            'feed.gas.amounts.CH4: found "kg", which is a quantity, in a stream in "kmol/h"; '
            "accepted is a flow.",
        ),
        (
            "feed/gas/amounts/CH4",
            -100,
            f"feed.gas.amounts.CH4: found -100, which is negative; {AMOUNT}",
        ),
        (
            "feed/gas/amounts/CH4",
            float("nan"),
            f"feed.gas.amounts.CH4: found nan, which is not finite; {AMOUNT}",
        ),
        (
            "feed/gas/amounts/CH4",
            10**400,
            f"feed.gas.amounts.CH4: found inf, which is not finite; {AMOUNT}",
        ),
        (
            "feed/gas/amounts/CH4",
            1e300,
            f"feed.gas.amounts.CH4: found 1e+300, which is too large to reckon with; {AMOUNT}",
        ),
        (
            "feed/gas/amounts/CH4",
            True,
            f"feed.gas.amounts.CH4: found true, which is no quantity; {AMOUNT}",
        ),
        (
            "feed/gas/amounts/CH4",
            "100",
            f'feed.gas.amounts.CH4: found "100", a number without a unit; {AMOUNT}',
        ),
        (
            "feed/gas/amounts/CH4(g)",
            5,
            'feed.gas.amounts.CH4(g): found CH4(g) a second time, first written "CH4"; '
            "accepted is one amount of each record.",
        ),
        (
            "feed/gas/amounts/H2O(l)",
            "5 Nm3/h",
            'feed.gas.amounts.H2O(l): found "Nm3/h" for H2O(l), which is a liquid; '
            "accepted is a molar amount or a mass.",
        ),
        ("species/consider", "ALL", f'species.consider: found "ALL"; {NAMES_OR_ALL}'),
        ("species/consider", [], f"species.consider: found an empty list; {NAMES_OR_ALL}"),
        ("species/consider", ["CO2", 3], f"species.consider: found 3 in the list; {NAMES}"),
        ("species/inert", "N2", f'species.inert: found "N2"; {NAMES}'),
        (
            "species/consider",
            ["CO2", "CO", "CO2(g)"],
            'species.consider: found CO2(g) twice, as "CO2" and as "CO2(g)"; '
            "accepted is each record once.",
        ),
        (
            "species/leave_out",
            ["CO2"],
            'species.leave_out: found "CO2(g)", which species.consider lists too; '
            "accepted is a record in one of the two.",
        ),
        (
            "species/consider",
            ["CO", "C"],
            'species.consider: found "C", which could be single atoms in the gas or a condensed '
            "form; accepted is one of C(g), C(graphite).",
        ),
        (
            "species/consider",
            ["CO", "SiO2"],
            'species.consider: found "SiO2", which could be the gas or a condensed form; accepted '
            "is one of SiO2(g), SiO2(high-cristobalite), SiO2(l), SiO2(low-cristobalite), "
            "SiO2(quartz).",
        ),
    ],
)
def test_each_fault_reads_as_one_sentence(key: str, value: object, sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        load_case(changed(key, value))
    assert str(caught.value) == sentence


def test_an_unknown_species_comes_with_the_nearest(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(TEXT.replace("CH4 = 100", "CH5 = 100"), encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load_case(path)
    text = str(caught.value)
    assert text.startswith(
        f'{path}: feed.gas.amounts.CH5: found "CH5", which names no species; '
        "accepted is a library record, the nearest are "
    )
    assert "CH4(g)" in text


def test_single_atoms_are_taken_where_they_are_meant() -> None:
    for text in ("C(g)", "atomic carbon"):
        case = load_case(changed("species/consider", ["CO", text]))
        assert case.stages[0].chemistry.selection.consider == ("CO(g)", "C(g)")
    argon = load_case(changed("feed/gas/amounts/Ar", 1))
    assert "Ar(g)" in feed_amounts(argon)


def test_a_mistyped_key_comes_before_the_missing_one() -> None:
    tables = deepcopy(TABLES)
    tables["feed"]["steam"]["presure"] = tables["feed"]["steam"].pop("pressure")
    with pytest.raises(InputError) as caught:
        load_case(tables)
    assert caught.value.key == "feed.steam.presure"


def test_a_feed_of_nothing_is_refused() -> None:
    tables = deepcopy(TABLES)
    tables["feed"]["gas"]["amounts"] = {"CH4": 0.0}
    tables["feed"]["steam"]["amounts"] = {"H2O": 0}
    with pytest.raises(InputError) as caught:
        load_case(tables)
    assert str(caught.value) == (
        "feed: found amounts that are all zero; accepted is at least one above zero."
    )


@pytest.mark.parametrize(
    ("content", "sentence"),
    [
        (
            TEXT.replace('"850 degC"', "850 degC").encode(),
            "found text that is not TOML at line 16, column 19 (expected newline or end of "
            f"document after a statement); {TOML}",
        ),
        (
            TEXT.replace("[outlet]", "[feed.gas]").encode(),
            "found text that is not TOML at line 15, column 10 (cannot declare ('feed', 'gas') "
            f"twice); {TOML}",
        ),
        (
            TEXT.replace("Reformer", "Röhre").encode("latin-1"),
            "found text that is not UTF-8 in line 1; accepted is a file saved as UTF-8.",
        ),
        (
            TEXT.encode("utf-16"),
            "found text that is not UTF-8 in line 1; accepted is a file saved as UTF-8.",
        ),
        (
            b"title = " + b"[" * 5000,
            f"found tables nested too deeply or a number too long; {PATH}",
        ),
        (
            b"title = " + b"9" * 5000,
            f"found tables nested too deeply or a number too long; {PATH}",
        ),
    ],
)
def test_files_that_are_no_case(tmp_path: Path, content: bytes, sentence: str) -> None:
    path = tmp_path / "case.toml"
    path.write_bytes(content)
    with pytest.raises(InputError) as caught:
        load_case(path)
    assert str(caught.value) == f"{path}: {sentence}"


def test_paths_that_are_no_file(tmp_path: Path) -> None:
    for path, found in (
        (tmp_path / "none.toml", "found no such file"),
        (tmp_path, "found a folder"),
    ):
        with pytest.raises(InputError) as caught:
            load_case(path)
        assert str(caught.value) == f"{path}: {found}; {PATH}"
    with pytest.raises(InputError) as caught:
        load_case("a\0b")
    assert caught.value.found == "found a path that names no file"
