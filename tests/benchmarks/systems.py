"""Four systems of growing size, built from the library, and random states of each.

Ordinary states are those of the trade's reactors; torture states are 1 to 4 random records as
feed, 300–3000 K, 1e-3–1e3 bar.  Every set has a fixed seed.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import Programme
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species

REFORMER = "CH4(g) CO(g) CO2(g) H2(g) H2O(g) N2(g) C(graphite)"
COMBUSTION = (
    "CH4(g) CO(g) CO2(g) H2(g) H2O(g) N2(g) O2(g) OH(g) H(g) O(g) N(g) NO(g) NO2(g) N2O(g) NH(g)"
    " NH2(g) NH3(g) HO2(g) H2O2(g) HCN(g) CN(g) HCHO(g) HCO(g) CH3(g) CH2(g) CH(g) C2H2(g) C2H4(g)"
    " C(g) O3(g) C(graphite) H2O(l)"
)
SULPHUR = (
    "H2S(g) SO2(g) S2(g) S(g) S3(g) S4(g) S5(g) S6(g) S7(g) S8(g) SO(g) SO3(g) COS(g) CS2(g) CS(g)"
    " HS(g) S2O(g) H2SO4(g) CH4(g) CO(g) CO2(g) H2(g) H2O(g) N2(g) O2(g) OH(g) H(g) NH3(g) NO(g)"
    " HCN(g) S(l) C(graphite)"
)
ASH_ELEMENTS = ["Al", "C", "Ca", "Cl", "Fe", "H", "K", "N", "Na", "O", "S", "Si"]


@dataclass(frozen=True)
class System:
    """Records, elements and element balance of a benchmark system."""

    name: str
    records: tuple[Species, ...]
    elements: tuple[str, ...]

    @property
    def matrix(self) -> FloatArray:
        return np.array(
            [[dict(r.elements).get(e, 0.0) for r in self.records] for e in self.elements]
        )

    def programme(self, T: FloatArray, P: FloatArray, supplies: FloatArray) -> Programme:
        """States at T (K) and P (bar) with the given supplies (states, elements)."""
        gas = np.array([r.phase is Phase.GAS for r in self.records])
        energies = PropertyTable.of(self.records).gibbs_energy(T) / (GAS_CONSTANT * T[:, None])
        energies += np.where(gas, np.log(P)[:, None], 0.0)
        matrix = self.matrix
        rows = len(self.elements)
        return Programme(matrix, supplies, energies, gas, np.ones(rows), matrix.sum(axis=0))

    def supplies(self, feed: dict[str, FloatArray]) -> FloatArray:
        """Element supplies of a feed: amounts by record name or element symbol."""
        matrix = self.matrix
        names = [r.name for r in self.records]
        columns = {name: matrix[:, i] for i, name in enumerate(names)}
        columns |= dict(zip(self.elements, np.eye(len(self.elements)), strict=True))
        return np.sum([np.outer(amount, columns[name]) for name, amount in feed.items()], axis=0)


@cache
def systems() -> dict[str, System]:
    """The four systems by name."""
    library = load_library()

    def listed(name: str, text: str) -> System:
        records = tuple(library[word] for word in text.split())
        elements = sorted({e for r in records for e, _ in r.elements})
        return System(name, records, tuple(elements))

    ash = tuple(
        r for r in library.of_elements(ASH_ELEMENTS) if dict(r.elements).get("C", 0.0) <= 1.0
    )
    return {
        "reformer": listed("reformer", REFORMER),
        "combustion": listed("combustion", COMBUSTION),
        "sulphur": listed("sulphur", SULPHUR),
        "big": System("big", ash, tuple(ASH_ELEMENTS)),
    }


def ordinary(name: str, states: int, seed: int = 2) -> Programme:
    """Random states as reactors of the trade run them."""
    system, rng = systems()[name], np.random.default_rng(seed)

    def u(low: float, high: float) -> FloatArray:
        return rng.uniform(low, high, states)

    one = np.ones(states)
    if name == "reformer":
        feed = {
            "CH4(g)": one,
            "H2O(g)": u(0.5, 5),
            "CO2(g)": u(0, 0.5),
            "N2(g)": u(0.01, 0.2),
            "H2(g)": u(0, 0.3),
        }
        T, P = u(600, 1300), 10 ** u(0, 1.6)
    elif name == "combustion":
        air = u(1, 3)
        feed = {"CH4(g)": one, "O2(g)": air, "N2(g)": 3.76 * air, "H2O(g)": u(0, 1)}
        T, P = u(400, 2800), 10 ** u(0, 1.5)
    elif name == "sulphur":
        air = u(0.2, 0.8)
        feed = {
            "H2S(g)": one,
            "O2(g)": air,
            "N2(g)": 3.76 * air,
            "CO2(g)": u(0.01, 0.4),
            "H2O(g)": u(0, 0.3),
            "CH4(g)": u(0, 0.05),
        }
        T, P = u(400, 1800), 10 ** u(0, 0.5)
    else:
        low = [0.05, 3, 0.01, 0.001, 0.01, 4, 0.005, 1, 0.002, 6, 0.01, 0.1]
        high = [0.2, 6, 0.1, 0.02, 0.1, 8, 0.03, 30, 0.02, 16, 0.1, 0.4]
        feed = {e: u(a, b) for e, a, b in zip(ASH_ELEMENTS, low, high, strict=True)}
        T, P = u(500, 2000), 10 ** u(0, 1.5)
    return system.programme(T, P, system.supplies(feed))


def torture(name: str, states: int, seed: int = 1) -> Programme:
    """Random feeds of 1 to 4 records at 300–3000 K and 1e-3–1e3 bar."""
    system, rng = systems()[name], np.random.default_rng(seed)
    matrix = system.matrix
    supplies = np.zeros((states, len(system.elements)))
    for state in range(states):
        chosen = rng.choice(matrix.shape[1], rng.integers(1, 5), replace=False)
        supplies[state] = matrix[:, chosen] @ rng.uniform(0.05, 1, chosen.size)
    T, P = rng.uniform(300, 3000, states), 10 ** rng.uniform(-3, 3, states)
    return system.programme(T, P, supplies)


def grid(name: str, temperatures: int, pressures: int) -> Programme:
    """One feed over a grid of T (fastest) and P."""
    system = systems()[name]
    low, high = {
        "reformer": (700.0, 1300.0),
        "combustion": (800.0, 2600.0),
        "sulphur": (700.0, 1700.0),
        "big": (700.0, 1900.0),
    }[name]
    P, T = np.meshgrid(
        np.geomspace(1.0, 20.0, pressures), np.linspace(low, high, temperatures), indexing="ij"
    )
    supplies = np.repeat(ordinary(name, 1, seed=5).supplies, T.size, axis=0)
    return system.programme(T.ravel(), P.ravel(), supplies)
