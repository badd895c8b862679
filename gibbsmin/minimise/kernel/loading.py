"""A state's way in, and the verdict on its way out."""

from __future__ import annotations

from math import isfinite

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.proof import BALANCE, GAP, STATIONARITY
from gibbsmin.minimise.kernel.storage import Network, State
from gibbsmin.minimise.status import Method, Status

CERTIFIED = int(Status.CERTIFIED)
UNCERTIFIED = int(Status.UNCERTIFIED)
INFEASIBLE = int(Status.INFEASIBLE)
INVALID = int(Status.INVALID)
COMPILED = int(Method.COMPILED)
RECOVERY = int(Method.RECOVERY)


def load_state(network: Network, state: State, energies: FloatArray, supplies: FloatArray) -> bool:
    """Copy one state into the scratch, gases first; False where a value is not finite."""
    finite = True
    for i in range(energies.size):
        value = energies[network.order[i]]
        finite = finite and isfinite(value)
        state.energies[i] = value
    for e in range(supplies.size):
        finite = finite and isfinite(supplies[e])
        state.supplies[e] = supplies[e]
    return finite


def is_proved(figures: FloatArray, tolerances: FloatArray) -> bool:
    """Whether gap, balance and stationarity are all within their tolerances."""
    return bool(
        figures[GAP] <= tolerances[GAP]
        and figures[BALANCE] <= tolerances[BALANCE]
        and figures[STATIONARITY] <= tolerances[STATIONARITY]
    )


def whole_face(state: State) -> bool:
    """Whether the supplies allow every species to be positive."""
    for i in range(state.face.size):
        if not state.face[i]:
            return False
    return True
