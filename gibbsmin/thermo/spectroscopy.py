"""Ideal-gas functions of a molecule from its spectrum: statistical mechanics.

Each kind of motion has a partition function; with x = E/kT over levels of degeneracy g,

    Z = Σ g exp(−x),  H/RT = ⟨x⟩,  Cp/R = ⟨x²⟩ − ⟨x⟩²,  S/R = ln Z + ⟨x⟩,

and the kinds add up.  Translation is that of the ideal gas at P° (O. Sackur, H. Tetrode, 1912);
rotation that of a rigid top, with the first terms of H. P. Mulholland (Proc. Camb. Phil. Soc. 24
(1928) 280) where it is linear, and with a factor 1 + ρT where it stretches (E. B. Wilson, J. Chem.
Phys. 4 (1936) 526); vibration that of harmonic oscillators.  A diatomic molecule with an
anharmonicity, and an internal rotation, are summed over their levels, see ``energy_levels``.
Nuclear spin is left out, as tables do: hydrogen below 300 K, whose ortho and para forms matter,
is not described.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import (
    AVOGADRO_CONSTANT,
    BOLTZMANN_CONSTANT,
    GAS_CONSTANT,
    PLANCK_CONSTANT,
    STANDARD_PRESSURE,
)
from gibbsmin.errors import InputError
from gibbsmin.thermo.energy_levels import KELVIN_PER_WAVENUMBER, Diatomic, hindered_levels

SYMMETRY_NUMBERS: Final = (1, 2, 3, 4, 5, 6, 8, 10, 12, 24, 60)
"""Numbers of rotations that bring a molecule onto itself (of the point groups molecules have)."""

_CLASSICAL: Final = 1.5
"""kT/hcB from which a rotation counts as classical: S then is good to 0.1 J/mol/K."""


@dataclass(frozen=True)
class InternalRotation:
    """One internal rotation in V (1 − cos nφ)/2.

    Attributes
    ----------
    barrier : V, cm⁻¹; 0 turns freely
    fold : n
    constant : ħ²/(2 I hc) of the reduced moment of inertia, cm⁻¹
    symmetry_number : of the turning group: 3 of CH3, 1 of OH
    """

    barrier: float
    fold: int
    constant: float
    symmetry_number: int


@dataclass(frozen=True)
class Spectrum:
    """What is known of a molecule.

    Attributes
    ----------
    molar_mass : kg/mol
    symmetry_number : σ
    rotational_constants : cm⁻¹; none of an atom, one of a linear molecule, three of another
    vibrations : wavenumber in cm⁻¹ and degeneracy of each
    electronic : energy in cm⁻¹ and degeneracy of each level, the lowest at 0
    anharmonicity, cubic_anharmonicity, coupling, distortion : ωexe, ωeye, αe and De of a diatomic
        molecule, cm⁻¹; its rotational constant then is Be and its one wavenumber ωe
    internal_rotations : in place of as many vibrations
    stretching : ρ in 1/K, of a molecule that stretches as it rotates
    """

    molar_mass: float
    symmetry_number: int
    rotational_constants: tuple[float, ...]
    vibrations: tuple[tuple[float, int], ...]
    electronic: tuple[tuple[float, float], ...] = ((0.0, 1.0),)
    anharmonicity: float = 0.0
    cubic_anharmonicity: float = 0.0
    coupling: float = 0.0
    distortion: float = 0.0
    internal_rotations: tuple[InternalRotation, ...] = ()
    stretching: float = 0.0

    def __post_init__(self) -> None:
        if self.symmetry_number not in SYMMETRY_NUMBERS:
            raise InputError(
                f"found the symmetry number {self.symmetry_number}",
                f"accepted is one of {', '.join(map(str, SYMMETRY_NUMBERS))}",
                key="symmetry_number",
            )
        if len(self.rotational_constants) == 1 and self.symmetry_number > 2:
            raise InputError(
                f"found the symmetry number {self.symmetry_number} of a linear molecule",
                "accepted is 1, or 2 where both ends are alike",
                key="symmetry_number",
            )
        if len(self.rotational_constants) not in (0, 1, 3):
            raise InputError(
                f"found {len(self.rotational_constants)} rotational constants",
                "accepted are none of an atom, one of a linear molecule, three of another",
                key="rotational_constants",
            )
        positive = [*self.rotational_constants, *(w for w, _ in self.vibrations)]
        if not all(value > 0.0 for value in positive):
            raise InputError(
                "found a constant or wavenumber that is not above zero",
                "accepted are wavenumbers in 1/cm",
                key="vibrations",
            )

    @property
    def classical_from(self) -> float:
        """T in K from which the rotation is classical within 0.1 J/mol/K of S; 0 of a sum."""
        if self.anharmonicity or not self.rotational_constants:
            return 0.0
        return _CLASSICAL * KELVIN_PER_WAVENUMBER * max(self.rotational_constants)

    @property
    def motions(self) -> int:
        """Number of vibrations, each counted by its degeneracy, and internal rotations."""
        return sum(count for _, count in self.vibrations) + len(self.internal_rotations)


@dataclass(frozen=True)
class GasFunctions:
    """Cp and S in J/mol/K and H(T) − H(0 K) in J/mol, each of the shape of T."""

    heat_capacity: FloatArray
    entropy: FloatArray
    enthalpy: FloatArray


def gas_functions(spectrum: Spectrum, temperature: npt.ArrayLike) -> GasFunctions:
    """The molecule's functions at P° = 1 bar, over any shape of T in K."""
    T = np.asarray(temperature, dtype=float)
    flat = T.reshape(-1)
    parts = [_translation(spectrum.molar_mass, flat), _of_levels(*_electronic(spectrum), flat)]
    if spectrum.anharmonicity:
        parts.append(_of_levels(*_diatomic_levels(spectrum), flat, spectrum.symmetry_number))
    else:
        parts.append(_rotation(spectrum, flat))
        parts += [_vibration(w, count, flat) for w, count in spectrum.vibrations]
    parts += [
        _of_levels(*_rotor_levels(r), flat, r.symmetry_number) for r in spectrum.internal_rotations
    ]
    Cp, S, H = (GAS_CONSTANT * sum(values) for values in zip(*parts, strict=True))
    return GasFunctions(
        np.asarray(Cp).reshape(T.shape),
        np.asarray(S).reshape(T.shape),
        (np.asarray(H) * flat).reshape(T.shape),
    )


