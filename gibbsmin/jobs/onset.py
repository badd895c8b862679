"""Onset: where along an axis a solid or liquid first forms or vanishes.

With the phase kept out, its driving force a·λ − g̃ is a smooth function of the axis, and the phase
forms exactly where it is above zero.  Zeros are closed in on, and both sides of each are solved
once more with the phase allowed, so that its absence and its presence are certified.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.crossings import beside, find_crossings
from gibbsmin.jobs.onset_proof import Completeness, completeness
from gibbsmin.jobs.search import KEPT_OUT, Path, driving_force, path_of, stage_named
from gibbsmin.thermo.species import Phase

_SIDE = 1e-6
"""Share of the axis by which both sides of a crossing are solved apart from it, at most."""


@dataclass(frozen=True)
class Onset:
    """Where a phase forms or vanishes: Z crossings in m rows.

    Attributes
    ----------
    phase, stage : the record and the stage it is looked for in
    axis, second : what varies, and what varies from row to row where there is such an axis
    row : (Z,) which value of the second axis each crossing belongs to; 0 without one
    position, shown : (Z,) on the axis, in SI and in the user's unit
    forms : (Z,) whether the phase forms as the axis's number rises; it vanishes otherwise
    temperature, pressure : (Z,) of the stage, K and Pa
    certified : (Z,) whether absence on one side and presence on the other are proved
    driving_force : (2, Z) of the phase, kept out, on the lower and the upper side, in RT
    gap : (Z,) the larger duality gap of both sides
    there : (m,) whether the phase is there at the axis's lowest value
    unsolved : (m,) grid points without an answer
    completeness : what is known of further crossings, in each row
    lost_row, lost : (L,) and (2, L), rows and positions in the user's unit between which it forms
        or vanishes, but there is no certified answer to close in on
    """

    phase: str
    stage: str
    axis: Axis
    second: Axis | None
    row: IntArray
    position: FloatArray
    shown: FloatArray
    forms: BoolArray
    temperature: FloatArray
    pressure: FloatArray
    certified: BoolArray
    driving_force: FloatArray
    gap: FloatArray
    there: BoolArray
    unsolved: IntArray
    completeness: tuple[Completeness, ...]
    lost_row: IntArray
    lost: FloatArray


def onset(case: Case) -> Onset:
    """All crossings of the case's ``[onset]`` phase along its first axis.

    A second axis gives the boundary curve: the crossings at each of its values.

    Raises
    ------
    InputError
        for a case without the table or an axis, a phase that is a gas or no candidate, and what
        the case itself gets wrong.
    """
    if case.onset is None:
        raise InputError(
            "found no [onset] table",
            'accepted is one, such as [onset] with phase = "C(graphite)"',
            key="onset",
            file=case.file,
        )
    stage = stage_named(case, case.onset.stage, "onset.stage")
    path = path_of(case, stage, case.library)
    phase = _phase(case, path, case.onset.phase)
    kept_out = without_phase(case, stage, phase)

    def force(position: FloatArray, row: IntArray) -> FloatArray:
        return driving_force(path.step(kept_out, position, row), phase)

    grid = path.grid
    found = find_crossings(force, grid, path.rows)
    places = beside(grid, found.position, _SIDE)
    sides = [_amount(path, case, phase, place, found.row) for place in places]
    absent, present = (
        [np.where(found.rising == lower_first, low, high) for low, high in zip(*sides, strict=True)]
        for lower_first in (True, False)
    )
    conditions, forces = np.zeros((2, 0)), np.zeros((2, 0))
    if found.row.size:
        forces = np.stack([force(place, found.row) for place in places])
        at = path.step(kept_out, found.position, found.row).states.equilibria
        conditions = np.stack([at.temperature, at.pressure])
    rows = np.arange(path.rows)
    with np.errstate(invalid="ignore"):
        there = force(np.full(rows.size, grid[0]), rows) > 0.0
    return Onset(
        phase=phase,
        stage=stage.name,
        axis=path.axis,
        second=path.second,
        row=found.row,
        position=found.position,
        shown=path.shown(found.position),
        forms=found.rising,
        temperature=conditions[0],
        pressure=conditions[1],
        certified=(absent[0] == 0.0) & (present[0] > 0.0),
        driving_force=forces,
        gap=np.fmax(absent[1], present[1]),
        there=there,
        unsolved=found.unsolved.sum(axis=1),
        completeness=completeness(kept_out, path, phase, found),
        lost_row=found.lost_row,
        lost=path.shown(found.lost),
    )


def _amount(
    path: Path, case: Case, phase: str, position: FloatArray, row: IntArray
) -> tuple[FloatArray, FloatArray]:
    """Amount of the phase and duality gap at positions (k,); NaN where not certified."""
    if position.size == 0:
        return np.zeros(0), np.zeros(0)
    states = path.step(case, position, row).states
    column = [record.name for record in states.model.records].index(phase)
    found = states.equilibria
    return found.amounts[:, column], found.solution.certificate.gap


def without_phase(case: Case, stage: StageCase, phase: str) -> Case:
    """The case with the phase kept out of the stage by an energy at which it never forms."""
    offsets = dict(stage.chemistry.offsets)
    offsets[phase] = offsets.get(phase, 0.0) + KEPT_OUT
    changed = replace(stage, chemistry=replace(stage.chemistry, offsets=offsets))
    return replace(case, stages=tuple(changed if s is stage else s for s in case.stages))


def _phase(case: Case, path: Path, text: str) -> str:
    """The record's name, one that may form in the stage."""
    try:
        record = path.library.resolve(text)
    except InputError as error:
        raise error.at(key="onset.phase", file=case.file) from None
    if record.phase is Phase.GAS:
        raise InputError(
            f'found "{record.name}", which is a gas',
            'accepted is a solid or liquid, such as "C(graphite)" or "H2O(l)"',
            key="onset.phase",
            file=case.file,
        )
    step = path.step(case, path.grid[:1], np.zeros(1, dtype=np.int64))
    if record.name not in [candidate.name for candidate in step.states.model.records]:
        raise InputError(
            f'found "{record.name}", which is no candidate of {path.stage.name}',
            "accepted is a record to consider, made of the feed's elements",
            key="onset.phase",
            file=case.file,
        )
    return record.name
