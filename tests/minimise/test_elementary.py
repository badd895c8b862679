"""exp and ln of eight numbers at a time against the library's, in both forms."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numba import njit

from gibbsmin.minimise.compiling import IN_ORDER
from gibbsmin.minimise.kernel.elementary import exponential, logarithm
from gibbsmin.minimise.kernel.form import forms
from gibbsmin.minimise.kernel.storage import network_of
from gibbsmin.minimise.kernel.vector import LANES, load, store


def exponentials(values: np.ndarray, results: np.ndarray) -> None:
    for row in range(values.shape[0]):
        store(results, row, exponential(load(values, row)))


def logarithms(values: np.ndarray, results: np.ndarray) -> None:
    for row in range(values.shape[0]):
        store(results, row, logarithm(load(values, row)))


def in_form(function: Callable[..., None], form: str, values: np.ndarray) -> np.ndarray:
    if form == "compiled":
        one = np.ones(1)
        network = network_of(np.ones((1, 1)), np.ones(1, dtype=bool), one, one)
        forms.choose(network, 10**9)  # tells the compiler of vectors
        function = njit(fastmath=IN_ORDER, error_model="numpy")(function)
    eights = np.resize(values, (-(-values.size // LANES), LANES))
    results = np.empty_like(eights)
    with np.errstate(all="ignore"):
        function(eights, results)
    return results.ravel()[: values.size]


@pytest.mark.parametrize("form", ["interpreted", "compiled"])
def test_exponential(form: str) -> None:
    x = np.concatenate(
        [np.linspace(-699.0, 299.0, 5001), np.linspace(-1.0, 1.0, 1001), [0.0, -1e-17, 1e-300]]
    )
    np.testing.assert_allclose(in_form(exponentials, form, x), np.exp(x), rtol=5e-16)
    ends = in_form(exponentials, form, np.array([-1e300, -800.0, 400.0, 1e300]))
    np.testing.assert_allclose(ends, [0.0, 0.0, np.exp(300.0), np.exp(300.0)], rtol=1e-13)


@pytest.mark.parametrize("form", ["interpreted", "compiled"])
def test_logarithm(form: str) -> None:
    x = np.concatenate(
        [np.exp(np.linspace(-700.0, 700.0, 5001)), np.linspace(0.4, 2.5, 1001), [1.0, 1 + 2e-16]]
    )
    np.testing.assert_allclose(in_form(logarithms, form, x), np.log(x), rtol=5e-16, atol=2e-16)
    low, high = in_form(logarithms, form, np.array([0.0, np.inf]))
    assert low < -700.0
    assert high > 700.0
