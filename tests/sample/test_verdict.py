"""The verdict's branches, each from evidence that differs in one thing; sentences whole."""

from __future__ import annotations

import math
from dataclasses import replace
from typing import Any

import pytest

from gibbsmin.sample.evidence import Evidence
from gibbsmin.sample.findings import (
    Closure,
    EquilibriumFit,
    Estimate,
    Interval,
    Leakage,
    Measurement,
    ReactionFinding,
    Side,
    Stream,
    Suspects,
    Verdict,
)
from gibbsmin.sample.thresholds import Thresholds
from gibbsmin.sample.verdict import verdict_of

NAN, INF = math.nan, math.inf
NOBODY = Suspects((), "", NAN)
REFORMING = "CH4 + H2O = CO + 3 H2"
SHIFT = "CO + H2O = CO2 + H2"


def reaction(text: str = REFORMING, **changes: Any) -> ReactionFinding:
    good = ReactionFinding(
        text=text,
        coefficients={"CH4(g)": -1.0, "H2O(g)": -1.0, "CO(g)": 1.0, "H2(g)": 3.0},
        log_quotient=Estimate(6.0, 0.05),
        log_constant=Estimate(6.0, 0.08),
        data_uncertainty=4.0,
        log_ratio=Estimate(0.0, 0.08),
        affinity=Estimate(0.0, 700.0),
        equilibrium_temperature=Estimate(1123.15, 2.0),
        approach=Estimate(1.0, 3.6),
        approach_limit=Interval(-6.0, 8.0, 0.95),
        undefined="",
        side=Side.AT,
        forward=1,
        own_constant=False,
        faint=(),
    )
    return replace(good, **changes)


SHORT = reaction(log_ratio=Estimate(-0.4, 0.08), approach=Estimate(18.0, 3.6), side=Side.SHORT)
BEYOND = reaction(log_ratio=Estimate(0.4, 0.08), approach=Estimate(-18.0, 3.6), side=Side.BEYOND)
COOLER_SHIFT = reaction(
    SHIFT, log_ratio=Estimate(0.3, 0.03), approach=Estimate(90.0, 9.0), side=Side.BEYOND
)


def measurement(name: str, stream: Stream = Stream.OUTLET, **changes: Any) -> Measurement:
    reading = Measurement(
        name, f"{name}(g)", stream, "dry", 0.7, 0.007, 0.0, Estimate(0.7, 0.001), 0.9, 0.1, True
    )
    return replace(reading, **changes)


def evidence(**changes: Any) -> Evidence:
    good = Evidence(
        temperature=Estimate(1123.15, 3.0),
        closure=Closure(2.0, 3, 0.57),
        measurements=(
            measurement("H2"),
            measurement("flow of gas", Stream.FEED, can_be_judged=False, adjustment=NAN),
        ),
        suspects=NOBODY,
        reactions=(reaction(),),
        leakages=(),
        fit=EquilibriumFit(
            Closure(1.0, 2, 0.61), Closure(0.5, 1, 0.48), Estimate(1122.0, 1.1),
            Interval(1119.8, 1124.2, 0.95), True,
        ),
        thresholds=Thresholds(),
    )  # fmt: skip
    return replace(good, **changes)


def misfit(anywhere: float, best: float = 1105.0) -> EquilibriumFit:
    return EquilibriumFit(
        Closure(25.0, 2, 4e-6), Closure(9.0, 1, anywhere), Estimate(best, 1.1),
        Interval(best - 2, best + 2, 0.95), True,
    )  # fmt: skip


def test_facts_are_told_whole() -> None:
    found = verdict_of(evidence())
    assert found.verdict is Verdict.AT_EQUILIBRIUM
    assert found.headline == "At equilibrium within errors at 850.0 °C (p = 0.61)."
    assert found.facts == (
        "The element balance closes within the stated errors: chi-square 2.0 with 3 degrees of "
        "freedom (p = 0.57).",
        "Nothing else in the sample tells about the flow of gas: this cannot be judged.",
        "Equilibrium at the measured temperature fits the sample: chi-square difference 1.0 with "
        "2 degrees of freedom (p = 0.61).",
        "Equilibrium fits best at 848.9 °C, with a standard uncertainty of 1.1 K; it fits "
        "(p = 0.48).",
        "CH4 + H2O = CO + 3 H2: T − T_eq = +1.0 ± 3.6 K, at equilibrium within errors.",
    )
    assert found.likely == ()
    assert found.look_at == ()


