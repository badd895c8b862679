"""The second law and the balance, over cases that are built to meet the law's conditions.

With the boundary at the outlet's temperature, entropy generation cannot be negative where every
feed record is a candidate, nothing is held, and no gas enters at less than the outlet's pressure.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from gibbsmin.jobs.case import load_case
from gibbsmin.jobs.predict import predict
from gibbsmin.minimise import Status
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.results import StageOutlet
from gibbsmin.thermo.library import load_library

BALANCE_TOLERANCE = 1e-12
ROUNDING = 1e-9

CANDIDATES = {
    "reforming": "CH4(g) H2O(g) CO(g) CO2(g) H2(g) N2(g) C(graphite) H2O(l)",
    "ammonia": "N2(g) H2(g) NH3(g) Ar(g)",
    "sulphur": "H2S(g) SO2(g) SO3(g) O2(g) N2(g) H2O(g) S2(g) S8(g) S(l)",
    "combustion": "CH4(g) CO(g) CO2(g) H2O(g) H2(g) O2(g) N2(g) NO(g) OH(g) H(g) O(g)",
    "lime": "CaO(cr) CO2(g) CO(g) O2(g) C(graphite) H2O(g) H2(g)",
    "iron": "Fe0.947O(cr) Fe3O4(cr) H2(g) H2O(g) CO(g) CO2(g) CH4(g)",
    "chlorine": "HCl(g) O2(g) Cl2(g) H2O(g) Cl(g) H2(g)",
}


@dataclass(frozen=True)
class Feed:
    """A stream by record: temperature K, pressure bar, amounts mol."""

    temperature: float
    pressure: float
    amounts: dict[str, float]

    def table(self) -> dict[str, object]:
        return {
            "temperature": f"{self.temperature} K",
            "pressure": f"{self.pressure} bar",
            "unit": "mol",
            "amounts": self.amounts,
        }


@dataclass(frozen=True)
class Problem:
    """Feeds into one stage whose outlet is at no higher pressure than any of them."""

    candidates: list[str]
    feeds: list[Feed]
    temperature: float
    pressure: float

    def outlet(self) -> StageOutlet:
        case = {
            "feed": {f"feed-{k}": feed.table() for k, feed in enumerate(self.feeds)},
            "outlet": {"temperature": f"{self.temperature} K", "pressure": f"{self.pressure} bar"},
            "species": {"consider": self.candidates},
        }
        return predict(load_case(case)).final


@st.composite
def problems(draw: st.DrawFn) -> Problem:
    candidates = CANDIDATES[draw(st.sampled_from(sorted(CANDIDATES)))].split()
    outlet_pressure = draw(st.floats(0.01, 100))
    names = st.lists(st.sampled_from(candidates), min_size=1, max_size=4, unique=True)
    amount = st.floats(1e-3, 100)
    feeds = [
        Feed(
            temperature=draw(st.floats(280, 2000)),
            pressure=outlet_pressure * draw(st.floats(1, 50)),
            amounts={name: draw(amount) for name in draw(names)},
        )
        for _ in range(draw(st.integers(1, 3)))
    ]
    return Problem(candidates, feeds, draw(st.floats(300, 3000)), outlet_pressure)


@settings(max_examples=150, deadline=None, derandomize=True)
@given(problem=problems())
def test_entropy_is_never_destroyed_and_elements_never_lost(problem: Problem) -> None:
    outlet = problem.outlet()
    assert outlet.status is Status.CERTIFIED
    assert outlet.entropy.value >= -ROUNDING * entropy_scale(problem, outlet)
    assert not outlet.entropy.remark
    assert balance_error(problem, outlet) <= BALANCE_TOLERANCE


def test_outlet_above_a_feeds_pressure_has_no_figure() -> None:
    feed = Feed(temperature=300.0, pressure=1.0, amounts={"N2(g)": 1.0})
    outlet = Problem(["N2(g)"], [feed], temperature=300.0, pressure=2.0).outlet()
    assert np.isnan(outlet.entropy.value)
    assert "compressor" in outlet.entropy.remark


@pytest.mark.parametrize("hot", [600.0, 900.0])
def test_known_figure_for_cooling_a_monatomic_gas(hot: float) -> None:
    """ΔS = n Cp ln(T/T₀) and Q = n Cp (T − T₀), exactly, for argon with Cp = 5R/2."""
    R, cold = 8.31446261815324, 400.0
    feed = Feed(temperature=hot, pressure=1.0, amounts={"Ar(g)": 3.0})
    outlet = Problem(["Ar(g)"], [feed], temperature=cold, pressure=1.0).outlet()
    Cp = 3 * 5 / 2 * R
    assert outlet.heat == pytest.approx(Cp * (cold - hot), rel=1e-4)
    expected = Cp * (np.log(cold / hot) - (cold - hot) / cold)
    assert outlet.entropy.value == pytest.approx(expected, rel=1e-3)


def entropy_scale(problem: Problem, outlet: StageOutlet) -> float:
    """The size of the terms whose difference the entropy generation is, in J/K."""
    mols = sum(sum(feed.amounts.values()) for feed in problem.feeds)
    return abs(outlet.heat) / outlet.temperature + 200 * mols


def balance_error(problem: Problem, outlet: StageOutlet) -> float:
    """Largest |elements out − elements in| relative to elements in."""
    library = load_library()
    fed = {
        name: sum(feed.amounts.get(name, 0.0) for feed in problem.feeds)
        for name in {name for feed in problem.feeds for name in feed.amounts}
    }
    records = [library[name] for name in fed]
    rows = elements_of(records)
    entering = element_counts(records, rows) @ np.array(list(fed.values()))
    leaving = element_counts(outlet.records, rows) @ outlet.amounts
    return float(np.max(np.abs(leaving - entering) / entering))
