"""Plant samples from the case and from tables: what is found, and faults named by their place."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pandas as pd
import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.sample.findings import Checks, SampleCheck, Side, Verdict

CASE: dict[str, Any] = {
    "title": "Invented reformer",
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "kmol/h",
            "amounts": {"CH4": 100, "N2": 2},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "kmol/h",
            "amounts": {"H2O": 300},
        },
    },
    "outlet": {"temperature": "850 degC", "pressure": "25 bar"},
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2"]},
}
DRY = ("H2", "CO", "CO2", "CH4", "N2")
TABLE = {
    "label": ["a", "b", "c"],
    "temperature, degC": [850.0, 852.0, 848.0],
    "pressure, bar": [25.0, 25.1, 24.9],
    "H2, %": [72.6, 72.5, 72.6],
    "CO, %": [13.2, 13.1, 13.3],
    "CO2, %": [8.4, 8.4, 8.4],
    "CH4, %": [5.2, 5.25, 5.15],
    "N2, %": [0.5, 0.51, 0.5],
}


def case(sample: dict[str, Any] | None = None, **changes: Any) -> gibbsmin.Case:
    tables = {**deepcopy(CASE), **changes}
    if sample is not None:
        tables["sample"] = sample
    return gibbsmin.load_case(tables)


def equilibrium(temperature: str = "850 degC") -> dict[str, float]:
    """The dry gas of the case at equilibrium."""
    outlet = {"temperature": temperature, "pressure": "25 bar"}
    stage = gibbsmin.predict(case(outlet=outlet)).final
    fractions = {
        record.formula: float(y)
        for record, y in zip(stage.records, stage.dry_mole_fractions, strict=True)
    }
    return {name: fractions[name] for name in DRY}


def sample(**changes: Any) -> dict[str, Any]:
    """A good sample, exactly at equilibrium; None takes a key away."""
    good = {"temperature": "850 degC", "pressure": "25 bar", "analysis": equilibrium()}
    return {key: value for key, value in {**good, **changes}.items() if value is not None}


def checked(**changes: Any) -> SampleCheck:
    (found,) = gibbsmin.check(case(sample(**changes))).samples
    return found


def table_of(**changes: list[Any]) -> pd.DataFrame:
    return pd.DataFrame({**TABLE, **changes})


def checks(table: pd.DataFrame, rules: dict[str, Any] | None = None) -> Checks:
    return gibbsmin.check(case(rules), table, "samples.csv")


def faults(table: pd.DataFrame, rules: dict[str, Any] | None = None) -> list[str]:
    return [fault.sentence for fault in checks(table, rules).faults]


def test_a_sample_at_equilibrium_is_told_so() -> None:
    found = checked()
    assert found.judgement.verdict is Verdict.AT_EQUILIBRIUM
    assert found.closure.chi_square < 1e-15
    assert found.closure.degrees_of_freedom == 3
    assert [reaction.text for reaction in found.reactions] == [
        "CH4(g) + H2O(g) = CO(g) + 3 H2(g)",
        "CO(g) + H2O(g) = CO2(g) + H2(g)",
    ]
    for reaction in found.reactions:
        assert abs(reaction.approach.value) < 1e-6
        assert abs(reaction.log_ratio.value) < 1e-9
        assert reaction.side is Side.AT
    assert 0.0 <= found.energetics.excess_over_RT < 1e-12
    assert found.equilibrium.temperature.value == pytest.approx(1123.15, abs=1e-4)
    assert found.equilibrium.certified


def test_excess_gibbs_energy_is_what_entropy_the_stage_could_still_make() -> None:
    """With the boundary at the outlet's temperature T (S_limit − S_run) = G_run − G_equilibrium."""
    found = checked(analysis=equilibrium("800 degC"))
    energetics, T = found.energetics, found.temperature.value
    missing = T * (energetics.entropy_limit - energetics.entropy_as_run)
    assert energetics.excess_gibbs_energy > 1.0
    assert missing == pytest.approx(energetics.excess_gibbs_energy, rel=1e-9)
    assert energetics.entropy_as_run > 0.0


