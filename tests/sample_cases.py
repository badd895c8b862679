"""Invented samples with known truth: a reformer's outlet, and what its instruments would read."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import at_temperature
from gibbsmin.reactor.extents import independent_reactions
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.sample.equilibrium_fit import Readings
from gibbsmin.sample.plan import Analysis, Feed, Plan, plan_of
from gibbsmin.sample.reactions import JudgedReaction, judged_reaction
from gibbsmin.thermo.library import load_library

FloatArray = npt.NDArray[np.float64]

U_TEMPERATURE = 3.0
U_PRESSURE = 0.003
U_FLOW = 0.014
READING, FLOOR = 0.01, 0.0002
ANALYTES = ("H2", "CO", "CO2", "CH4", "N2")


def records(text: str) -> tuple[str, ...]:
    library = load_library()
    return tuple(library.resolve(name).name for name in text.split())


def analysis(names: tuple[str, ...] = ANALYTES, *, normalised: bool = False) -> Analysis:
    of_readings = records(" ".join(names))
    return Analysis(
        analytes=tuple((name,) for name in of_readings),
        names=names,
        dry=True,
        normalised=normalised,
        records=(*of_readings, "H2O(g)"),
        dried=("H2O(g)",),
    )


def reformer_plan(outlet: Analysis | None = None) -> Plan:
    gas = Stream("gas", 800.0, 30e5, {"CH4(g)": 100.0, "N2(g)": 2.0}, "kmol/h", True)
    steam = Stream("steam", 800.0, 30e5, {"H2O(g)": 300.0}, "kmol/h", True)
    chemistry = Chemistry(selection=Selection(consider=records("CH4 H2O CO CO2 H2 N2")))
    return plan_of(chemistry, outlet or analysis(), [Feed(gas), Feed(steam)], load_library())


def reforming_and_shift(plan: Plan) -> list[JudgedReaction]:
    """What runs between the records that are not inert."""
    inert = {"CH4(g)", "N2(g)"} if plan.feeds[0].analysis else set()
    reacting = [record for record in plan.species if record.name not in inert]
    found = independent_reactions(reacting, {"CH4(g)", "H2O(g)", "N2(g)"})
    return [
        judged_reaction(str(r), {n: float(v) for n, v in r.terms.items()}, load_library())
        for r in found
    ]


@dataclass(frozen=True)
class Samples:
    """B samples: the truth and what was read."""

    plan: Plan
    T: FloatArray
    P: FloatArray
    truth: FloatArray
    """(B, M) of gases and flows."""
    u: FloatArray
    wet: FloatArray
    """(B, n) moles per mole of dry gas."""

    def exact(self) -> Readings:
        return self._readings(self.truth, self.T)

    def noisy(self, seed: int) -> Readings:
        random = np.random.default_rng(seed)
        values = self.truth + self.u * random.standard_normal(self.truth.shape)
        T = self.T + U_TEMPERATURE * random.standard_normal(self.T.shape)
        return self._readings(values, T)

    def with_error(self, readings: Readings, column: int, sizes: float) -> Readings:
        """A gross error of so many standard uncertainties in one measurement."""
        values = readings.values.copy()
        values[:, column] += sizes * self.u[:, column]
        return replace(readings, values=values)

    def _readings(self, values: FloatArray, T: FloatArray) -> Readings:
        ideal = np.zeros((len(T), len(self.plan.model.records)))
        return Readings(values, self.u, T, np.full(T.shape, U_TEMPERATURE), self.P, ideal)


def reformer_samples(
    count: int, temperatures: tuple[float, float] = (1050.0, 1200.0), plan: Plan | None = None
) -> Samples:
    """At equilibrium exactly; 1 % of reading and a floor of 0.02 %, flows 1.4 %."""
    plan = plan or reformer_plan()
    random = np.random.default_rng(20)
    T = random.uniform(*temperatures, count)
    P = np.full(count, 25e5)
    steam = random.uniform(0.9, 1.1, count)
    feed = np.column_stack([np.full(count, 100.0), np.full(count, 2.0), 300.0 * steam])
    amounts = at_temperature(plan.model, T, P, feed).amounts[:, list(plan.columns)]
    wet = amounts / amounts[:, plan.dry].sum(axis=1, keepdims=True)
    flows = np.column_stack([np.ones(count), steam])
    gases = wet[:, : len(plan.readings) - 2]
    u = np.hypot(READING * gases, FLOOR)
    return Samples(plan, T, P, np.hstack([gases, flows]), np.hstack([u, U_FLOW * flows]), wet)


def shift_plan(*, steam_ratio: bool = True, normalised: bool = False) -> Plan:
    """Inlet and outlet of a shift reactor analysed dry, with the steam of the inlet measured."""
    outlet = analysis(normalised=normalised)
    inlet = analysis(normalised=normalised)
    if steam_ratio:
        inlet = replace(
            inlet, analytes=(*inlet.analytes, ("H2O(g)",)), names=(*inlet.names, "steam ratio")
        )
    raw = {"CO(g)": 12.0, "CO2(g)": 9.0, "H2(g)": 72.0, "CH4(g)": 6.0, "N2(g)": 1.0, "H2O(g)": 55.0}
    stream = Stream("raw", 630.0, 26e5, raw, "kmol/h", True)
    chemistry = Chemistry(
        selection=Selection(consider=tuple(raw), inert=("CH4(g)", "N2(g)")),
    )
    return plan_of(chemistry, outlet, [Feed(stream, inlet)], load_library())


def shift_samples(count: int, plan: Plan | None = None) -> Samples:
    """At equilibrium exactly, from 620 to 720 K, of inlets that differ."""
    plan = plan or shift_plan()
    random = np.random.default_rng(30)
    T, P = random.uniform(620.0, 720.0, count), np.full(count, 25e5)
    names = [record.name for record in plan.model.feed_records]
    middle = np.array([first(plan.feeds[0].stream.amounts[name]) for name in names])
    feed = middle * random.uniform(0.9, 1.1, (count, len(names)))
    amounts = at_temperature(plan.model, T, P, feed).amounts[:, list(plan.columns)]
    wet = amounts / amounts[:, plan.dry].sum(axis=1, keepdims=True)
    dry_feed = feed / (feed.sum(axis=1) - feed[:, names.index("H2O(g)")])[:, np.newaxis]
    columns = [names.index(reading.record) for reading in plan.readings[5:]]
    truth = np.hstack([wet[:, :5], dry_feed[:, columns]])
    u = np.hypot(READING * truth, FLOOR)
    return Samples(plan, T, P, truth, u, wet)
