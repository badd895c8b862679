"""Published problems that print their own inputs, so that only the minimiser is under test.

A problem is given either by the Gibbs energies of its species or by the equilibrium constants of
its reactions.  Constants K of reactions ν fix the energies up to a combination of the elements:
any g̃ with ν g̃ = −ln K has the same optimum, and the smallest one is taken.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cache

import numpy as np
import numpy.typing as npt
import pytest
from published_values import CheckValue, amounts, check_values, rows

from gibbsmin.minimise import Programme, minimise
from gibbsmin.thermo.formula import parse_formula

FloatArray = npt.NDArray[np.float64]
BOOK_GAS_CONSTANT = 8.314  # J/mol/K, as the methane-steam example uses it
BOOK_TEMPERATURE = 1000.0  # K
SOLID = "(s)"


@dataclass(frozen=True)
class SolvedProblem:
    """Optimum of one problem: amounts by species, multipliers by element, and the objective."""

    feed: dict[str, float]
    amounts: dict[str, float]
    potentials: dict[str, float]
    minimum: float

    @property
    def gas_total(self) -> float:
        return sum(amount for name, amount in self.amounts.items() if not name.endswith(SOLID))

    def quantity(self, kind: str, subject: str) -> float:
        match kind:
            case "minimum":
                return self.minimum
            case "total amount":
                return sum(self.amounts.values())
            case "amount":
                return self.amounts[subject]
            case "mole fraction":
                return self.amounts[subject] / self.gas_total
            case "conversion":
                return 1 - self.amounts[subject] / self.feed[subject]
            case "potential":
                return self.potentials[subject]
        raise AssertionError(f"no such quantity: {kind}")


@pytest.mark.parametrize("check", check_values("given_results"), ids=str)
def test_solution_meets_the_published_value(check: CheckValue) -> None:
    found = solved(check["problem"]).quantity(check["quantity"], check["subject"])
    percent = 100 if check["unit"] == "%" else 1
    assert check.meets(percent * found), f"{found * percent!r} against {check.value}"


@cache
def solved(problem: str) -> SolvedProblem:
    row = next(row for row in rows("given_problems") if row["problem"] == problem)
    feed = amounts(row["feed"])
    species, energies = printed_energies(problem)
    names = list(dict.fromkeys([*species, *feed]))
    energies = np.concatenate([energies, np.zeros(len(names) - len(species))])
    gas = np.array([not name.endswith(SOLID) for name in names])
    energies = energies + np.where(gas, np.log(float(row["pressure"])), 0.0)
    formulas = [parse_formula(name.removesuffix(SOLID)) for name in names]
    elements = sorted({symbol for formula in formulas for symbol, _ in formula.elements})
    matrix = np.array([[dict(f.elements).get(e, 0.0) for f in formulas] for e in elements])
    atoms = matrix.sum(axis=0)
    direction = np.ones(len(elements))
    if any(formula.charge for formula in formulas):
        matrix = np.vstack([matrix, [formula.charge for formula in formulas]])
        direction = np.append(2 * direction, -1.0)
    supply = matrix @ [feed.get(name, 0.0) for name in names]
    solution = minimise(Programme(matrix, supply[None], energies[None], gas, direction, atoms))
    assert solution.certified.all()
    n = solution.amounts[0]
    return SolvedProblem(
        feed=feed,
        amounts=dict(zip(names, n.tolist(), strict=True)),
        potentials=dict(zip(elements, solution.multipliers[0], strict=False)),
        minimum=float(energies @ n + np.sum(n[gas] * np.log(n[gas] / n[gas].sum()))),
    )


def printed_energies(problem: str) -> tuple[list[str], FloatArray]:
    """Species and standard energies g̃ of a problem, from either of the two tables."""
    given = [row for row in rows("given_energies") if row["problem"] == problem]
    if given:
        scale = {"RT": 1.0, "J/mol": 1 / (BOOK_GAS_CONSTANT * BOOK_TEMPERATURE)}
        values = [float(row["value"]) * scale[row["unit"]] for row in given]
        return [row["species"] for row in given], np.array(values)
    constants = [row for row in rows("given_constants") if row["problem"] == problem]
    reactions = [coefficients(row["reaction"]) for row in constants]
    species = list(dict.fromkeys(name for reaction in reactions for name in reaction))
    nu = np.array([[reaction.get(name, 0.0) for name in species] for reaction in reactions])
    log_constants = np.log([float(row["value"]) for row in constants])
    return species, np.linalg.lstsq(nu, -log_constants)[0]


def coefficients(reaction: str) -> dict[str, float]:
    """Read ``"CO + 1/2 O2 = CO2"``; reactants count negative."""
    sides = reaction.split(" = ")
    result: dict[str, float] = {}
    for sign, side in zip((-1, 1), sides, strict=True):
        for term in side.split(" + "):
            number, name = re.fullmatch(r"(?:([\d/]+) )?(\S+)", term).groups()
            numerator, _, denominator = (number or "1").partition("/")
            result[name] = sign * float(numerator) / float(denominator or 1)
    return result
