"""A user's record's heat capacity, and the entropy and enthalpy that come with it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import within
from gibbsmin.jobs.record_evaluations import correlated
from gibbsmin.thermo.fit import Table, fit_heat_capacity, gibbs_errors
from gibbsmin.thermo.formula import Formula
from gibbsmin.thermo.group_estimates import estimate_by_groups
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Piece
from gibbsmin.thermo.spectroscopy import InternalRotation, Spectrum, gas_functions
from gibbsmin.thermo.third_law import Transition, phases_of

if TYPE_CHECKING:
    from gibbsmin.jobs.record_schema import (
        CalorimetryTable,
        HeatCapacityTable,
        PieceTable,
        RecordTable,
        SpectrumTable,
    )

_SPECTRUM_RANGE = np.concatenate([np.arange(50.0, 300.0, 10.0), np.geomspace(300.0, 6000.0, 80)])
_U_SUMMED, _U_HARMONIC = 0.05, 0.2
"""J/mol/K; judgement, from how far entropies of published molecules come out, at most 0.12."""

_BY_GROUPS = (
    "An estimate by groups (Joback and Reid 1987); the method's mean errors are 8.4 kJ/mol in the "
    "energies and 1.4 % in the heat capacity."
)


@dataclass(frozen=True)
class Thermal:
    """Heat capacity, and what comes with it; NaN where nothing does."""

    pieces: tuple[Piece, ...]
    findings: tuple[str, ...]
    entropy: float = float("nan")
    u_entropy: float = float("nan")
    enthalpy: float = float("nan")
    u_enthalpy: float = float("nan")
    fit_error: float = float("nan")


def thermal_of(row: RecordTable, composition: Formula, mass: float, library: Library) -> Thermal:
    """The heat capacity by whichever way the record gives it.

    Raises
    ------
    InputError
        for what cannot be: temperatures that do not rise, a heat capacity that is not above
        zero, a spectrum that does not fit the formula.
    """
    if row.heat_capacity:
        with within("heat_capacity"):
            thermal = Thermal(_pieces(row.heat_capacity), ())
    elif row.table is not None:
        with within("table"):
            thermal = _of_table(row.table)
    elif row.spectrum is not None:
        with within("spectrum"):
            thermal = _of_spectrum(row.spectrum, composition, mass)
    elif row.groups is not None:
        estimate = estimate_by_groups(row.groups, dict(composition.elements), library)
        thermal = Thermal(
            (estimate.piece,),
            (_BY_GROUPS, correlated(row.name, estimate.correlation)),
            estimate.entropy,
            estimate.u_entropy,
            estimate.enthalpy,
            estimate.u_enthalpy,
        )
    elif row.calorimetry is not None:
        with within("calorimetry"):
            thermal = _of_table(_last_phase(row.calorimetry))
    return thermal


def _pieces(given: Sequence[PieceTable]) -> tuple[Piece, ...]:
    pieces = tuple(
        Piece(
            p.first,
            p.last,
            **p.coefficients,
            transition=p.transition,
            label="transition" if p.transition else "",
        )
        for p in given
    )
    for k, piece in enumerate(pieces):
        if not piece.T_low < piece.T_high or (k and pieces[k - 1].T_high != piece.T_low):
            raise InputError(
                f"found a piece from {piece.T_low:g} K to {piece.T_high:g} K",
                "accepted are pieces that rise and abut",
            )
        t = np.linspace(piece.T_low, piece.T_high, 50) / 1e3
        Cp = piece.A + t * (piece.B + t * (piece.C + t * piece.D)) + piece.E / t**2
        if Cp.min() <= 0.0:
            raise InputError(
                f"found a heat capacity of {Cp.min():.4g} J/(mol K) near "
                f"{1e3 * t[Cp.argmin()]:.0f} K",
                "accepted is one above zero",
            )
    return pieces


def _of_table(given: HeatCapacityTable) -> Thermal:
    T, Cp = np.array(given.temperature), given.unit * np.array(given.heat_capacity)
    if T.size != Cp.size:
        raise InputError(
            f"found {T.size} temperatures and {Cp.size} heat capacities",
            "accepted are as many of one as of the other",
            key="heat_capacity",
        )
    falling = np.flatnonzero(np.diff(T) <= 0.0)
    if falling.size:
        raise InputError(
            f"found temperatures that do not rise at {T[falling[0] + 1]:g} K",
            "accepted are temperatures in rising order",
            key="temperature",
        )
    if Cp.min() <= 0.0:
        raise InputError(
            f"found a heat capacity of {Cp.min():g} J/(mol K)",
            "accepted are heat capacities above zero",
            key="heat_capacity",
        )
    return _fitted(T, Cp, f"Heat capacity fitted to {T.size} points")


def _fitted(T: FloatArray, Cp: FloatArray, what: str) -> Thermal:
    pieces = fit_heat_capacity(T, Cp)
    table = Table.read(T, Cp, None, None, None)
    error = float(np.nanmax(np.abs(gibbs_errors(pieces, table))))
    return Thermal(pieces, (f"{what}, |ΔG/RT| ≤ {error:.1e}.",), fit_error=error)


def _last_phase(given: CalorimetryTable) -> HeatCapacityTable:
    """The heat capacities above the last transition, which the record goes on with."""
    transitions = sorted(
        (Transition(t.temperature, t.enthalpy) for t in given.transition),
        key=lambda transition: transition.temperature,
    )
    phases = phases_of(np.array(given.temperature), transitions)
    kept = np.flatnonzero(phases == len(transitions)).tolist()
    return given.model_copy(
        update={
            "temperature": tuple(given.temperature[k] for k in kept),
            "heat_capacity": tuple(given.heat_capacity[k] for k in kept),
        }
    )


def _of_spectrum(given: SpectrumTable, composition: Formula, mass: float) -> Thermal:
    spectrum = Spectrum(
        molar_mass=mass,
        symmetry_number=given.symmetry_number,
        rotational_constants=given.rotational_constants or given.moments_of_inertia,
        vibrations=tuple((w, int(count)) for w, count in given.vibrations),
        electronic=given.electronic,
        anharmonicity=given.anharmonicity,
        cubic_anharmonicity=given.cubic_anharmonicity,
        stretching=given.stretching,
        coupling=given.coupling,
        distortion=given.distortion,
        internal_rotations=tuple(
            InternalRotation(r.barrier, r.fold, r.constant, r.symmetry_number)
            for r in given.internal_rotation
        ),
    )
    alike = 2 if len(composition.elements) == 1 else 1
    if composition.atoms == 2 and spectrum.symmetry_number != alike:
        raise InputError(
            f"found the symmetry number {spectrum.symmetry_number} of {composition.text}",
            f"accepted is {alike}, since its two atoms are {'' if alike == 2 else 'not '}alike",
            key="symmetry_number",
        )
    rotations = {0: 0, 1: 2, 3: 3}[len(spectrum.rotational_constants)]
    expected = max(0, int(3 * composition.atoms) - 3 - rotations)
    if spectrum.motions != expected:
        raise InputError(
            f"found {spectrum.motions} vibrations and internal rotations of {composition.text}",
            f"accepted are {expected}, each counted by its degeneracy",
            key="vibrations",
        )
    summed = bool(given.anharmonicity)
    model = "levels of a vibrating rotor" if summed else "rigid and harmonic"
    T = _SPECTRUM_RANGE[spectrum.classical_from <= _SPECTRUM_RANGE]
    Cp = gas_functions(spectrum, T).heat_capacity
    what = f"Functions from the spectrum ({model}), {T[0]:.0f} to 6000 K"
    thermal = _fitted(T, Cp, what)
    u_entropy = _U_SUMMED if summed or spectrum.motions == 0 else _U_HARMONIC
    findings = [*thermal.findings, f"Its entropy is good to {u_entropy:g} J/(mol K), by judgement."]
    if not summed and spectrum.motions:
        findings.append(
            "Anharmonicity, which is left out, adds to Cp at high temperature: 1 to 3 % at 2000 K "
            "in CO2, H2O and diatomics."
        )
    if not given.internal_rotation and len(spectrum.rotational_constants) == 3:
        findings.append("Internal rotations, if there are any, are treated as vibrations.")
    return replace(
        thermal,
        entropy=float(gas_functions(spectrum, REFERENCE_TEMPERATURE).entropy),
        u_entropy=u_entropy,
        findings=tuple(findings),
    )
