"""The gas of a stage in its equation of state, and what an ideal gas leaves out."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.train import Step
from gibbsmin.minimise import minimise
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.stage import StageStates
from gibbsmin.results import Comparison, RealGasOutlet
from gibbsmin.thermo.critical import FugacityBias, fugacity_biases, interactions
from gibbsmin.thermo.gas_state import GasState
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import Phase
from gibbsmin.thermo.stability import stability

_HIGHEST_PRESSURE = 300e5
"""Pa to which the equations were compared with reference equations."""

_DENSEST = 0.25
"""Share of the volume taken by the molecules' own, at a reduced density of about 0.8."""

_MATTERS = 1e-4
_MAIN = 0.01
_MOVED = 0.01
_COMPARED = 1e-3
_IN_SECOND_PHASE = 0.01

_SOURCES = {
    Equation.SOAVE_REDLICH_KWONG: (
        "Soave-Redlich-Kwong (Soave 1972; attraction by Twu, Coon and Cunningham 1995, of hydrogen "
        "by Graboski and Daubert 1979, of helium with its classical critical constants)"
    ),
    Equation.PENG_ROBINSON: (
        "Peng-Robinson (1976, 1978; attraction above the critical temperature by Boston and "
        "Mathias 1980, of hydrogen by Twu, Coon and Cunningham 1995, of helium with its classical "
        "critical constants)"
    ),
}


def real_gas_outlet(step: Step, ideal: Step | None) -> RealGasOutlet | None:
    """What the equation of state says of the first state; None for an ideal gas or none at all."""
    found = step.states.equilibria
    state = _gas_state(step.states)
    if state is None or found.fugacity is None:
        return None
    model = step.states.model
    coefficients = np.where(model.gas, np.exp(found.fugacity.logarithms[0]), np.nan)
    verdict = stability(state.gas, state)
    second = {
        name: float(share)
        for name, share in zip(state.gas.names, verdict.other[0], strict=True)
        if share > _IN_SECOND_PHASE
    }
    return RealGasOutlet(
        equation=state.gas.equation.value,
        fugacity_coefficients=coefficients,
        compressibility=float(state.Z[0]),
        settled=float(found.fugacity.error[0]),
        stable=bool(verdict.stable[0]),
        second_phase=second,
        comparison=() if ideal is None else tuple(_compared(step, ideal)),
    )


def real_gas_columns(states: StageStates) -> dict[str, FloatArray | BoolArray]:
    """Of a scan's states: compressibility, whether the gas is one stable phase, φ by record.

    Nothing for an ideal gas.
    """
    model, found = states.model, states.equilibria
    state = model.mixture.gas_state(found.temperature, found.pressure, found.amounts)
    if state is None or found.fugacity is None:
        return {}
    coefficients = np.exp(found.fugacity.logarithms[:, model.gas])
    coefficients[~found.solution.certified] = np.nan
    names = zip(state.gas.names, coefficients.T, strict=True)
    return {
        "compressibility": state.Z,
        "one stable gas": stability(state.gas, state).stable & found.solution.certified,
        **{f"fugacity coefficient {name}": values for name, values in names},
    }


def real_gas_warnings(step: Step, outlet: RealGasOutlet) -> Iterator[str]:
    """What the equation of state is not made for, the gravest first."""
    state, model = _gas_state(step.states), step.states.model
    if state is None:
        return
    if not outlet.stable:
        shares = sorted(outlet.second_phase.items(), key=lambda item: -item[1])
        listed = ", ".join(f"{name} {100 * share:.0f} %" for name, share in shares)
        main = shares[0][0].rpartition("(")[0] if shares else ""
        present = step.states.equilibria.amounts[0] > 0.0
        condensed = any(
            there and record.phase is not Phase.GAS and record.formula == main
            for record, there in zip(model.records, present.tolist(), strict=True)
        )
        if not condensed:
            yield (
                "The gas is not one stable phase: by its equation of state a liquid would form "
                f"beside it, of about {listed}. The figures are those of the gas alone; a pure "
                f"liquid forms where it is considered, such as {main}(l)."
            )
    y = dict(zip(state.gas.names, state.y[0].tolist(), strict=True))
    unknown = [
        name
        for name, known in zip(state.gas.names, state.gas.known.tolist(), strict=True)
        if not known and y[name] > _MATTERS
    ]
    if unknown:
        yield (
            f"{', '.join(unknown)}: no critical constants are published, so the equation of state "
            "takes them as points without attraction."
        )
    pressure = float(state.P[0])
    if pressure > _HIGHEST_PRESSURE:
        yield (
            f"The gas is at {pressure / 1e5:.6g} bar; {outlet.equation} is checked against "
            f"reference equations up to {_HIGHEST_PRESSURE / 1e5:g} bar, and may miss by more "
            "beyond."
        )
    if state.B[0] > _DENSEST * state.V[0]:
        yield (
            f"The gas is dense: its molecules take {100 * float(state.B[0] / state.V[0]):.0f} % of "
            f"the volume, and {outlet.equation} is trusted up to {100 * _DENSEST:g} %."
        )


