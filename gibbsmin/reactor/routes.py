"""Activities of absent records by each route that could form them.

Where more than the elements is held, the outlet's species are not at equilibrium with each other,
and a record has no single activity: methane may deposit carbon that carbon monoxide would take
up.  Each route j = Σ x_i i from up to three of the main species gives its own

    ln a_j = Σ x_i μ_i/RT − g̃_j,   μ_i/RT = g̃_i + ln y_i  of the actual partial pressures.

A substance that is present in another form is judged by that form alone, an element by every
route, and a compound by those that only combine (NH₃ + HCl, SO₃ + H₂O): what a held gas could
form by trading oxygen or hydrogen around is held like the gas itself.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import combinations

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.thermo.species import Species

_LONGEST = 3
_MAIN_SPECIES = 8
_LEAST_SHARE = 1e-6
_TOLERANCE = 1e-9


@dataclass(frozen=True)
class Route:
    """One way to form a record, and its activity (or mole fraction, for a gas) by that way.

    ``awkwardness`` counts its species, and ten for each that takes a fraction of a mole; ``shares``
    are the moles of each record that it takes for one mole formed, negative where it gives some.
    """

    text: str
    log_activity: float
    awkwardness: int
    shares: tuple[tuple[str, float], ...]

    @property
    def activity(self) -> float:
        """Activity of a solid or liquid, mole fraction of a gas."""
        return float(np.exp(min(self.log_activity, 700.0)))


def routes_to(
    targets: Sequence[Species],
    target_energies: FloatArray,
    present: Sequence[Species],
    amounts: FloatArray,
    potentials: FloatArray,
    reacting: BoolArray | None = None,
) -> list[tuple[Route, ...]]:
    """Routes to each target from the main species present, the most favourable first.

    A compound that is present in another form, be it a trace, has that form as its only route; an
    element has so where it is a main species.

    Parameters
    ----------
    targets : the records to judge, with their g̃ (T,)
    present : the outlet's records, with their amounts and μ/RT, each (S,)
    reacting : which of them other substances may form from, (S,); all unless it is given
    """
    able = _main_species(amounts if reacting is None else np.where(reacting, amounts, 0.0))
    there = np.flatnonzero(amounts > 0.0).tolist()
    rows = elements_of([*present, *targets])
    wanted = element_counts(targets, rows)
    columns = element_counts(present, rows)
    elementary = np.array([len(target.elements) == 1 for target in targets])
    by_main = _has_form(targets, [present[i] for i in _main_species(amounts)])
    itself = _has_form(targets, [present[i] for i in there]) & (~elementary | by_main)
    found: list[list[Route]] = [[] for _ in targets]
    for size in range(1, _LONGEST + 1):
        for subset in combinations(there if size == 1 else able, size):
            chosen = list(subset)
            shares, _, rank, _ = np.linalg.lstsq(columns[:, chosen], wanted, rcond=None)
            if rank < size:
                continue
            misses = np.abs(columns[:, chosen] @ shares - wanted).max(axis=0)
            fits = (misses < _TOLERANCE) & (np.abs(shares) > _TOLERANCE).all(axis=0)
            if size > 1:
                fits &= ~itself
            elif chosen[0] not in able:
                fits &= _has_form(targets, [present[chosen[0]]])
            fits &= elementary | (shares > 0.0).all(axis=0)
            values = shares.T @ potentials[chosen] - target_energies
            for j in np.flatnonzero(fits).tolist():
                species = [present[i] for i in chosen]
                found[j].append(_route(targets[j], species, shares[:, j].tolist(), values[j]))
    return [tuple(sorted(routes, key=_rank)) for routes in found]


def _has_form(targets: Sequence[Species], present: Sequence[Species]) -> BoolArray:
    """Which targets are another form of a substance that is present."""
    formulas = {record.formula for record in present}
    return np.array([target.formula in formulas for target in targets], dtype=bool)


def _rank(route: Route) -> tuple[float, int, str]:
    """The most favourable first; routes that agree but for rounding, the plainest first."""
    return -round(route.log_activity, 9), route.awkwardness, route.text


def _main_species(amounts: FloatArray) -> list[int]:
    largest = np.argsort(-amounts, kind="stable")[:_MAIN_SPECIES]
    return [i for i in largest.tolist() if amounts[i] > _LEAST_SHARE * amounts.sum()]


def _route(
    target: Species, species: Sequence[Species], shares: Sequence[float], value: float
) -> Route:
    """The route as a reaction that makes one mole of the target."""
    terms = [
        (Fraction(share).limit_denominator(1000), record.formula)
        for share, record in zip(shares, species, strict=True)
    ]
    left = [_term(share, formula) for share, formula in terms if share > 0]
    right = [_term(-share, formula) for share, formula in terms if share < 0]
    text = f"{' + '.join(left)} = {' + '.join([target.formula, *right])}"
    fractions = sum(share.denominator > 1 for share, _ in terms)
    taken = tuple((r.name, share) for r, share in zip(species, shares, strict=True))
    return Route(text, float(value), len(terms) + 10 * fractions, taken)


def _term(share: Fraction, formula: str) -> str:
    return formula if share == 1 else f"{share} {formula}"