_Part = tuple[FloatArray, FloatArray, FloatArray]
"""Cp/R, S/R and H/RT."""


def _translation(molar_mass: float, T: FloatArray) -> _Part:
    mass = molar_mass / AVOGADRO_CONSTANT
    wave = 2.0 * np.pi * mass * BOLTZMANN_CONSTANT * T / PLANCK_CONSTANT**2
    log_q = 1.5 * np.log(wave) + np.log(BOLTZMANN_CONSTANT * T / STANDARD_PRESSURE)
    return np.full(T.shape, 2.5), log_q + 2.5, np.full(T.shape, 2.5)


def _rotation(spectrum: Spectrum, T: FloatArray) -> _Part:
    constants = np.array(spectrum.rotational_constants) * KELVIN_PER_WAVENUMBER
    nothing = np.zeros(T.shape)
    if constants.size == 0:
        return nothing, nothing, nothing
    log_sigma = np.log(spectrum.symmetry_number)
    if constants.size == 3:
        log_q = 0.5 * (np.log(np.pi) + 3.0 * np.log(T) - np.log(constants).sum()) - log_sigma
        return _stretched(spectrum.stretching, T, (nothing + 1.5, log_q + 1.5, nothing + 1.5))
    x = constants[0] / T
    series = 1.0 + x / 3.0 + x**2 / 15.0
    # −d ln(series)/d ln x gives H/RT beyond 1.
    slope = (x / 3.0 + 2.0 * x**2 / 15.0) / series
    H = 1.0 - slope
    bend = (x / 3.0 + 4.0 * x**2 / 15.0) / series - slope**2
    rigid = (H + bend, np.log(series / x) - log_sigma + H, H)
    return _stretched(spectrum.stretching, T, rigid)


def _stretched(rho: float, T: FloatArray, rigid: _Part) -> _Part:
    """The factor 1 + ρT of the partition function."""
    share = rho * T / (1.0 + rho * T)
    Cp, S, H = rigid
    return Cp + share * (2.0 - share), S + np.log1p(rho * T) + share, H + share


def _vibration(wavenumber: float, count: int, T: FloatArray) -> _Part:
    """Above the level of no quantum, whose energy belongs to the enthalpy of formation."""
    x = wavenumber * KELVIN_PER_WAVENUMBER / T
    left = -np.expm1(-x)
    mean = x * np.exp(-x) / left
    Cp = x**2 * np.exp(-x) / left**2
    return count * Cp, count * (mean - np.log(left)), count * mean


def _of_levels(
    energies: FloatArray, degeneracies: FloatArray, T: FloatArray, symmetry_number: int = 1
) -> _Part:
    """Levels in cm⁻¹, (L,), counted from the lowest."""
    x = (energies - energies.min())[:, np.newaxis] * KELVIN_PER_WAVENUMBER / T
    weights = degeneracies[:, np.newaxis] * np.exp(-x)
    Z = weights.sum(axis=0)
    mean = (weights * x).sum(axis=0) / Z
    square = (weights * x**2).sum(axis=0) / Z
    return square - mean**2, np.log(Z / symmetry_number) + mean, mean


def _electronic(spectrum: Spectrum) -> tuple[FloatArray, FloatArray]:
    energies, degeneracies = np.array(spectrum.electronic, dtype=float).T
    return energies, degeneracies


def _diatomic_levels(spectrum: Spectrum) -> tuple[FloatArray, FloatArray]:
    if len(spectrum.rotational_constants) != 1 or len(spectrum.vibrations) != 1:
        raise InputError(
            "found an anharmonicity of a molecule that is not diatomic",
            "accepted is one with one rotational constant and one wavenumber",
            key="anharmonicity",
        )
    (B,), ((w, _),) = spectrum.rotational_constants, spectrum.vibrations
    return Diatomic(
        we=w,
        wexe=spectrum.anharmonicity,
        weye=spectrum.cubic_anharmonicity,
        Be=B,
        alpha_e=spectrum.coupling,
        De=spectrum.distortion,
    ).levels()


def _rotor_levels(rotor: InternalRotation) -> tuple[FloatArray, FloatArray]:
    levels = hindered_levels(rotor.constant, rotor.barrier, rotor.fold)
    return levels, np.ones(levels.size)
