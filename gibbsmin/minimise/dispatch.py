"""The one entry: the compiled method and its recovery steps, then cones with polish."""

from __future__ import annotations

from dataclasses import fields

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.certificate import Certificate, certify
from gibbsmin.minimise.closure import close_balance
from gibbsmin.minimise.compiled import Warmth, answer_batch, answer_heated_batch
from gibbsmin.minimise.conic import ConicProgramme
from gibbsmin.minimise.faces import Face, find_face
from gibbsmin.minimise.newton import Reduced
from gibbsmin.minimise.phases import polish
from gibbsmin.minimise.programme import Programme
from gibbsmin.minimise.settings import Settings
from gibbsmin.minimise.solution import Solution
from gibbsmin.minimise.status import Method, Status

_DEFAULT = Settings()


def minimise(programme: Programme, settings: Settings = _DEFAULT) -> Solution:
    """Amounts of least Gibbs energy of every state of a batch, each with its proof.

    A state that fails is flagged in ``status`` and carries NaN; the others are untouched.
    """
    solution = unanswered(programme)
    _flag_invalid(programme, solution)
    if settings.compiled:
        answer_batch(programme, settings, solution)
    method = ConicMethod(programme, settings)
    for state in np.flatnonzero(solution.status == Status.UNCERTIFIED).tolist():
        face = find_face(programme.matrix, programme.supplies[state])
        if face is None:
            solution.status[state] = Status.INFEASIBLE
            continue
        method.answer(solution, state, face)
    return solution


def minimise_heated(
    programme: Programme, warmth: Warmth, settings: Settings = _DEFAULT
) -> tuple[Solution, FloatArray]:
    """Amounts of least Gibbs energy at temperatures (states,) of given enthalpy.

    Temperature is an unknown of the compiled method.  A state that it cannot prove, such as one
    that takes up heat at constant temperature, is left uncertified with NaN, for a search by
    :func:`minimise` at given temperatures.
    """
    solution = unanswered(programme)
    _flag_invalid(programme, solution)
    temperatures = answer_heated_batch(programme, warmth, settings, solution)
    return solution, np.where(solution.certified, temperatures, np.nan)


def _flag_invalid(programme: Programme, solution: Solution) -> None:
    """Mark states whose values are not all finite."""
    if np.isfinite(programme.supplies).all() and np.isfinite(programme.energies).all():
        return
    finite = np.isfinite(programme.supplies).all(axis=1)
    finite &= np.isfinite(programme.energies).all(axis=1)
    solution.status[~finite] = Status.INVALID


class ConicMethod:
    """Conic solution and polish, with one conic programme for all states of a face."""

    def __init__(self, programme: Programme, settings: Settings) -> None:
        self._programme = programme
        self._settings = settings
        self._conic: dict[bytes, ConicProgramme] = {}

    def answer(self, solution: Solution, index: int, face: Face) -> None:
        """Write the first certified answer of a state into the solution."""
        whole = self._programme.subset(index)
        if not face.species.any():
            _accept(solution, index, whole, face, np.zeros(0), np.zeros(0), self._settings)
            return
        state = Reduced(
            matrix=face.reduced(whole.matrix),
            supplies=whole.supplies[0, face.rows],
            energies=whole.energies[0, face.species],
            gas=whole.gas[face.species],
        )
        start = self._programme_of(face, state).solve(state.supplies, state.energies)
        if start is None:
            return
        for amounts, multipliers in polish(state, start):
            if _accept(solution, index, whole, face, amounts, multipliers, self._settings):
                return

    def _programme_of(self, face: Face, state: Reduced) -> ConicProgramme:
        key = face.species.tobytes() + face.rows.tobytes()
        if key not in self._conic:
            self._conic[key] = ConicProgramme(state.matrix, state.gas)
        return self._conic[key]


def _accept(
    solution: Solution,
    index: int,
    whole: Programme,
    face: Face,
    amounts: FloatArray,
    multipliers: FloatArray,
    settings: Settings,
) -> bool:
    """Write an answer if its certificate stands."""
    full_amounts = face.restored_amounts(amounts)
    full_amounts = close_balance(whole.matrix, whole.supplies[0], full_amounts)
    full_multipliers = face.restored_multipliers(multipliers)
    proof = certify(whole, full_amounts[None], full_multipliers[None], face.species[None])
    if not proof.within(settings)[0]:
        return False
    solution.amounts[index] = full_amounts
    solution.multipliers[index] = full_multipliers
    solution.status[index] = Status.CERTIFIED
    solution.method[index] = Method.CONIC
    for field in fields(Certificate):
        getattr(solution.certificate, field.name)[index] = getattr(proof, field.name)[0]
    return True


def unanswered(programme: Programme) -> Solution:
    """A solution in which no state is answered yet."""
    states, (rows, species) = programme.states, programme.matrix.shape
    return Solution(
        amounts=np.full((states, species), np.nan),
        multipliers=np.full((states, rows), np.nan),
        status=np.full(states, Status.UNCERTIFIED, dtype=np.int8),
        method=np.full(states, Method.NONE, dtype=np.int8),
        certificate=Certificate(
            gap=np.full(states, np.nan),
            balance=np.full(states, np.nan),
            stationarity=np.full(states, np.nan),
            driving_forces=np.full((states, species), np.nan),
        ),
    )
