"""Deviations by the kernel against the sums of squares of a stage's first-order changes."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from typing import Any

import numpy as np
import numpy.typing as npt
import pytest
from reactor.test_stage_changes import (
    CASES,
    SPECIFICATIONS,
    STATES,
    Changes,
    Data,
    K,
    make_changes,
    make_data,
    solved,
)

from gibbsmin.reactor.approach import Approach
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conversion import conversions
from gibbsmin.reactor.deviations import StageDeviations, stage_deviations
from gibbsmin.reactor.kernel.deviations import deviate_states
from gibbsmin.reactor.kernel.form import deviation_form
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.stage_changes import StageChanges, stage_changes
from gibbsmin.reactor.stream_changes import InletChanges, inlet_changes, stream_changes
from gibbsmin.thermo.library import load_library

FloatArray = npt.NDArray[np.float64]


def as_it_stands(*arguments: Any) -> None:
    with np.errstate(all="ignore"):
        deviate_states(*arguments)


def both(
    data: Data,
    chemistry: Chemistry,
    changes: Changes,
    solve: Callable[..., Any] = as_it_stands,
    boundary: float | None = None,
) -> tuple[StageStates, InletChanges, StageChanges, StageDeviations]:
    states = solved(data, chemistry)
    inlet = inlet_changes(
        data.streams, changes.streams, changes.records, states.inlet, data.library
    )
    asked = (data.specification, boundary, changes.asked)
    found = stage_changes(states, *asked, inlet, changes.records, data.library)
    own = stream_changes(data.streams, changes.streams, K, states.inlet, data.library)
    deviations = stage_deviations(
        solve, states, *asked, own, changes.records, data.library, passes=True
    )
    return states, inlet, found, deviations


def root(changes: FloatArray) -> FloatArray:
    return np.asarray(np.sqrt((changes**2).sum(axis=-1)))


def assert_alike(
    states: StageStates, inlet: InletChanges, found: StageChanges, deviations: StageDeviations
) -> None:
    def close(ours: FloatArray, theirs: FloatArray, scale: FloatArray) -> None:
        """To a share of the size of what was added up."""
        assert np.array_equal(np.isnan(ours), np.isnan(theirs))
        assert np.all((np.abs(ours - theirs) <= 1e-9 * (theirs + scale)) | np.isnan(theirs))

    n, gas = states.equilibria.amounts, states.model.gas
    total = n[:, gas].sum(axis=1)
    work = 8.314 * states.equilibria.temperature * n.sum(axis=1)
    close(deviations.temperature, root(found.temperature), 0.0 * total)
    close(deviations.pressure, root(found.pressure), 0.0 * total)
    close(deviations.heat, root(found.heat), work)
    close(deviations.entropy_generation, root(found.entropy_generation), 8.314 * n.sum(axis=1))
    of_gas = found.amounts[:, gas].sum(axis=1)
    y = n[:, gas] / total[:, np.newaxis]
    fractions = root(found.amounts[:, gas] - y[..., np.newaxis] * of_gas[:, np.newaxis])
    close(deviations.records[gas].T, fractions / total[:, np.newaxis], y)
    close(deviations.records[~gas].T, root(found.amounts[:, ~gas]), n[:, ~gas])
    close(deviations.forces.T, root(found.forces[:, ~gas]), np.ones(n[:, ~gas].shape))
    for array, passed, scale in (
        (found.temperature, deviations.passed.temperature, 0.0 * total),
        (found.pressure, deviations.passed.pressure, 0.0 * total),
        (found.amounts, deviations.passed.amounts, n),
    ):
        close(root(passed), root(array), scale)

    shares = conversions(states.inlet, states.model.records, n)
    for place, record in enumerate(states.inlet.records):
        into = [r.formula == record.formula for r in states.inlet.records]
        out = [r.formula == record.formula for r in states.model.records]
        amount = states.inlet.amounts[:, into].sum(axis=1)[:, np.newaxis]
        left = 1.0 - shares[record.name][:, np.newaxis]
        change = left * inlet.amounts[:, into].sum(axis=1) - found.amounts[:, out].sum(axis=1)
        close(deviations.conversions[place], root(change / amount), np.ones(len(n)))


@pytest.mark.parametrize("name", SPECIFICATIONS)
@pytest.mark.parametrize("case", CASES)
def test_deviations_are_the_roots_of_sums_of_squares(case: str, name: str) -> None:
    random = np.random.default_rng([*name.encode(), *case.encode()])
    data = make_data(case, SPECIFICATIONS[name], random)
    found = both(data, Chemistry(), make_changes(data, random))
    assert found[2].regular.sum() >= STATES // 2
    assert_alike(*found)


def test_a_boundary_of_its_own_takes_no_part_in_the_changes() -> None:
    random = np.random.default_rng(1)
    data = make_data("ammonia", SPECIFICATIONS["heat and pressure"], random)
    changes = make_changes(data, random)
    assert_alike(*both(data, Chemistry(), changes, boundary=300.0))


def test_streams_without_changes_bring_those_of_their_records_alone() -> None:
    random = np.random.default_rng(2)
    data = make_data("sulphur", SPECIFICATIONS["heat and pressure"], random)
    changes = make_changes(data, random)
    still = tuple(
        replace(
            each,
            temperature=0.0 * each.temperature,
            pressure=0.0 * each.pressure,
            amounts={name: 0.0 * dn for name, dn in each.amounts.items()},
        )
        for each in changes.streams
    )
    found = both(data, Chemistry(), replace(changes, streams=still))
    assert not found[1].amounts.any()
    assert_alike(*found)


def test_a_heat_loss_follows_the_feed() -> None:
    random = np.random.default_rng(3)
    specification = Specification(heat_loss=0.02, pressure=0.0)
    data = make_data("reforming", specification, random)
    changes = make_changes(data, random)
    names = tuple(record.name for record in data.library.records)
    chemistry = Chemistry(Selection(consider=names))
    # Heating values need the products of combustion.
    assert_alike(*both(replace(data, library=load_library()), chemistry, changes))


def test_approaches_and_offsets_take_part() -> None:
    reforming = {"CH4(g)": -1.0, "H2O(g)": -1.0, "CO(g)": 1.0, "H2(g)": 3.0}
    chemistry = Chemistry(
        Selection(consider=("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")),
        approaches=(Approach("CH4 + H2O = CO + 3 H2", reforming, 15.0),),
        offsets={"C(graphite)": 4000.0},
    )
    random = np.random.default_rng(5)
    for name in ("temperature and pressure", "heat and pressure"):
        data = make_data("reforming", SPECIFICATIONS[name], random)
        assert_alike(*both(data, chemistry, make_changes(data, random)))


def test_a_state_that_is_not_certified_has_none() -> None:
    random = np.random.default_rng(6)
    data = make_data("reforming", SPECIFICATIONS["temperature and pressure"], random)
    broken = np.array(data.specification.temperature)
    broken[3] = np.nan
    data = replace(data, specification=replace(data.specification, temperature=broken))
    found = both(data, Chemistry(), make_changes(data, random))
    assert_alike(*found)
    for field in fields(StageDeviations):
        if field.name != "passed":
            assert np.isnan(getattr(found[3], field.name)[..., 3]).all()
    assert np.isfinite(found[3].temperature[4])


def test_the_compiled_form_gives_the_same() -> None:
    compiled = deviation_form.after(np.inf)
    assert compiled is not None
    random = np.random.default_rng(7)
    for case, name in (("iron", "heat and pressure"), ("reforming", "temperature and volume")):
        data = make_data(case, SPECIFICATIONS[name], random)
        assert_alike(*both(data, Chemistry(), make_changes(data, random), compiled))
