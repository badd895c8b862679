"""Does a series of samples drift, or change at some point?

Two rank tests, which ask nothing of the errors' distribution but that samples be independent:

- a drift by H. B. Mann (Econometrica 13 (1945) 245) and M. G. Kendall (1975): S counts the pairs
  that rise less those that fall; without a drift it is normal about 0 with variance
  n(n − 1)(2n + 5)/18, corrected for ties.  Its slope is the median of all pairs' slopes
  (P. K. Sen, J. Am. Stat. Assoc. 63 (1968) 1379);
- a change point by A. N. Pettitt (Appl. Stat. 28 (1979) 126): K is the largest
  |Σ_{i≤t<j} sgn(x_j − x_i)| over t; p ≈ 2 exp(−6 K²/(n³ + n²)), which is above the true one.

A series that drifts has a change point too and the other way round; the one of the smaller p is
told first.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray

_ALL_PAIRS = 700
"""Samples up to which every pair counts in the slope."""

FEWEST = 10
"""Samples below which neither test is made."""


@dataclass(frozen=True)
class Trend:
    """What the tests say of one series.

    Attributes
    ----------
    name : of the series
    samples : how many of the n are known
    drift_probability : of a drift at least as strong by chance
    slope : median change from one sample to the next
    change_probability : of a change point at least as clear by chance
    change : index of the first sample after the likeliest change point
    step : median after it less median before it
    """

    name: str
    samples: int
    drift_probability: float
    slope: float
    change_probability: float
    change: int
    step: float

    def drifts(self, significance: float) -> bool:
        """Whether there is a drift at this rate of false alarms."""
        return bool(self.drift_probability < significance)

    def changes(self, significance: float) -> bool:
        """Whether there is a change point at this rate of false alarms."""
        return bool(self.change_probability < significance)


def trend_of(name: str, values: npt.ArrayLike) -> Trend | None:
    """Both tests of a series in order (n,); NaN are left out; None for too few samples."""
    series = np.asarray(values, dtype=float)
    known = np.flatnonzero(np.isfinite(series))
    if known.size < FEWEST:
        return None
    x = series[known]
    n = x.size
    rises = sum(float(np.sign(x[i + 1 :] - x[i]).sum()) for i in range(n - 1))
    p_drift = _mann_kendall(x, rises)
    # Σ_j sgn(x_j − x_i) = n + 1 − 2 R_i with midranks R; pairs among the first t cancel.
    U = np.cumsum(n + 1.0 - 2.0 * _midranks(x))[:-1]
    t = int(np.argmax(np.abs(U)))
    p_change = min(1.0, 2.0 * float(np.exp(-6.0 * U[t] ** 2 / (n**3 + n**2))))
    return Trend(
        name=name,
        samples=n,
        drift_probability=p_drift,
        slope=_median_slope(x, known),
        change_probability=p_change,
        change=int(known[t + 1]),
        step=float(np.median(x[t + 1 :]) - np.median(x[: t + 1])),
    )


def _midranks(x: FloatArray) -> FloatArray:
    from scipy.stats import rankdata

    return np.asarray(rankdata(x), dtype=float)


def _median_slope(x: FloatArray, places: IntArray) -> float:
    """Median slope of all pairs; of a long series of those whose lag is a multiple of a stride."""
    stride = -(-x.size // _ALL_PAIRS)
    slopes = [
        (x[lag:] - x[:-lag]) / (places[lag:] - places[:-lag])
        for lag in range(stride, x.size, stride)
    ]
    return float(np.median(np.concatenate(slopes)))


def _mann_kendall(x: FloatArray, S: float) -> float:
    from scipy.stats import norm

    n = x.size
    _, ties = np.unique(x, return_counts=True)
    variance = (n * (n - 1) * (2 * n + 5) - np.sum(ties * (ties - 1) * (2 * ties + 5))) / 18.0
    if variance <= 0.0:
        return 1.0
    z = (abs(S) - 1.0) / np.sqrt(variance) if S else 0.0
    return float(2.0 * norm.sf(max(z, 0.0)))
