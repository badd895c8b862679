"""Ideal-gas functions of a molecule from its spectrum: statistical mechanics.

Each kind of motion has a partition function; with x = E/kT over levels of degeneracy g,

    Z = Σ g exp(−x),  H/RT = ⟨x⟩,  Cp/R = ⟨x²⟩ − ⟨x⟩²,  S/R = ln Z + ⟨x⟩,

and the kinds add up.  Translation is that of the ideal gas at P° (O. Sackur, H. Tetrode, 1912);
rotation that of a rigid top, with the first terms of H. P. Mulholland (Proc. Camb. Phil. Soc. 24
(1928) 280) where it is linear; vibration that of harmonic oscillators.  A diatomic molecule whose
anharmonicity is given is summed over its levels

    E(v, J) = ωe (v + ½) − ωexe (v + ½)² + (Be − αe (v + ½)) J(J + 1) − De J²(J + 1)²

up to where they cease to rise (G. Herzberg, Spectra of Diatomic Molecules, 1950).  An internal
rotation in V (1 − cos nφ)/2 is summed over its eigenvalues (K. S. Pitzer, J. Chem. Phys. 5 (1937)
469, found here by diagonalising the Hamiltonian of free rotors).
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
    SPEED_OF_LIGHT,
    STANDARD_PRESSURE,
)
from gibbsmin.errors import InputError

_KELVIN_PER_WAVENUMBER: Final = 100.0 * PLANCK_CONSTANT * SPEED_OF_LIGHT / BOLTZMANN_CONSTANT
"""hc/k of 1 cm⁻¹, K."""

SYMMETRY_NUMBERS: Final = (1, 2, 3, 4, 6, 8, 10, 12, 24, 60)
"""Numbers of rotations that bring a molecule onto itself (of the point groups molecules have)."""

_HIGHEST_ROTATION: Final = 400
_FREE_ROTORS: Final = 80
_HIGHEST_LEVEL: Final = 60


@dataclass(frozen=True)
class InternalRotation:
    """One internal rotation in V (1 − cos nφ)/2.

    Attributes
    ----------
    barrier : V, cm⁻¹; 0 turns freely
    fold : n, which is also its symmetry number
    constant : ħ²/(2 I hc) of the reduced moment of inertia, cm⁻¹
    """

    barrier: float
    fold: int
    constant: float


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
    anharmonicity, coupling, distortion : ωexe, αe and De of a diatomic molecule, cm⁻¹; its
        rotational constant then is Be and its one wavenumber ωe
    internal_rotations : in place of as many vibrations
    """

    molar_mass: float
    symmetry_number: int
    rotational_constants: tuple[float, ...]
    vibrations: tuple[tuple[float, int], ...]
    electronic: tuple[tuple[float, float], ...] = ((0.0, 1.0),)
    anharmonicity: float = 0.0
    coupling: float = 0.0
    distortion: float = 0.0
    internal_rotations: tuple[InternalRotation, ...] = ()

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
    parts += [_of_levels(*_rotor_levels(r), flat, r.fold) for r in spectrum.internal_rotations]
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
    constants = np.array(spectrum.rotational_constants) * _KELVIN_PER_WAVENUMBER
    nothing = np.zeros(T.shape)
    if constants.size == 0:
        return nothing, nothing, nothing
    log_sigma = np.log(spectrum.symmetry_number)
    if constants.size == 3:
        log_q = 0.5 * (np.log(np.pi) + 3.0 * np.log(T) - np.log(constants).sum()) - log_sigma
        return nothing + 1.5, log_q + 1.5, nothing + 1.5
    x = constants[0] / T
    series = 1.0 + x / 3.0 + x**2 / 15.0
    # −d ln(series)/d ln x gives H/RT beyond 1.
    slope = (x / 3.0 + 2.0 * x**2 / 15.0) / series
    H = 1.0 - slope
    bend = (x / 3.0 + 4.0 * x**2 / 15.0) / series - slope**2
    return 1.0 + bend, np.log(series / x) - log_sigma + H, H


def _vibration(wavenumber: float, count: int, T: FloatArray) -> _Part:
    """Above the level of no quantum, whose energy belongs to the enthalpy of formation."""
    x = wavenumber * _KELVIN_PER_WAVENUMBER / T
    left = -np.expm1(-x)
    mean = x * np.exp(-x) / left
    Cp = x**2 * np.exp(-x) / left**2
    return count * Cp, count * (mean - np.log(left)), count * mean


def _of_levels(
    energies: FloatArray, degeneracies: FloatArray, T: FloatArray, symmetry_number: int = 1
) -> _Part:
    """Levels in cm⁻¹, (L,), counted from the lowest."""
    x = (energies - energies.min())[:, np.newaxis] * _KELVIN_PER_WAVENUMBER / T
    weights = degeneracies[:, np.newaxis] * np.exp(-x)
    Z = weights.sum(axis=0)
    mean = (weights * x).sum(axis=0) / Z
    square = (weights * x**2).sum(axis=0) / Z
    return square - mean**2, np.log(Z / symmetry_number) + mean, mean


def _electronic(spectrum: Spectrum) -> tuple[FloatArray, FloatArray]:
    energies, degeneracies = np.array(spectrum.electronic, dtype=float).T
    return energies, degeneracies


def _diatomic_levels(spectrum: Spectrum) -> tuple[FloatArray, FloatArray]:
    """Levels of vibration and rotation below the top of the vibrational ladder."""
    if len(spectrum.rotational_constants) != 1 or len(spectrum.vibrations) != 1:
        raise InputError(
            "found an anharmonicity of a molecule that is not diatomic",
            "accepted is one with one rotational constant and one wavenumber",
            key="anharmonicity",
        )
    (B,), ((w, _),) = spectrum.rotational_constants, spectrum.vibrations
    v = np.arange(_HIGHEST_LEVEL) + 0.5
    ladder = w * v - spectrum.anharmonicity * v**2
    rising = np.flatnonzero(np.diff(ladder) <= 0.0)
    v = v[: rising[0] + 1] if rising.size else v
    J = np.arange(_HIGHEST_ROTATION)
    turn = (J * (J + 1))[np.newaxis]
    constants = (B - spectrum.coupling * v)[:, np.newaxis]
    levels = (
        (w * v - spectrum.anharmonicity * v**2)[:, np.newaxis]
        + constants * turn
        - spectrum.distortion * turn**2
    )
    # Where the centrifugal term outweighs, levels would fall again: these are no bound states.
    bound = (constants > 0.0) & (constants - 2.0 * spectrum.distortion * turn > 0.0)
    weights = np.broadcast_to(2.0 * J + 1.0, levels.shape)
    return levels[bound], weights[bound]


def _rotor_levels(rotor: InternalRotation) -> tuple[FloatArray, FloatArray]:
    """Eigenvalues of −F d²/dφ² + V (1 − cos nφ)/2 among free rotors exp(imφ)."""
    m = np.arange(-_FREE_ROTORS, _FREE_ROTORS + 1)
    hamiltonian = np.diag(rotor.constant * m.astype(float) ** 2 + rotor.barrier / 2.0)
    for shift in (-rotor.fold, rotor.fold):
        hamiltonian += np.diag(np.full(m.size - rotor.fold, -rotor.barrier / 4.0), shift)
    levels = np.asarray(np.linalg.eigvalsh(hamiltonian), dtype=np.float64)
    return levels, np.ones(levels.size)