def test_a_colder_gas_is_short_and_its_temperature_found() -> None:
    found = checked(analysis=equilibrium("800 degC"))
    reforming = found.reactions[0]
    assert found.judgement.verdict is Verdict.SHORT
    assert reforming.side is Side.SHORT
    assert reforming.forward == 1
    assert reforming.equilibrium_temperature.value == pytest.approx(1073.15, abs=1e-6)
    assert reforming.approach.value == pytest.approx(50.0, abs=1e-6)
    assert found.equilibrium.temperature.value == pytest.approx(1073.15, abs=1e-3)
    assert found.equilibrium.at_measured.probability < 1e-6
    assert found.equilibrium.anywhere.probability > 0.9
    assert found.judgement.headline.startswith(
        "Short of equilibrium: CH4(g) + H2O(g) = CO(g) + 3 H2(g); T − T_eq = +50.0 ± "
    )


def test_a_hotter_gas_is_beyond() -> None:
    found = checked(analysis=equilibrium("900 degC"))
    assert found.judgement.verdict is Verdict.BEYOND
    assert found.reactions[0].side is Side.BEYOND
    assert found.reactions[0].approach.value == pytest.approx(-50.0, abs=1e-6)


def test_shift_may_come_from_either_side() -> None:
    """From CO2 and H2 the shift runs backwards, and too little CO is short of equilibrium."""
    feed = {"dry": {**CASE["feed"]["gas"], "amounts": {"CO2": 100, "H2": 300}}}
    tables = {**deepcopy(CASE), "feed": feed, "species": {"consider": ["CO2", "H2", "CO", "H2O"]}}
    tables["sample"] = {
        "temperature": "700 degC",
        "pressure": "25 bar",
        "analysis": {"CO2": "22.0 %", "H2": "73.5 %", "CO": "4.5 %"},
    }
    (found,) = gibbsmin.check(gibbsmin.load_case(tables)).samples
    (shift,) = found.reactions
    as_water_gas_shift = 1 if shift.coefficients["CO2(g)"] > 0 else -1
    assert shift.forward == -as_water_gas_shift
    assert np.sign(shift.log_ratio.value) == as_water_gas_shift
    assert shift.side is Side.SHORT


def test_a_gross_error_is_not_credible_and_named() -> None:
    analysis = equilibrium()
    analysis["H2"] += 0.06
    found = checked(analysis=analysis)
    assert found.judgement.verdict is Verdict.NOT_CREDIBLE
    assert found.suspects.single == "H2"
    assert found.suspects.size == pytest.approx(0.06, rel=0.05)
    assert found.judgement.headline == "Sample not credible; the likeliest error is in H2."
    assert found.judgement.likely == (
        "If one measurement is wrong, it is likely H2, which reads high by about 6 points of a "
        "per cent.",
    )


def test_carbon_monoxide_and_dioxide_are_suspected_together() -> None:
    analysis = equilibrium()
    analysis["CO"] += 0.02
    found = checked(analysis=analysis)
    assert found.judgement.verdict is Verdict.NOT_CREDIBLE
    assert set(found.suspects.names) >= {"CO", "CO2"}
    assert found.suspects.single == ""


def test_flows_are_said_not_to_be_judged() -> None:
    unjudged = [m.name for m in checked().measurements if not m.can_be_judged]
    assert unjudged == ["flow of gas", "flow of steam"]
    assert any(
        fact == "Nothing else in the sample tells about the flow of gas and the flow of steam: "
        "these cannot be judged."
        for fact in checked().judgement.facts
    )


def test_routes_of_carbon_are_told() -> None:
    solids = {solid.record: dict(solid.routes) for solid in checked().solids}
    carbon = solids["C(graphite)"]
    assert {"2 CO = C + CO2", "CH4 = C + 2 H2", "H2 + CO = C + H2O"} <= set(carbon)
    # At equilibrium every route gives the same activity, that of the predicted outlet.
    assert list(carbon.values()) == pytest.approx([next(iter(carbon.values()))] * len(carbon))


