"""Dew points of a gas: of water by the library, of sulphuric acid by a published correlation."""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE, STANDARD_PRESSURE
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable

ACID_DEW_POINT_SOURCE: Final = (
    "F. H. Verhoff, J. T. Banchero, Predicting dew points of flue gases, "
    "Chem. Eng. Prog. 70 (8), 71–72 (1974); recalled from memory"
)

_MMHG: Final = STANDARD_ATMOSPHERE / 760
_WATER_RANGE: Final = (0.02, 0.30)
_TRIOXIDE_RANGE: Final = (0.1e-6, 1000e-6)

_COLDEST, _HOTTEST = 173.15, 523.15
_BISECTIONS: Final = 60


def water_dew_point(partial_pressure: npt.ArrayLike, library: Library) -> FloatArray:
    """Temperature in K at which water, or ice, begins to form.

    Solves G(H2O, gas, T) + R T ln(p/P°) = min(G(liquid), G(ice)) by bisection, T.shape of p.  The
    gas is ideal and pressure on the liquid is left out, as in the stages themselves; the dew point
    of pure steam is so 0.1 K high at 0.2 bar, 0.4 K at 1 bar, 1.7 K at 5 bar and 3.3 K at 10 bar.
    NaN where it would lie outside −100 … 250 °C, and without water.

    Parameters
    ----------
    partial_pressure
        p(H2O) in Pa.
    """
    p = np.asarray(partial_pressure, dtype=float)
    log_saturation = _log_saturation(library)
    with np.errstate(divide="ignore", invalid="ignore"):
        wanted = np.log(p / STANDARD_PRESSURE)
    low, high = np.full(p.shape, _COLDEST), np.full(p.shape, _HOTTEST)
    inside = (log_saturation(low) <= wanted) & (wanted <= log_saturation(high))
    for _ in range(_BISECTIONS):
        middle = (low + high) / 2
        above = log_saturation(middle) > wanted
        low, high = np.where(above, low, middle), np.where(above, middle, high)
    return np.where(inside, (low + high) / 2, np.nan)


def water_saturation_pressure(temperature: npt.ArrayLike, library: Library) -> FloatArray:
    """Pressure in Pa at which steam is saturated over water, or over ice where that is stabler.

    The inverse of :func:`water_dew_point`, with the same idealisations; T in K, of any shape.
    """
    T = np.asarray(temperature, dtype=float)
    return np.asarray(STANDARD_PRESSURE * np.exp(_log_saturation(library)(T)))


def _log_saturation(library: Library) -> Callable[[FloatArray], FloatArray]:
    """ln(p/P°) of saturated steam as a function of T."""
    table = PropertyTable.of([library[name] for name in ("H2O(g)", "H2O(l)", "H2O(cr)")])

    def log_saturation(T: FloatArray) -> FloatArray:
        gas, liquid, ice = np.moveaxis(table.gibbs_energy(T), -1, 0)
        return np.asarray((np.minimum(liquid, ice) - gas) / (GAS_CONSTANT * T))

    return log_saturation


def acid_dew_point(
    water_fraction: npt.ArrayLike, trioxide_fraction: npt.ArrayLike, pressure: npt.ArrayLike
) -> FloatArray:
    """Temperature in K at which sulphuric acid begins to condense from a flue gas.

    1/T = 2.276e-3 − 2.943e-5 ln p_w − 8.58e-5 ln p_s + 6.20e-6 ln p_w ln p_s, pressures in mmHg
    (:data:`ACID_DEW_POINT_SOURCE`).

    All acid of the gas counts as SO3, of which a little below the dew point most is H2SO4 vapour.
    Pure liquid H2SO4 would condense 20–80 K lower and is no measure of it.

    Parameters
    ----------
    water_fraction, trioxide_fraction
        Mole fractions of H2O and of SO3 + H2SO4 in the wet gas.  NaN is returned outside the
        range of flue gases, 2–30 % and 0.1–1000 ppm, that the correlation is used for.
    pressure
        Pa.
    """
    y_w = np.asarray(water_fraction, dtype=float)
    y_s = np.asarray(trioxide_fraction, dtype=float)
    valid = (
        (y_w >= _WATER_RANGE[0])
        & (y_w <= _WATER_RANGE[1])
        & (y_s >= _TRIOXIDE_RANGE[0])
        & (y_s <= _TRIOXIDE_RANGE[1])
    )
    mmHg = np.asarray(pressure, dtype=float) / _MMHG
    with np.errstate(divide="ignore", invalid="ignore"):
        w, s = np.log(y_w * mmHg), np.log(y_s * mmHg)
        inverse = 2.276e-3 - 2.943e-5 * w - 8.58e-5 * s + 6.20e-6 * w * s
        return np.where(valid, 1 / inverse, np.nan)
