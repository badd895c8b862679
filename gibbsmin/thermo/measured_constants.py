"""Enthalpy and entropy of one species from measured constants of a reaction.

With ν of the unknown species and the known ones' properties, each constant gives the Gibbs energy
of the unknown, G(T) = (−R T ln K − Σ ν_k G_k)/ν.  Since H and S differ from those at 298.15 K by
integrals of its heat capacity, G − ΔG_Cp = ΔfH298 − T S298:

- second law: a straight line through it gives ΔfH298 and S298 together;
- third law: with S298 known, each point gives ΔfH298, and they should not drift with T.

Uncertainties hold the scatter of the points, an error common to them, and the other species'
enthalpies and entropies; those of the third law that of the entropy too.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.uncertainty import record_uncertainties


@dataclass(frozen=True)
class LawComparison:
    """What measured constants say of a species.

    Attributes
    ----------
    second_law_enthalpy, second_law_entropy : ΔfH298 in J/mol and S298 in J/mol/K
    u_second_law_enthalpy, u_second_law_entropy : standard uncertainties
    third_law_enthalpy, u_third_law_enthalpy : with the entropy given; NaN without one
    second_law_correlation, third_law_correlation : of the errors of enthalpy and entropy
    drift : of the third-law enthalpy, kJ/mol in 1000 K, with its standard uncertainty ``u_drift``
    """

    second_law_enthalpy: float
    u_second_law_enthalpy: float
    second_law_entropy: float
    u_second_law_entropy: float
    third_law_enthalpy: float
    u_third_law_enthalpy: float
    second_law_correlation: float
    third_law_correlation: float
    drift: float
    u_drift: float

    @property
    def consistent(self) -> bool:
        """Whether the third-law enthalpy drifts by no more than two standard uncertainties."""
        return bool(abs(self.drift) <= 2.0 * self.u_drift)


def compare_laws(
    unknown: Species,
    coefficients: Mapping[Species, float],
    temperatures: npt.ArrayLike,
    log10_constants: npt.ArrayLike,
    common_uncertainty: float = 0.0,
) -> LawComparison:
    """Evaluate log10 K (n,) at T (n,) for a species of known heat capacity.

    ``unknown.dfH298`` is of no account; ``unknown.S298`` serves the third law, and NaN leaves it
    away.  ``coefficients`` holds all species of the reaction, products positive;
    ``common_uncertainty`` is that of log10 K which all points share.

    Raises
    ------
    InputError
        for fewer than three points, or a reaction without the species.
    """
    T = np.asarray(temperatures, dtype=float)
    log_K = np.log(10.0) * np.asarray(log10_constants, dtype=float)
    nu = {record.name: value for record, value in coefficients.items()}.get(unknown.name, 0.0)
    if nu == 0.0:
        raise InputError(
            f'found a reaction without "{unknown.name}"',
            "accepted is a reaction in which it takes part",
            key="reaction",
        )
    if T.ndim != 1 or T.shape != log_K.shape or T.size < 3:
        raise InputError(
            f"found {T.size} temperatures and {log_K.size} constants",
            "accepted are as many of one as of the other, at least three",
            key="log10_K",
        )
    others = [record for record in coefficients if record.name != unknown.name]
    weights = np.array([coefficients[record] for record in others])
    known = PropertyTable.of(others).gibbs_energy(T) @ weights
    G = (-GAS_CONSTANT * T * log_K - known) / nu
    reduced = G - _of_heat_capacity(unknown, T)
    line = _straight_line(-T, reduced)
    # Of the other species' enthalpies and entropies, and of the error common to all points.
    known_u = record_uncertainties(others)
    u_H = float(np.linalg.norm(weights * known_u.enthalpy / nu))
    u_S = float(
        np.hypot(
            np.linalg.norm(weights * known_u.entropy / nu),
            GAS_CONSTANT * np.log(10.0) * common_uncertainty / nu,
        )
    )
    third = np.full(T.shape, np.nan)
    drift = (np.nan, np.nan, np.nan, np.nan, np.nan)
    own_u_S = np.nan
    if np.isfinite(unknown.S298):
        third = reduced + T * unknown.S298
        drift = _straight_line(T, third)
        own_u_S = float(record_uncertainties([unknown]).entropy[0])
    scatter = third.std(ddof=1) / np.sqrt(T.size)
    all_S = np.hypot(u_S, own_u_S)
    u_second_H, u_second_S = float(np.hypot(line[1], u_H)), float(np.hypot(line[3], u_S))
    u_third = float(np.linalg.norm([scatter, u_H, T.mean() * all_S]))
    return LawComparison(
        second_law_enthalpy=line[0],
        u_second_law_enthalpy=u_second_H,
        second_law_entropy=line[2],
        u_second_law_entropy=u_second_S,
        third_law_enthalpy=float(third.mean()),
        u_third_law_enthalpy=u_third,
        # Zero uncertainties, of exact data, have no correlation.
        second_law_correlation=line[4] / (u_second_H * u_second_S or 1.0),
        third_law_correlation=float(T.mean()) * own_u_S / (u_third or 1.0),
        drift=drift[2],
        u_drift=float(np.hypot(drift[3], all_S)),
    )


def _of_heat_capacity(unknown: Species, T: FloatArray) -> FloatArray:
    """G(T) of a species whose ΔfH298 and S298 are 0."""
    bare = replace(unknown, dfH298=0.0, S298=0.0)
    return np.asarray(PropertyTable.of([bare]).gibbs_energy(T)[:, 0])


def _straight_line(x: FloatArray, y: FloatArray) -> tuple[float, float, float, float, float]:
    """Intercept and slope by least squares, each with its standard uncertainty; covariance."""
    matrix = np.column_stack([np.ones(x.size), x])
    solution, *_ = np.linalg.lstsq(matrix, y, rcond=None)
    residual = y - matrix @ solution
    variance = float(residual @ residual) / (x.size - 2)
    covariance = variance * np.linalg.inv(matrix.T @ matrix)
    spread = np.sqrt(np.diag(covariance))
    return (
        float(solution[0]),
        float(spread[0]),
        float(solution[1]),
        float(spread[1]),
        float(covariance[0, 1]),
    )