def test_a_limit_is_half_of_it_with_a_rectangular_spread() -> None:
    analysis: dict[str, Any] = {**equilibrium(), "C2H6": "<0.06 %"}
    found = checked(analysis=analysis)
    (ethane,) = [m for m in found.measurements if m.name == "C2H6"]
    assert ethane.value == pytest.approx(0.0003)
    assert ethane.uncertainty == pytest.approx(0.0006 / 12**0.5)
    assert ethane.below == pytest.approx(0.0006)
    (leakage,) = [each for each in found.leakages if each.record == "C2H6(g)"]
    assert leakage.below == pytest.approx(0.0006)
    of_ethane = next(r for r in found.reactions if "C2H6(g)" in r.coefficients)
    assert of_ethane.faint == ("C2H6(g)",)
    assert np.isneginf(of_ethane.approach_limit.lower)
    assert found.notes == ("C2H6 is below its detection limit of 600 ppm.",)


def test_lumped_analytes_count_together() -> None:
    analysis = equilibrium()
    lumped = {"CO+CO2": analysis.pop("CO") + analysis.pop("CO2"), **analysis}
    found = checked(analysis=lumped)
    assert found.closure.chi_square < 1e-12
    assert found.closure.degrees_of_freedom == 2
    reconciled = {each.record: each.reconciled.value for each in found.composition}
    assert reconciled["CO(g)"] == pytest.approx(equilibrium()["CO"], rel=1e-6)


def test_a_normalised_analysis_has_no_sum_to_judge() -> None:
    found = checked(normalised=True)
    assert found.closure.degrees_of_freedom == 2
    assert abs(found.reactions[0].approach.value) < 1e-6


def test_uncertainties_as_stated() -> None:
    stated = {"reading": "2 %", "floor": "0.1 %", "temperature": "5 K", "pressure": "1 %"}
    found = checked(uncertainty={**stated, "CO": "0.5 %"})
    by_name = {m.name: m.uncertainty for m in found.measurements}
    assert by_name["H2"] == pytest.approx(np.hypot(0.02 * equilibrium()["H2"], 0.001))
    assert by_name["CO"] == pytest.approx(0.005)
    assert found.temperature.uncertainty == 5.0
    assert found.pressure.uncertainty == pytest.approx(25e3)


def test_flow_uncertainties_come_from_the_case() -> None:
    tables = {**deepcopy(CASE), "sample": sample()}
    tables["uncertainty"] = {"feed.steam": "3 %", "feed.gas.amounts.N2": "10 %"}
    (found,) = gibbsmin.check(gibbsmin.load_case(tables)).samples
    by_name = {m.name: m.uncertainty for m in found.measurements}
    assert by_name["flow of steam"] == pytest.approx(0.03)
    assert by_name["flow of gas"] == pytest.approx(0.01)
    assert by_name["N2(g) in gas"] == pytest.approx(0.10)


def test_a_constant_of_the_users_own_is_used_and_said_so() -> None:
    own = {
        "reaction": "CH4 + H2O = CO + 3 H2",
        "equilibrium_constant": {"800 degC": 160, "900 degC": 1400},
    }
    whole = gibbsmin.check(case(sample(reaction=[own])))
    (reaction,) = whole.samples[0].reactions
    assert reaction.own_constant
    assert reaction.log_constant.value == pytest.approx(
        np.interp(1 / 1123.15, [1 / 1173.15, 1 / 1073.15], np.log([1400, 160])), rel=1e-9
    )
    assert (
        "K of CH4 + H2O = CO + 3 H2 is the case's own, for this reaction alone; the fit of "
        "equilibrium to the whole sample uses the library's." in whole.assumptions
    )