def test_short_with_one_temperature_for_all() -> None:
    found = verdict_of(evidence(reactions=(SHORT,), fit=misfit(0.5)))
    assert found.verdict is Verdict.SHORT
    assert found.headline == (
        "Short of equilibrium: CH4 + H2O = CO + 3 H2; T − T_eq = +18.0 ± 3.6 K."
    )
    assert found.likely == (
        "The reaction had not the time, the catalyst or the mixing to come to its end.",
        "Unreacted feed that went around the catalyst would look the same.",
        "All reactions agree on 831.9 °C: a thermocouple that reads wrong would explain it as "
        "well.",
    )
    assert [line.split(":")[0] for line in found.look_at] == [
        "Catalyst activity", "Bypass", "The thermocouple"
    ]  # fmt: skip


def test_a_temperature_far_away_is_no_misreading() -> None:
    found = verdict_of(evidence(reactions=(SHORT,), fit=misfit(0.5, best=900.0)))
    assert not any("thermocouple" in line for line in found.likely)


def test_short_beside_a_shift_that_ran_on() -> None:
    found = verdict_of(
        evidence(
            reactions=(replace(SHORT, log_ratio=Estimate(-1.4, 0.08)), COOLER_SHIFT),
            fit=misfit(1e-4),
        )
    )
    assert found.verdict is Verdict.SHORT
    assert found.likely[1] == (
        "CO + H2O = CO2 + H2 stands as at a cooler place: it may have run on in the sample line."
    )
    assert found.look_at[1].startswith("The sample line: ")


def test_beyond_with_one_temperature_for_all() -> None:
    found = verdict_of(evidence(reactions=(BEYOND,), fit=misfit(0.5, best=1141.0)))
    assert found.verdict is Verdict.BEYOND
    assert found.likely == (
        "A reaction does not pass its own equilibrium: a measurement, the feed or the list of "
        "candidates is wrong, or the gas was last at equilibrium somewhere else.",
        "All reactions agree on 867.9 °C: the gas may have frozen at a place of that temperature, "
        "or the thermocouple reads wrong.",
    )


def test_beyond_while_another_is_short() -> None:
    found = verdict_of(evidence(reactions=(SHORT, COOLER_SHIFT), fit=misfit(1e-4)))
    assert found.verdict is Verdict.BEYOND
    assert found.headline.startswith("Beyond equilibrium: CO + H2O = CO2 + H2; ")
    assert found.likely[2] == (
        "At the same time CH4 + H2O = CO + 3 H2 fell short: bypassed feed may have mixed in, or "
        "one reaction may have driven the other."
    )


@pytest.mark.parametrize(
    ("suspects", "likely", "look"),
    [
        (
            Suspects(("H2",), "H2", -0.021),
            "If one measurement is wrong, it is likely H2, which reads low by about 2.1 points of "
            "a per cent.",
            "The analyser, against its calibration gas; then another sample.",
        ),
        (
            Suspects(("CO", "CO2"), "", 0.01),
            "If one measurement is wrong, it is likely one of CO or CO2; the sample does not tell "
            "them apart.",
            "The analyser, against its calibration gas; then another sample.",
        ),
        (
            Suspects(("flow of gas",), "flow of gas", 0.08),
            "If one measurement is wrong, it is likely the flow of gas, which reads high by about "
            "8 % of its nominal value.",
            "The feed meters, against each other and against the day's totals.",
        ),
    ],
)
def test_not_credible(suspects: Suspects, likely: str, look: str) -> None:
    found = verdict_of(evidence(closure=Closure(40.0, 3, 1e-8), suspects=suspects))
    assert found.verdict is Verdict.NOT_CREDIBLE
    assert found.likely == (likely,)
    assert found.look_at[0] == look
    assert found.facts[0] == (
        "The element balance does not close within the stated errors: chi-square 40.0 with 3 "
        "degrees of freedom (p < 1e-6)."
    )


def test_a_poor_closure_is_mentioned() -> None:
    found = verdict_of(evidence(closure=Closure(9.0, 3, 0.03), suspects=Suspects(("N2",), "", 0.1)))
    assert found.verdict is Verdict.AT_EQUILIBRIUM
    assert found.likely == (
        "The closure is poor (p = 0.03); if a measurement is wrong, it is likely N2.",
    )


