"""What is measured, and the equations that tie it together, shared by a batch of samples.

Amounts are moles per mole of dry gas at the outlet.  The unknowns are y, the gas records of the
outlet; then z, what determines the inlet: the amount of each feed of known composition, the amounts
of the records of a feed that is analysed (or whose parts are uncertain by themselves), and scales:
of the feed flows, which are measured against each other, and of gases normalised to 100 %, whose
sum tells nothing.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.sample.findings import Stream as Place
from gibbsmin.sample.reconciliation import Equations
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species


@dataclass(frozen=True)
class Analysis:
    """How a gas was analysed.

    A reading of what drying removed is a ratio to the dry gas, such as of steam.

    Attributes
    ----------
    analytes : records that each reading counts together
    names : of the readings, as written
    dry : whether fractions are of the gas without what drying removed
    normalised : whether the readings were scaled to 100 %
    records : all records the gas may hold
    dried : those that drying removed
    """

    analytes: tuple[tuple[str, ...], ...]
    names: tuple[str, ...]
    dry: bool
    normalised: bool
    records: tuple[str, ...]
    dried: tuple[str, ...]


@dataclass(frozen=True)
class Feed:
    """One stream into the reactor.

    Attributes
    ----------
    stream : its temperature, pressure and nominal amounts
    analysis : of its own gas, where it has one
    uncertain : records whose share of the stream is measured by itself
    """

    stream: Stream
    analysis: Analysis | None = None
    uncertain: tuple[str, ...] = ()


@dataclass(frozen=True)
class Reading:
    """What one column of measurements is: its place, name and basis.

    ``record`` is empty where several are counted together; a flow names its ``stream``, and the
    record where it is of one part of that.
    """

    name: str
    place: Place
    basis: str
    stream: str = ""
    record: str = ""


@dataclass(frozen=True, eq=False)
class Plan:
    """The measurements of a batch and their equations.

    Attributes
    ----------
    model : the stage's candidates with their balance, all reactions at equilibrium
    species : gas records of the sample
    columns : (n_y,) their places among the candidates
    dry : (n_y,) which of them the dry gas holds
    outlet : how its gas was analysed
    feeds : what enters
    inlets : (K, F, n_z) amounts of the F feed records in each of K streams
    readings : (M,) what is measured
    closure : equations over (y, z)
    equilibrium : p and q of each measurement over (n, z), n the candidates' amounts; the balance
        is met by them already
    """

    model: StageModel
    species: tuple[Species, ...]
    columns: tuple[int, ...]
    dry: BoolArray
    outlet: Analysis
    feeds: tuple[Feed, ...]
    inlets: FloatArray
    readings: tuple[Reading, ...]
    closure: Equations
    equilibrium: Equations

    @property
    def outlet_count(self) -> int:
        """Number of unknowns y."""
        return len(self.species)


def plan_of(
    chemistry: Chemistry, outlet: Analysis, feeds: Sequence[Feed], library: Library
) -> Plan:
    """Lay out the unknowns and measurements of a batch.

    Raises
    ------
    InputError
        when the candidates cannot hold the feed's elements.
    """
    names = list(dict.fromkeys(name for feed in feeds for name in _records_of(feed)))
    model = stage_model(
        _free(chemistry, outlet.records), [library[name] for name in names], library
    )
    candidates = [record.name for record in model.records]
    columns = tuple(candidates.index(name) for name in outlet.records)
    inlet = _Inlet(names)
    for feed in feeds:
        inlet.add(feed)
    flows = len(feeds) > 1
    inlet.scale_flows(feeds, flows)
    scale = inlet.unknown() if outlet.normalised else -1
    inlets = inlet.amounts(len(feeds))

    of_sample = _outlet_rows(outlet, outlet.records, scale, inlet.count)
    of_equilibrium = _outlet_rows(outlet, candidates, scale, inlet.count, model.gas)
    of_feeds = inlet.rows()
    dry = np.array([name not in outlet.dried for name in outlet.records])
    total = inlets.sum(axis=0)
    balance = np.hstack([model.balance.matrix[:, columns], -model.balance.feed_matrix @ total])
    one = np.concatenate([dry.astype(float), np.zeros(inlet.count)])
    return Plan(
        model=model,
        species=tuple(library[name] for name in outlet.records),
        columns=columns,
        dry=dry,
        outlet=outlet,
        feeds=tuple(feeds),
        inlets=inlets,
        readings=(*_readings(outlet, Place.OUTLET), *inlet.readings),
        closure=Equations(
            matrix=np.vstack([balance, one]),
            constants=np.append(np.zeros(len(balance)), 1.0),
            above=_joined(of_sample[0], of_feeds[0]),
            below=_joined(of_sample[1], of_feeds[1]),
        ),
        equilibrium=Equations(
            matrix=np.zeros((0, len(candidates) + inlet.count)),
            constants=np.zeros(0),
            above=_joined(of_equilibrium[0], of_feeds[0]),
            below=_joined(of_equilibrium[1], of_feeds[1]),
        ),
    )


def _free(chemistry: Chemistry, records: Sequence[str]) -> Chemistry:
    """The stage's candidates and the sample's own records, all at equilibrium but the inert."""
    selection = chemistry.selection
    if selection.consider != "all":
        consider = tuple(dict.fromkeys([*selection.consider, *records]))
        selection = replace(selection, consider=consider)
    left_out = tuple(name for name in selection.leave_out if name not in records)
    return Chemistry(
        selection=replace(selection, leave_out=left_out),
        offsets=chemistry.offsets,
        activities=chemistry.activities,
        equation=chemistry.equation,
    )


def _records_of(feed: Feed) -> tuple[str, ...]:
    return feed.analysis.records if feed.analysis else tuple(feed.stream.amounts)


def _readings(analysis: Analysis, place: Place) -> list[Reading]:
    basis = "dry" if analysis.dry else "wet"
    return [
        Reading(
            name,
            place,
            "ratio" if analysis.dry and set(records) <= set(analysis.dried) else basis,
            record=records[0] if len(records) == 1 else "",
        )
        for name, records in zip(analysis.names, analysis.analytes, strict=True)
    ]


def _outlet_rows(
    analysis: Analysis,
    records: Sequence[str],
    scale: int,
    inlet_count: int,
    gas: BoolArray | None = None,
) -> tuple[FloatArray, FloatArray]:
    """p and q of the outlet's analytes over its records, then z."""
    above = np.zeros((len(analysis.analytes), len(records) + inlet_count))
    below = np.zeros_like(above)
    counted = np.ones(len(records)) if gas is None else gas.astype(float)
    if analysis.dry:
        counted *= [name not in analysis.dried for name in records]
    for row, names in enumerate(analysis.analytes):
        above[row, [records.index(name) for name in names]] = 1.0
        if scale >= 0 and not set(names) <= set(analysis.dried):
            below[row, len(records) + scale] = 1.0
        else:
            below[row, : len(records)] = counted
    return above, below