def shift_case(**inlet: Any) -> dict[str, Any]:
    """Inlet and outlet of a shift reactor at equilibrium, methane and nitrogen inert."""
    amounts = {"CO": 12.0, "CO2": 9.0, "H2": 72.0, "CH4": 6.0, "N2": 1.0, "H2O": 55.0}
    feed = {"temperature": "360 degC", "pressure": "26 bar", "unit": "kmol/h", "amounts": amounts}
    tables: dict[str, Any] = {
        "feed": {"raw": feed},
        "outlet": {"temperature": "430 degC", "pressure": "25 bar"},
        "species": {"consider": list(amounts), "inert": ["CH4", "N2"]},
    }
    stage = gibbsmin.predict(gibbsmin.load_case(tables)).final
    dry = zip(stage.records, stage.dry_mole_fractions, strict=True)
    outlet = {record.formula: float(y) for record, y in dry if record.formula != "H2O"}
    entering = {name: amount / 100.0 for name, amount in amounts.items() if name != "H2O"}
    tables["sample"] = {
        "temperature": "430 degC",
        "pressure": "25 bar",
        "analysis": outlet,
        "inlet": {"analysis": entering, **inlet},
    }
    return tables


def test_inlet_and_outlet_close_together() -> None:
    (found,) = gibbsmin.check(gibbsmin.load_case(shift_case(steam_ratio=0.55))).samples
    assert found.closure.chi_square < 1e-12
    assert found.closure.degrees_of_freedom == 5
    (shift,) = found.reactions
    assert abs(shift.approach.value) < 1e-5
    assert found.judgement.verdict is Verdict.AT_EQUILIBRIUM
    steam = next(m for m in found.measurements if m.name == "steam ratio")
    assert (steam.basis, steam.value, steam.can_be_judged) == ("ratio", 0.55, False)


def test_without_the_steam_a_shift_is_not_decidable() -> None:
    (found,) = gibbsmin.check(gibbsmin.load_case(shift_case())).samples
    assert found.judgement.verdict is Verdict.NOT_DECIDABLE
    assert found.closure.degrees_of_freedom == 5
    assert found.judgement.look_at == ("A measurement of H2O(g) would decide.",)
    assert np.isnan(found.energetics.excess_gibbs_energy)


def test_rows_of_a_table_equal_samples_of_the_case() -> None:
    found = checks(table_of())
    assert [each.label for each in found.samples] == ["a", "b", "c"]
    assert [each.row for each in found.samples] == [2, 3, 4]
    assert found.faults == ()
    for k, each in enumerate(found.samples):
        analysis = {name: f"{TABLE[f'{name}, %'][k]} %" for name in DRY}
        single = checked(
            temperature=f"{TABLE['temperature, degC'][k]} degC",
            pressure=f"{TABLE['pressure, bar'][k]} bar",
            analysis=analysis,
        )
        assert each.closure.chi_square == pytest.approx(single.closure.chi_square, rel=1e-9)
        for ours, theirs in zip(each.reactions, single.reactions, strict=True):
            assert ours.approach.value == pytest.approx(theirs.approach.value, rel=1e-9)
            assert ours.approach.uncertainty == pytest.approx(theirs.approach.uncertainty, rel=1e-9)


def test_columns_of_uncertainties_flows_and_words() -> None:
    table = table_of(
        **{
            "u H2, %": [0.3] * 3,
            "u temperature, K": [2.0] * 3,
            "u pressure, bar": [0.2] * 3,
            "feed.steam, t/h": [5.4, np.nan, 5.5],
            "u feed.steam, %": [2.0] * 3,
            "normalised": ["yes", "no", ""],
        }
    )
    first, second, third = checks(table).samples
    readings = {m.name: m for m in first.measurements}
    assert readings["H2"].uncertainty == pytest.approx(0.003)
    assert first.temperature.uncertainty == 2.0
    assert first.pressure.uncertainty == pytest.approx(2e4)
    # 300 kmol/h of water are 5.4045 t/h.
    assert readings["flow of steam"].value == pytest.approx(5.4 / 5.4045, rel=1e-5)
    assert readings["flow of steam"].uncertainty == pytest.approx(0.02 * 5.4 / 5.4045, rel=1e-5)
    assert {m.name: m for m in second.measurements}["flow of steam"].value == 1.0
    assert [each.closure.degrees_of_freedom for each in (first, second, third)] == [2, 3, 3]