def test_without_redundancy_the_closure_is_not_tested() -> None:
    found = verdict_of(evidence(closure=Closure(0.0, 0, NAN)))
    assert found.facts[0] == (
        "Nothing in the sample is redundant, so that its closure cannot be tested."
    )


def test_faint_traces_are_told_by_limits_and_residues() -> None:
    faint = reaction(
        log_ratio=Estimate(16.0, 0.4), approach=Estimate(-350.0, 12.0), faint=("CO(g)",),
        approach_limit=Interval(-374.7, INF, 0.95), side=Side.SHORT, forward=-1,
    )  # fmt: skip
    leakage = Leakage("CO(g)", Estimate(3.1e-6, 1e-6), 0.0, 2.3e-13)
    found = verdict_of(
        evidence(reactions=(faint,), leakages=(leakage,), fit=misfit(1e-4, best=960.0))
    )
    residue = "CO(g) is 3.1 ppm ± 1 ppm of the dry gas, 2.3e-07 ppm at equilibrium"
    assert found.headline == f"Short of equilibrium: CH4 + H2O = CO + 3 H2; {residue}."
    assert found.facts[-2:] == (
        "CH4 + H2O = CO + 3 H2: T − T_eq is at least −374.7 K (95 %); CO(g) is below 5 standard "
        "uncertainties.",
        f"{residue}.",
    )
    below = replace(leakage, below=5e-6)
    found = verdict_of(evidence(leakages=(below,)))
    assert found.facts[-1] == ("CO(g) is below 5 ppm of the dry gas, 2.3e-07 ppm at equilibrium.")


def test_undecided_says_what_would_decide() -> None:
    wide = reaction(approach=Estimate(5.0, 60.0), side=Side.UNKNOWN)
    found = verdict_of(evidence(reactions=(wide,)))
    assert found.verdict is Verdict.NOT_DECIDABLE
    assert found.headline == "Not decidable: CH4 + H2O = CO + 3 H2 is not known to 50 K."
    assert found.look_at == (
        "A more certain measurement of CH4(g), H2O(g), CO(g) and H2(g) would decide.",
    )
    found = verdict_of(evidence(reactions=()))
    assert found.headline == ("Not decidable: no reaction runs between the records of the sample.")
    found = verdict_of(evidence(fit=misfit(0.5)))
    assert found.headline == (
        "Not decidable: equilibrium does not fit, yet no reaction is off by itself."
    )


def test_what_has_no_temperature_is_told_by_its_quotient() -> None:
    flat = reaction(
        equilibrium_temperature=Estimate(NAN, NAN), approach=Estimate(NAN, NAN),
        log_ratio=Estimate(-0.5, 0.1), side=Side.SHORT,
        undefined="its enthalpy is next to zero, so that Q tells no temperature",
    )  # fmt: skip
    found = verdict_of(evidence(reactions=(flat,), fit=misfit(1e-4)))
    assert found.headline == ("Short of equilibrium: CH4 + H2O = CO + 3 H2; ln(Q/K) = −0.50 ± 0.1.")
    assert found.facts[-1] == (
        "CH4 + H2O = CO + 3 H2: T_eq is undefined, its enthalpy is next to zero, so that Q tells "
        "no temperature. ln(Q/K) is −0.50."
    )


def test_a_constant_of_the_users_own_decides_by_itself() -> None:
    own = reaction(own_constant=True)
    found = verdict_of(evidence(reactions=(own,), fit=misfit(1e-4)))
    assert found.verdict is Verdict.AT_EQUILIBRIUM
    assert found.headline == "At equilibrium within errors at 850.0 °C, by the K of the case."
    assert found.facts[-1].startswith("CH4 + H2O = CO + 3 H2, by the K of the case: ")


def test_an_uncertified_equilibrium_is_said() -> None:
    nothing = Closure(NAN, 0, NAN)
    fit = EquilibriumFit(nothing, nothing, Estimate(NAN, NAN), Interval(-INF, INF, 0.95), False)
    found = verdict_of(evidence(fit=fit))
    assert found.verdict is Verdict.NOT_DECIDABLE
    assert "The equilibrium of this sample's feed could not be certified." in found.facts


@pytest.mark.parametrize("verdict", list(Verdict))
def test_every_verdict_has_its_sentence(verdict: Verdict) -> None:
    assert verdict.sentence.endswith(".")
