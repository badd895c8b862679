"""Lists of temperatures: lists, ranges, units carried over, refusals."""

from __future__ import annotations

import pytest
from numpy.testing import assert_allclose

from gibbsmin.errors import InputError
from gibbsmin.thermo.temperatures import read_temperatures

ACCEPTED = 'accepted is a temperature such as "850 degC" or "1123 K".'


@pytest.mark.parametrize(
    ("texts", "kelvin"),
    [
        (["850 degC"], [1123.15]),
        (["600 K", "500 K"], [600.0, 500.0]),
        (["600, 700,800 K"], [600.0, 700.0, 800.0]),
        (["25 degC, 400 K"], [298.15, 400.0]),
        (["300 K to 600 K step 100 K"], [300.0, 400.0, 500.0, 600.0]),
        (["300 to 600 step 100 K"], [300.0, 400.0, 500.0, 600.0]),
        (["300 to 600 K step 150"], [300.0, 450.0, 600.0]),
        (["300 K to 650 K step 100 K"], [300.0, 400.0, 500.0, 600.0]),
        (["0 to 100 degC step 50 K"], [273.15, 323.15, 373.15]),
        (["32 degF to 212 degF step 90 degF"], [273.15, 323.15, 373.15]),
        (["298.15, 400 to 600 step 100 K"], [298.15, 400.0, 500.0, 600.0]),
        ([], []),
    ],
)
def test_read(texts: list[str], kelvin: list[float]) -> None:
    assert_allclose(read_temperatures(texts), kelvin, rtol=1e-12)


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("1000", f'found "1000", a number without a unit; {ACCEPTED}'),
        ("600, 700", f'found "700", a number without a unit; {ACCEPTED}'),
        ("0 K", f'found "0 K", which is not above absolute zero; {ACCEPTED}'),
        ("-300 degC", f'found "-300 degC", which is not above absolute zero; {ACCEPTED}'),
        ("25 bar", f'found "25 bar", which is a pressure; {ACCEPTED}'),
        ("hot", f'found "hot", which does not read as a number and a unit; {ACCEPTED}'),
        ("300,, 400 K", f'found "K", which does not read as a number and a unit; {ACCEPTED}'),
        (
            "600 K to 300 K step 100 K",
            'found "600 K to 300 K step 100 K", which does not rise; '
            'accepted is "300 K to 1500 K step 100 K".',
        ),
        (
            "300 K to 600 K step 0 K",
            'found "300 K to 600 K step 0 K", which does not rise; '
            'accepted is "300 K to 1500 K step 100 K".',
        ),
        (
            "300 K to 600 K step 0.001 K",
            'found "300 K to 600 K step 0.001 K", which has 300001 steps; '
            "accepted are at most 10000.",
        ),
    ],
)
def test_refused(text: str, message: str) -> None:
    with pytest.raises(InputError) as caught:
        read_temperatures([text])
    assert str(caught.value) == message