def test_a_blank_cell_was_not_measured() -> None:
    found = checks(table_of(**{"CH4, %": [5.2, np.nan, ""]}))
    assert [each.closure.degrees_of_freedom for each in found.samples] == [3, 2, 2]
    assert [m.name for m in found.samples[1].measurements] == [
        "H2", "CO", "CO2", "N2", "flow of gas", "flow of steam"
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        (
            {"CH4, %": [5.2, 35.25, 5.15]},
            "samples.csv: row 3: found readings that add up to 129.8 %; accepted is at most 110 %.",
        ),
        (
            {"CH4, %": [5.2, -5.25, 5.15]},
            'samples.csv: row 3, column "CH4, %": found -5.25, a negative reading; accepted is a '
            'fraction of the gas such as "71.9 %", "50 ppm" or "<0.05 %".',
        ),
        (
            {"CH4, %": [5.2, "about five", 5.15]},
            'samples.csv: row 3, column "CH4, %": found "about five", which is no reading; '
            'accepted is a fraction of the gas such as "71.9 %", "50 ppm" or "<0.05 %".',
        ),
        (
            {
                f"{name}, %": [TABLE[f"{name}, %"][0], np.nan, TABLE[f"{name}, %"][2]]
                for name in DRY
            },
            "samples.csv: row 3: found no reading of the outlet; accepted is at least one that is "
            "not blank.",
        ),
        (
            {"temperature, degC": [850.0, np.nan, 848.0]},
            "samples.csv: row 3: found no temperature; accepted is the temperature at the sampling "
            "point in each row.",
        ),
        (
            {"pressure, bar": [25.0, "", 24.9]},
            "samples.csv: row 3: found no pressure; accepted is the pressure at the sampling point "
            "in each row.",
        ),
        (
            {"pressure, bar": [25.0, -1.0, 24.9]},
            'samples.csv: row 3, column "pressure, bar": found -100000; accepted is a number above '
            "zero.",
        ),
        (
            {"SO2, ppm": [np.nan, 40.0, np.nan]},
            'samples.csv: row 3, SO2: found "SO2", with the element S that no feed brings; '
            "accepted are records of C, H, N, O.",
        ),
        (
            {"H2O, %": [np.nan, 30.0, np.nan]},
            "samples.csv: row 3: found a reading of H2O(g) in a dry analysis; accepted is a wet "
            "analysis, or one without H2O(g).",
        ),
        (
            {"CO2, % dry": [np.nan, 8.0, np.nan], "H2O, % wet": [np.nan, 30.0, np.nan]},
            'samples.csv: row 3: found a dry analysis in column "CO2, % dry" and a wet one in '
            'column "H2O, % wet"; accepted is one basis in a row.',
        ),
        (
            {"basis": ["dry", "moist", "dry"]},
            'samples.csv: row 3, column "basis": found "moist"; accepted is "dry" or "wet".',
        ),
        (
            {"normalised": ["no", "yes", "no"], "CO, %": [13.2, 10.0, 13.3]},
            "samples.csv: row 3: found readings that add up to 96.66 %, said to be normalised; "
            "accepted is 99.5 to 100.5 %, or an analysis that is not normalised.",
        ),
        (
            {"CO+CO2, %": [np.nan, 21.0, np.nan]},
            "samples.csv: row 3: found CO(g) in two readings; accepted is each record in one "
            "reading.",
        ),
    ],
)
def test_a_faulty_row_is_named_and_the_others_run(
    changes: dict[str, list[Any]], sentence: str
) -> None:
    columns = dict(changes)
    if "CO2, % dry" in columns:
        table = table_of(**columns).drop(columns="CO2, %")
    else:
        table = table_of(**columns)
    found = checks(table)
    assert [fault.sentence for fault in found.faults] == [sentence]
    assert [(fault.label, fault.row) for fault in found.faults] == [("b", 3)]
    assert [each.label for each in found.samples] == ["a", "c"]


