"""Cubic equations of state: pressure-explicit, with van der Waals' mixing rules; arrays only.

    P = R T/(v − b) − a/((v + σ b)(v + ε b)),   a = Σ y y √(a a) (1 − k),   b = Σ y b.

With one mole in all, V the molar volume, B = Σ n b and D = Σ n n √(a a)(1 − k), the residual
Helmholtz energy at constant T and V is

    F = Aʳ/RT = −n g(V, B) − D f(V, B)/T,
    g = ln(1 − B/V),   f = ln((V + σB)/(V + εB)) / (R B (σ − ε)),

and every property is a derivative of it (M. L. Michelsen, J. M. Mollerup, Thermodynamic Models:
Fundamentals and Computational Aspects, 2nd ed., Tie-Line (2007), ch. 2 and 3).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT

_POLISHES = 3


@dataclass(frozen=True, slots=True)
class Shape:
    """σ and ε, and the critical values Ωa = a Pc/(R Tc)² and Ωb = b Pc/(R Tc)."""

    sigma: float
    epsilon: float
    omega_a: float
    omega_b: float


def compressibility(shape: Shape, A: FloatArray, B: FloatArray, liquid: bool = False) -> FloatArray:
    """Z of the gas, the largest real root; for ``liquid`` the smallest above B.

    With A = a P/(R T)² and B = b P/(R T) the equation reads

        Z³ + ((σ+ε−1) B − 1) Z² + (A − (σ+ε) B (1+B) + σε B²) Z − A B − σε B² (1+B) = 0.
    """
    sum_, product = shape.sigma + shape.epsilon, shape.sigma * shape.epsilon
    c2 = (sum_ - 1.0) * B - 1.0
    c1 = A - sum_ * B * (1.0 + B) + product * B * B
    c0 = -A * B - product * B * B * (1.0 + B)
    Z = _real_root(c2, c1, c0, liquid)
    for _ in range(_POLISHES):
        slope = (3.0 * Z + 2.0 * c2) * Z + c1
        step = (((Z + c2) * Z + c1) * Z + c0) / np.where(slope == 0.0, np.inf, slope)
        # A step that is not small is one at a double root, where it would lead away.
        Z = np.where(np.abs(step) < 1e-3 * (Z - B), Z - step, Z)
    if liquid:
        # A root below the co-volume is no volume; there is then one real one.
        lacking = Z <= B
        if np.any(lacking):
            Z = np.where(lacking, compressibility(shape, A, B), Z)
    return Z


def _real_root(c2: FloatArray, c1: FloatArray, c0: FloatArray, smallest: bool) -> FloatArray:
    """Largest or smallest real root of a cubic, by Cardano's and Viète's formulas."""
    p = c2 * c2 / 9.0 - c1 / 3.0
    q = c2 * (c1 / 6.0 - c2 * c2 / 27.0) - c0 / 2.0
    discriminant = q * q - p * p * p
    with np.errstate(invalid="ignore"):
        radius = np.sqrt(np.abs(discriminant))
        large = np.cbrt(q + np.where(q < 0.0, -radius, radius))
        single = large + p / np.where(large == 0.0, np.inf, large)
        root_p = np.sqrt(np.maximum(p, 0.0))
        ratio = q / np.where(root_p == 0.0, np.inf, root_p**3)
        angle = np.arccos(np.clip(ratio, -1.0, 1.0)) / 3.0
        turned = angle + 2.0 * np.pi / 3.0 if smallest else angle
        three = 2.0 * root_p * np.cos(turned)
    return np.where(discriminant > 0.0, single, three) - c2 / 3.0


@dataclass(frozen=True, eq=False)
class Potential:
    """f and g of F and their derivatives to V and B, each of the states' shape.

    ``V`` and ``B`` are molar volume and co-volume in m³/mol; f and g are homogeneous in both.
    Each derivative is evaluated when it is first asked for.
    """

    shape: Shape
    V: FloatArray
    B: FloatArray

    @cached_property
    def _outer(self) -> FloatArray:
        return self.V + self.shape.sigma * self.B

    @cached_property
    def _inner(self) -> FloatArray:
        return self.V + self.shape.epsilon * self.B

    @cached_property
    def f(self) -> FloatArray:
        width = self.shape.sigma - self.shape.epsilon
        ends = np.log1p(width * self.B / self._inner)
        return np.asarray(ends / (GAS_CONSTANT * self.B * width))

    @cached_property
    def f_V(self) -> FloatArray:
        return np.asarray(-1.0 / (GAS_CONSTANT * self._outer * self._inner))

    @cached_property
    def f_VV(self) -> FloatArray:
        ends = self._outer + self._inner
        return np.asarray(ends / (GAS_CONSTANT * (self._outer * self._inner) ** 2))

    @cached_property
    def f_B(self) -> FloatArray:
        return -(self.f + self.V * self.f_V) / self.B

    @cached_property
    def f_BV(self) -> FloatArray:
        return -(2.0 * self.f_V + self.V * self.f_VV) / self.B

    @cached_property
    def f_BB(self) -> FloatArray:
        return -(2.0 * self.f_B + self.V * self.f_BV) / self.B

    @cached_property
    def g(self) -> FloatArray:
        return np.log1p(-self.B / self.V)

    @cached_property
    def g_V(self) -> FloatArray:
        return self.B / (self.V * (self.V - self.B))

    @cached_property
    def g_B(self) -> FloatArray:
        return -1.0 / (self.V - self.B)

    @cached_property
    def g_VV(self) -> FloatArray:
        return 1.0 / self.V**2 - self.g_BV

    @cached_property
    def g_BV(self) -> FloatArray:
        return 1.0 / (self.V - self.B) ** 2

    @cached_property
    def g_BB(self) -> FloatArray:
        return -self.g_BV