def real_gas_notes(step: Step, outlet: RealGasOutlet) -> Iterator[str]:
    """How the gas was taken and how far its equation is known to miss."""
    state = _gas_state(step.states)
    if state is None:
        return
    equation = state.gas.equation
    yield (
        f"The gas is real by {_SOURCES[equation]}; fugacity coefficients and composition agree to "
        f"{outlet.settled:.1e}. Dew points and heating values are those of an ideal gas."
    )
    main = [n for n, y in zip(state.gas.names, state.y[0].tolist(), strict=True) if y > _MAIN]
    pairs = [
        f"{' and '.join(sorted(pair))} {k:g}"
        for pair, k in interactions(equation.value).items()
        if pair <= set(main)
    ]
    if pairs:
        yield (
            f"Binary interaction parameters, from Knapp and others 1982, recalled: "
            f"{', '.join(sorted(pairs))}; those of other pairs are 0."
        )
    biases = fugacity_biases(equation.value)
    known = [f"{name} {_told(biases[name])}" for name in main if name in biases]
    if known:
        yield (
            "Fugacity coefficients of the pure gases against reference equations of state, worst "
            f"of the states compared: {', '.join(known)}."
        )


def _told(bias: FugacityBias) -> str:
    if bias.T_low == bias.T_high:
        return f"{bias.deviation:+.1f} % ({bias.T_low:g} K and {bias.P_high:g} bar)"
    return f"{bias.deviation:+.1f} % ({bias.T_low:g}–{bias.T_high:g} K, to {bias.P_high:g} bar)"


def changed_gas_warning(before: StageCase, stage: StageCase) -> str:
    """What is lost between stages that take their gases differently; empty where they do not."""
    first, second = (
        "ideal" if equation is None else equation.value
        for equation in (before.chemistry.equation, stage.chemistry.equation)
    )
    if first == second:
        return ""
    return (
        f'The stage before takes its gas as "{first}", this one as "{second}": the departure of '
        "the enthalpy and entropy of what passes on is counted in one and not in the other."
    )


def ideal_gas_warning(states: StageStates, *, of_many: bool = False) -> tuple[float, str]:
    """How an equation of state would move the main fractions: the largest change, and a sentence.

    An estimate: the fugacity coefficients of the ideal gas's composition, and one solution with
    them.  Of several states the one that moves most is told, with its conditions where it is one
    ``of_many``.  The sentence is empty where all changes are within 1 %.
    """
    model, found = states.model, states.equilibria
    n, T, P = found.amounts, found.temperature, found.pressure
    solved = found.solution.certified & n[:, model.gas].any(axis=1)
    if not solved.any():
        return 0.0, ""
    real = Mixture.of(model.properties, Equation.SOAVE_REDLICH_KWONG)
    programme = model.programme(T, P, states.inlet.amounts)
    logs = real.log_fugacity(T, P, np.where(solved[:, np.newaxis], n, 0.0))
    moved = minimise(replace(programme, energies=programme.energies + logs)).amounts
    before, after = (_fractions(model.gas, amounts) for amounts in (n, moved))
    counted = (before >= _MAIN) & solved[:, np.newaxis]
    change = np.where(counted, after / np.where(counted, before, 1.0) - 1.0, 0.0)
    state, place = np.unravel_index(int(np.nanargmax(np.abs(change))), change.shape)
    size = abs(float(change[state, place]))
    if not size > _MOVED:
        return size, ""
    where = f" at {T[state]:.5g} K and {P[state] / 1e5:.4g} bar" if of_many else ""
    return size, (
        f"The gas is taken as ideal; an equation of state would move {model.records[place].name} "
        f"from about {100 * before[state, place]:.3g} % to {100 * after[state, place]:.3g} %"
        f'{where}: set gas = "{Equation.SOAVE_REDLICH_KWONG.value}".'
    )


def _fractions(gas: BoolArray, amounts: FloatArray) -> FloatArray:
    n = np.where(gas, amounts, 0.0)
    total = n.sum(axis=1, keepdims=True)
    return np.asarray(n / np.where(total > 0.0, total, np.nan))


def _gas_state(states: StageStates) -> GasState | None:
    """The gas of the first state; None where it is ideal, or there is none."""
    model, found = states.model, states.equilibria
    n = found.amounts[:1]
    if not n[0, model.gas].any():
        return None
    return model.mixture.gas_state(found.temperature[:1], found.pressure[:1], n)


def _compared(step: Step, ideal: Step) -> Iterator[Comparison]:
    """Temperature or heat, gases from 0.1 % in either, and solids and liquids."""
    ours, theirs = step.states, ideal.states
    if not theirs.equilibria.solution.certified[0]:
        return
    if step.stage.specification.temperature is None:
        yield Comparison(
            "temperature",
            "K",
            float(theirs.equilibria.temperature[0]),
            float(ours.equilibria.temperature[0]),
        )
    if step.stage.specification.heat is None:
        unit = "W" if step.streams[0].is_flow else "J"
        yield Comparison(
            "heat added", unit, float(theirs.energy.heat[0]), float(ours.energy.heat[0])
        )
    gas = ours.model.gas
    both = np.stack([s.equilibria.amounts[0] for s in (theirs, ours)])
    totals = both[:, gas].sum(axis=1, keepdims=True)
    fractions = np.where(gas, both / np.where(totals > 0.0, totals, np.nan), np.nan)
    for column in np.argsort(-np.nan_to_num(fractions[1]), kind="stable").tolist():
        name = ours.model.records[column].name
        if gas[column]:
            a, b = fractions[:, column].tolist()
            if max(a, b) > _COMPARED:
                yield Comparison(f"y {name}", "", a, b)
        elif both[:, column].any():
            a, b = both[:, column].tolist()
            yield Comparison(f"amount {name}", "mol/s" if step.streams[0].is_flow else "mol", a, b)
