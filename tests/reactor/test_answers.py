"""Unknown temperatures under an approach: one answer, none, or several, never a guess."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

import gibbsmin
from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.reactor.answers import brackets, only_answers, stretches
from gibbsmin.reactor.approach import Approach, shift_of
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.results import StageOutlet
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.reaction import Reaction

LIBRARY = load_library()
TEXT = "CO(g) + H2S(g) = COS(g) + H2(g)"
NAMES = ("CO(g)", "H2S(g)", "COS(g)", "H2(g)")
NU = dict(zip(NAMES, (-1.0, -1.0, 1.0, 1.0), strict=True))


def tables(feed_temperature: float, approach: float) -> dict[str, Any]:
    return {
        "feed": {
            "gas": {
                "temperature": f"{feed_temperature} K",
                "pressure": "1.5 bar",
                "unit": "mol",
                "amounts": {"CO": 1.0, "H2S": 1.0, "COS": 0.2, "H2": 0.2, "N2": 2.0},
            }
        },
        "outlet": {
            "heat": "0 kJ",
            "pressure": "1.5 bar",
            "approach": [{"reaction": TEXT, "approach": f"{approach} K", "key": "COS"}],
        },
        "species": {"consider": ["CO", "H2S", "COS", "H2", "N2"]},
    }


def outlet(feed_temperature: float, approach: float) -> StageOutlet:
    return gibbsmin.predict(gibbsmin.load_case(tables(feed_temperature, approach))).final


def turning_point() -> float:
    """Where the enthalpy of the reaction changes sign, K."""
    T = np.arange(900.0, 1200.0)
    enthalpy = Reaction.read(TEXT, LIBRARY).enthalpy(T)
    return float(T[np.argmin(np.abs(enthalpy))])


def test_stretches_leave_out_where_the_approach_has_no_meaning() -> None:
    """From T − 300 K to T + 300 K around the change of sign, and up to 0 K."""
    records = [LIBRARY[name] for name in NAMES]
    shift = shift_of(PropertyTable.of(records), [Approach(TEXT, NU, 300.0, "COS(g)")], {}, {})
    cold, hot = stretches(shift, 100.0, 3000.0)
    turn = turning_point()
    assert cold[0] == 100.0
    assert cold[-1] == pytest.approx(turn - 300.0, abs=2.0)
    assert hot[0] == pytest.approx(turn + 300.0, abs=2.0)
    assert hot[-1] == 3000.0
    assert np.diff(np.log(hot)).max() < np.log(1.04) + 1e-9
    for T in (cold, hot):
        shift.at(T)  # raises where it has no meaning
    with pytest.raises(InputError):
        shift.at(turn + 250.0)


@pytest.mark.parametrize("feed_temperature", [600.0, 1400.0, 1700.0])
def test_a_root_beyond_the_gap_is_found_from_a_feed_on_either_side(
    feed_temperature: float,
) -> None:
    found = outlet(feed_temperature, 300.0)
    assert found.certified
    sense = np.sign(found.temperature - turning_point())
    shifted = found.temperature - sense * 300.0
    y = dict(zip((r.name for r in found.records), found.mole_fractions, strict=True))
    quotient = sum(nu * np.log(y[name]) for name, nu in NU.items())
    log_K = float(Reaction.read(TEXT, LIBRARY).log10_K(shifted)) * np.log(10.0)
    assert quotient == pytest.approx(log_K, abs=1e-10)


def test_no_temperature_where_the_approach_has_a_meaning() -> None:
    with pytest.raises(InputError) as caught:
        outlet(1000.0, 300.0)
    assert str(caught.value) == (
        "outlet.heat: found a heat of 0 kJ, which no temperature between "
        "100 K and 6000 K meets where the approach has a meaning; accepted is another heat, or a "
        "temperature in its place."
    )


def test_several_temperatures_are_told_and_none_is_chosen(monkeypatch: pytest.MonkeyPatch) -> None:
    """No mixture of the trade is known that has two; an enthalpy bent by force has three."""
    straight = Mixture.enthalpy

    def bent(mixture: Any, T: FloatArray, P: FloatArray, amounts: FloatArray) -> FloatArray:
        bump = 1e5 * np.exp(-(((np.asarray(T) - 1900.0) / 40.0) ** 2))
        return np.asarray(straight(mixture, T, P, amounts) - bump)

    monkeypatch.setattr(Mixture, "enthalpy", bent)
    with pytest.raises(InputError) as caught:
        outlet(1700.0, 30.0)
    sentence = str(caught.value)
    assert sentence.startswith("outlet.heat: found a heat of 0 kJ, which 1700.30 K and 19")
    assert sentence.endswith(
        " K both meet under the approach; accepted is another heat, or a temperature in its place."
    )
    case = tables(1700.0, 30.0)
    case["axis"] = [{"vary": "feed.gas.temperature", "values": ["600 K", "1700 K"]}]
    table = gibbsmin.scan(gibbsmin.load_case(case)).table
    assert table["status"].tolist() == ["certified", "ambiguous"]
    assert np.isnan(table["temperature, K"].iloc[1])


def test_brackets_of_a_batch() -> None:
    """sin has roots at each multiple of π; the states are shifted against each other."""
    shifts = np.array([0.0, 1.0, 1e9])

    def residual(T: FloatArray, index: IntArray) -> FloatArray:
        return np.where(index == 2, 1.0, np.sin(T - shifts[index]))

    left, right = brackets(residual, [np.linspace(1.5, 5.0, 36), np.linspace(8.0, 14.0, 61)], 3)
    roots = np.pi * np.array([[1.0, 1.0], [3.0, 3.0], [4.0, 4.0]]) + shifts[:2]
    assert left.shape == right.shape == (3, 3)
    for state in (0, 1):
        for k, root in enumerate(roots[:, state].tolist()):
            assert left[k, state] <= root <= right[k, state]
    assert np.isnan(left[:, 2]).all()


def test_only_answers() -> None:
    nan = np.nan
    T, ends = only_answers(np.array([[500.0, 600.0, nan, 300.0], [nan, 700.0, nan, 400.0]]))
    np.testing.assert_array_equal(T, [500.0, nan, nan, nan])
    np.testing.assert_array_equal(ends[:, 1], [600.0, 700.0])
    np.testing.assert_array_equal(ends[:, 3], [300.0, 400.0])
    assert np.isnan(ends[:, [0, 2]]).all()
