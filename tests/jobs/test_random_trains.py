"""Entropy is never destroyed along a train, and what would destroy it is called impossible.

The conditions under which the entropy generation cannot be negative: every feed record is a
candidate, the feed meets every hold, no approach or fixed conversion, no outlet pressure above a
feed's with gas, heat crossing at the outlet's temperature.
"""

from __future__ import annotations

from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

import gibbsmin

CONSIDERED = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "O2", "NH3", "NO", "OH", "C(graphite)"]
FED = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "O2"]


def streams() -> st.SearchStrategy[dict[str, Any]]:
    return st.fixed_dictionaries(
        {
            "temperature": st.integers(300, 1200).map(lambda T: f"{T} K"),
            "pressure": st.just("30 bar"),
            "unit": st.just("mol"),
            "amounts": st.dictionaries(
                st.sampled_from(FED), st.floats(0.01, 10.0), min_size=1, max_size=4
            ),
        }
    )


def stages() -> st.SearchStrategy[dict[str, Any]]:
    of_energy = st.one_of(
        st.integers(400, 1800).map(lambda T: {"temperature": f"{T} K"}), st.just({"heat": "0 kJ"})
    )
    drop = st.integers(1, 50).map(lambda tenths: {"pressure_drop": f"{tenths / 10} bar"})
    chemistry = st.sampled_from(
        [{}, {"reactions": "none"}, {"species": {"consider": CONSIDERED, "inert": []}}]
    )
    return st.tuples(of_energy, drop, chemistry).map(lambda parts: parts[0] | parts[1] | parts[2])


@settings(max_examples=30, deadline=None, derandomize=True)
@given(
    feed=st.lists(streams(), min_size=2, max_size=2),
    train=st.lists(stages(), min_size=1, max_size=3),
)
def test_no_stage_of_a_train_destroys_entropy(
    feed: list[dict[str, Any]], train: list[dict[str, Any]]
) -> None:
    tables = {
        "feed": {"first": feed[0], "second": feed[1]},
        "stage": [{"name": f"stage {i}", **stage} for i, stage in enumerate(train)],
        "species": {"consider": CONSIDERED},
    }
    outlet = gibbsmin.predict(gibbsmin.load_case(tables))
    assert outlet.certified
    assert len(outlet.stages) == len(train)
    for stage in outlet.stages:
        throughput = 200.0 * stage.amounts.sum()  # J/K, the order of the streams' entropy
        assert stage.entropy.value >= -1e-11 * throughput
        assert stage.entropy.remark == ""


def reformer(**stage: Any) -> gibbsmin.StageOutlet:
    case = gibbsmin.load_case(
        {
            "feed": {
                "gas": {
                    "temperature": "700 K",
                    "pressure": "25 bar",
                    "unit": "mol",
                    "amounts": {"CH4": 1.0, "H2O": 3.0},
                }
            },
            "outlet": {"temperature": "700 K", "pressure": "25 bar", **stage},
            "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2"]},
        }
    )
    return gibbsmin.predict(case).final


def test_a_conversion_beyond_equilibrium_is_impossible() -> None:
    stage = reformer(conversion={"CH4": "95 %"})
    assert stage.entropy.value < 0.0
    assert stage.warnings[-1] == (
        "Entropy: impossible as specified: the entropy generation is negative."
    )
    assert reformer(conversion={"CH4": "2 %"}).entropy.value > 0.0


def test_an_approach_beyond_equilibrium_is_impossible() -> None:
    reaction = {"reaction": "CH4 + H2O = CO + 3 H2"}
    beyond = reformer(approach=[{**reaction, "approach": "-400 K"}])
    assert beyond.entropy.value < 0.0
    assert "impossible as specified" in beyond.warnings[-1]
    assert reformer(approach=[{**reaction, "approach": "40 K"}]).entropy.value > 0.0