@pytest.mark.parametrize(
    ("column", "sentence"),
    [
        (
            "XY9, %",
            'samples.csv: column "XY9, %": found "XY9", which names no species; accepted is a '
            "library record, the nearest are ",
        ),
        (
            "CO",
            'samples.csv: column "CO": found no unit; accepted is %, ppm, ppb or 1.',
        ),
        (
            "CO, bar",
            'samples.csv: column "CO, bar": found the unit "bar"; accepted is %, ppm, ppb or 1.',
        ),
        (
            "temperature, bar",
            'samples.csv: column "temperature, bar": found "1 bar", which is a pressure; accepted '
            'is a temperature such as "850 degC" or "1123 K".',
        ),
        (
            "feed.water, t/h",
            'samples.csv: column "feed.water, t/h": found "water", which is no stream; accepted is '
            "one of gas, steam.",
        ),
        (
            "feed.steam, t",
            'samples.csv: column "feed.steam, t": found a unit "t"; accepted is a unit of the same '
            'kind as the stream\'s "kmol/h".',
        ),
        (
            "CO2, ppm",
            'samples.csv: column "CO2, ppm": found the same as in column "CO2, %"; accepted is one '
            "column for each measurement.",
        ),
    ],
)
def test_a_column_that_means_nothing_is_refused(column: str, sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        checks(table_of(**{column: [1.0, 2.0, 3.0]}))
    assert str(caught.value).startswith(sentence)
    assert str(caught.value) == sentence or "nearest" in sentence


@pytest.mark.parametrize(
    ("changes", "sentence"),
    [
        (
            {"temperature": None},
            "sample.temperature: found nothing; accepted is the temperature at the sampling point.",
        ),
        (
            {"analysis": {"H2": "-3 %"}},
            'sample.analysis.H2: found "-3 %", a negative reading; accepted is a fraction of the '
            'gas such as "71.9 %", "50 ppm" or "<0.05 %".',
        ),
        (
            {"analysis": {"H2": "130 %"}},
            'sample.analysis.H2: found "130 %", which is above 100 %; accepted is a fraction of '
            'the gas such as "71.9 %", "50 ppm" or "<0.05 %".',
        ),
        (
            {"analysis": {}},
            "sample.analysis: found an empty table; accepted is a table of readings, such as "
            '{ H2 = "71.9 %", CO = "<50 ppm" }.',
        ),
        (
            {"basis": "damp"},
            'sample.basis: found "damp"; accepted is "dry" or "wet".',
        ),
        (
            {"stage": "shift"},
            'sample.stage: found "shift", which is no stage; accepted is one of outlet.',
        ),
        (
            {"uncertainty": {"temperature": "0 K"}},
            'sample.uncertainty.temperature: found "0 K"; accepted is above zero.',
        ),
        (
            {"thresholds": {"credible": 0}},
            "sample.thresholds.credible: found 0; accepted is a probability such as 0.05.",
        ),
        (
            {"feed": {"water": "3 t/h"}},
            'sample.feed.water: found "water", which is no stream; accepted is one of gas, steam.',
        ),
        (
            {"inlet": {"stream": "raw"}},
            'sample.inlet.stream: found "raw", which is no stream; accepted is one of gas, steam.',
        ),
        (
            {"steam_ratio": -1},
            "sample.steam_ratio: found -1; accepted is moles of steam to a mole of dry gas, such "
            "as 0.4.",
        ),
        (
            {"reaction": [{"reaction": "CH4 = C(graphite) + 2 H2",
                           "equilibrium_constant": {"800 degC": 3.0}}]},
            "sample.reaction.1.equilibrium_constant: found one temperature; accepted are at least "
            "two, so that K(T) follows.",
        ),
        (
            {"reaction": [{"reaction": "N2 + 3 H2 = 2 NH3"}]},
            'sample.reaction.1.reaction: found "NH3(g)", which the sample does not tell; accepted '
            "are CH4(g), CO(g), CO2(g), H2(g), H2O(g), N2(g), or a solid or liquid.",
        ),
        (
            {"analysis": {"H2": "70 %", "CO": "70 %"}},
            "sample.analysis: found readings that add up to 140 %; accepted is at most 110 %.",
        ),
    ],
)  # fmt: skip
def test_a_fault_of_the_case_reads_as_one_sentence(changes: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        checked(**changes)
    assert str(caught.value) == sentence


def test_a_case_without_a_sample_needs_a_table() -> None:
    with pytest.raises(InputError) as caught:
        gibbsmin.check(case())
    assert str(caught.value) == (
        "sample: found no sample; accepted is a [sample] table with an analysis, or a table of "
        "samples."
    )


def test_thresholds_move_the_verdict() -> None:
    analysis = equilibrium("842 degC")
    assert checked(analysis=analysis).judgement.verdict is Verdict.SHORT
    mild = checked(analysis=analysis, thresholds={"equilibrium": 1e-4})
    assert mild.judgement.verdict is Verdict.AT_EQUILIBRIUM
    blurred = {"reading": "8 %", "temperature": "40 K"}
    assert checked(uncertainty=blurred).judgement.verdict is Verdict.NOT_DECIDABLE
    coarse = checked(uncertainty=blurred, thresholds={"resolution": "500 K"})
    assert coarse.judgement.verdict is Verdict.AT_EQUILIBRIUM


def test_a_train_is_checked_at_the_stage_named() -> None:
    tables = deepcopy(CASE)
    del tables["outlet"]
    tables["stage"] = [
        {"name": "reformer", "temperature": "850 degC", "pressure": "25 bar"},
        {"name": "shift", "temperature": "400 degC", "pressure": "24 bar",
         "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2"], "inert": ["CH4"]}},
    ]  # fmt: skip
    tables["sample"] = sample(stage="reformer")
    found = gibbsmin.check(gibbsmin.load_case(tables))
    assert found.stage == "reformer"
    assert found.samples[0].judgement.verdict is Verdict.AT_EQUILIBRIUM