def _joined(outlet: FloatArray, feeds: FloatArray) -> FloatArray:
    """Rows of the outlet over those of the feeds, which say nothing of the outlet's records."""
    silent = np.zeros((len(feeds), outlet.shape[1] - feeds.shape[1]))
    return np.vstack([outlet, np.hstack([silent, feeds])])


class _Inlet:
    """Collects the unknowns z, what each brings, and what is measured of them."""

    def __init__(self, names: Sequence[str]) -> None:
        self._names = names
        self.count = 0
        self._brought: list[tuple[int, int, int, float]] = []
        self._rows: list[tuple[Reading, Mapping[int, float], Mapping[int, float]]] = []
        self._totals: list[list[int]] = []

    @property
    def readings(self) -> tuple[Reading, ...]:
        return tuple(reading for reading, _, _ in self._rows)

    def unknown(self) -> int:
        self.count += 1
        return self.count - 1

    def add(self, feed: Feed) -> None:
        """The unknowns of one stream: one a record where it is analysed, else one a part."""
        stream = len(self._totals)
        if feed.analysis is not None:
            places = {name: self.unknown() for name in feed.analysis.records}
            for name, place in places.items():
                self._brought.append((stream, self._names.index(name), place, 1.0))
            self._totals.append(list(places.values()))
            self._analysed(feed.analysis, places)
            return
        nominal = {name: first(amount) for name, amount in feed.stream.amounts.items()}
        total = sum(nominal.values())
        main = self.unknown()
        places = {name: self.unknown() for name in feed.uncertain}
        rest = total - sum(nominal[name] for name in places)
        for name, amount in nominal.items():
            place, share = (places[name], 1.0) if name in places else (main, amount / rest)
            self._brought.append((stream, self._names.index(name), place, share))
        for name, place in places.items():
            reading = Reading(
                f"{name} in {feed.stream.name}", Place.FEED, "flow", feed.stream.name, name
            )
            self._rows.append((reading, {place: rest / nominal[name]}, {main: 1.0}))
        self._totals.append([main, *places.values()])

    def _analysed(self, analysis: Analysis, places: Mapping[str, int]) -> None:
        out = analysis.dried if analysis.dry else ()
        held = {place: 1.0 for name, place in places.items() if name not in out}
        whole = {self.unknown(): 1.0} if analysis.normalised else held
        readings = _readings(analysis, Place.INLET)
        for reading, names in zip(readings, analysis.analytes, strict=True):
            of_dry = set(names) <= set(out)
            counted = {places[name]: 1.0 for name in names}
            self._rows.append((reading, counted, held if of_dry else whole))

    def scale_flows(self, feeds: Sequence[Feed], measured: bool) -> None:
        """Flows over their nominal values, all against one scale."""
        if not measured:
            return
        totals = [sum(first(n) for n in feed.stream.amounts.values()) for feed in feeds]
        scale = self.unknown()
        for feed, places, total in zip(feeds, self._totals, totals, strict=True):
            share = total / sum(totals)
            reading = Reading(f"flow of {feed.stream.name}", Place.FEED, "flow", feed.stream.name)
            self._rows.append((reading, dict.fromkeys(places, 1.0 / share), {scale: 1.0}))

    def amounts(self, streams: int) -> FloatArray:
        amounts = np.zeros((streams, len(self._names), self.count))
        for stream, record, place, share in self._brought:
            amounts[stream, record, place] = share
        return amounts

    def rows(self) -> tuple[FloatArray, FloatArray]:
        above = np.zeros((len(self._rows), self.count))
        below = np.zeros_like(above)
        for row, (_, numerator, denominator) in enumerate(self._rows):
            above[row, list(numerator)] = list(numerator.values())
            below[row, list(denominator)] = list(denominator.values())
        return above, below
