"""exp of many numbers at once, in loops that the vector unit can take.

exp(x) = 2^k exp(r) with k the whole number nearest to x/ln 2 and |r| ≤ ln 2/2; exp(r) by its
Taylor series to r¹³/13!, whose remainder is below 1e-17.  k is found by adding 1.5 · 2⁵², at which
doubles are whole numbers, so that its bits stand at the end of the sum; shifted into the place of
the exponent they are 2^k.  Each step is a loop of its own through memory: in one expression the
compiler may cancel what is added and taken away.
"""

from __future__ import annotations

from gibbsmin.minimise.kernel.storage import Point

_PER_LN2 = 1.4426950408889634
_LN2_HIGH = 0.6931471803691238
_LN2_LOW = 1.9082149292705877e-10
_WHOLE = 6755399441055744.0
_BIAS = 1023
_LARGEST = 300.0
_SMALLEST = -700.0


def exponentials(point: Point, count: int) -> None:
    """exp of the first ``exponent`` into ``fraction``, none above e³⁰⁰; 0 below e⁻⁷⁰⁰."""
    exponent, power, bits, fraction = point.exponent, point.power, point.bits, point.fraction
    for i in range(count):
        x = min(max(exponent[i], _SMALLEST), _LARGEST)
        power[i] = x * _PER_LN2 + _WHOLE
    for i in range(count):
        fraction[i] = power[i] - _WHOLE
    for i in range(count):
        x = min(max(exponent[i], _SMALLEST), _LARGEST)
        k = fraction[i]
        r = (x - k * _LN2_HIGH) - k * _LN2_LOW
        value = 1.0 + r * (1.0 / 13.0)
        value = 1.0 + r * value * (1.0 / 12.0)
        value = 1.0 + r * value * (1.0 / 11.0)
        value = 1.0 + r * value * (1.0 / 10.0)
        value = 1.0 + r * value * (1.0 / 9.0)
        value = 1.0 + r * value * (1.0 / 8.0)
        value = 1.0 + r * value * (1.0 / 7.0)
        value = 1.0 + r * value * (1.0 / 6.0)
        value = 1.0 + r * value * (1.0 / 5.0)
        value = 1.0 + r * value * (1.0 / 4.0)
        value = 1.0 + r * value * (1.0 / 3.0)
        value = 1.0 + r * value * (1.0 / 2.0)
        fraction[i] = 1.0 + r * value if exponent[i] > _SMALLEST else 0.0
    for i in range(count):
        bits[i] = (bits[i] + _BIAS) << 52
    for i in range(count):
        fraction[i] *= power[i]