@pytest.mark.parametrize("equation", ["Soave-Redlich-Kwong", "Peng-Robinson"])
def test_a_real_gas_at_equilibrium_is_found_there(equation: str) -> None:
    """Ammonia at 198 bar, where an ideal gas would be 8 to 12 K off."""
    tables: dict[str, Any] = {
        "feed": {
            "gas": {
                "temperature": "400 degC",
                "pressure": "200 bar",
                "unit": "mol",
                "amounts": {"H2": 3.0, "N2": 1.0, "CH4": 0.3, "NH3": 0.1},
            }
        },
        "outlet": {"temperature": "470 degC", "pressure": "198 bar", "gas": equation},
        "species": {"consider": ["H2", "N2", "NH3", "CH4"], "inert": ["CH4"]},
    }
    outlet = gibbsmin.predict(gibbsmin.load_case(deepcopy(tables))).stages[0]
    tables["sample"] = {
        "temperature": "470 degC",
        "pressure": "198 bar",
        "basis": "wet",
        "analysis": {
            record.name: f"{100.0 * y:.15g} %"
            for record, y in zip(outlet.records, outlet.mole_fractions, strict=True)
        },
    }
    checks = gibbsmin.check(gibbsmin.load_case(deepcopy(tables)))
    (reaction,) = checks.samples[0].reactions
    assert reaction.approach.value == pytest.approx(0.0, abs=1e-6)
    assert checks.samples[0].energetics.excess_over_RT == pytest.approx(0.0, abs=1e-12)
    assert checks.samples[0].equilibrium.temperature.value == pytest.approx(743.15, abs=1e-4)
    assert (
        f"The gas is that of {equation}; its fugacity coefficients are those of the gas as "
        "measured, also where other temperatures are tried." in checks.assumptions
    )
    tables["outlet"]["gas"] = "ideal"
    (as_ideal,) = gibbsmin.check(gibbsmin.load_case(tables)).samples[0].reactions
    assert 8.0 < as_ideal.approach.value < 12.0
