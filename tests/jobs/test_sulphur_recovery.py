"""The conversion of hydrogen sulphide to sulphur with the air that takes a third of it.

Common practice: conversion at equilibrium has its minimum near 55 % between 800 and 880 K, where
sulphur vapour changes from S8 and S6 to S2, and rises on both sides.
"""

from __future__ import annotations

import numpy as np
import pytest

import gibbsmin

GASES = ["H2S", "SO2", "H2O", "N2", "H2", "S2", "S3", "S4", "S5", "S6", "S7", "S8", "HS", "SO"]


def conversion(kelvin: float) -> float:
    case = gibbsmin.load_case(
        {
            "feed": {
                "mixture": {
                    "temperature": "300 K",
                    "pressure": "1 atm",
                    "unit": "mol",
                    "amounts": {"H2S": 1.0, "O2": 0.5, "N2": 0.5 * 3.76},
                }
            },
            "outlet": {"temperature": f"{kelvin} K", "pressure": "1 atm"},
            "species": {"consider": [*GASES, "S(l)"]},
        }
    )
    (stage,) = gibbsmin.predict(case).stages
    elementary = [
        amount * dict(record.elements)["S"]
        for record, amount in zip(stage.records, stage.amounts.tolist(), strict=True)
        if {symbol for symbol, _ in record.elements} == {"S"}
    ]
    return sum(elementary)


def test_minimum_between_800_and_880_kelvin() -> None:
    temperatures = np.arange(500.0, 1501.0, 20.0)
    curve = np.array([conversion(kelvin) for kelvin in temperatures.tolist()])
    lowest = int(np.argmin(curve))
    assert 800.0 <= temperatures[lowest] <= 880.0
    assert curve[lowest] == pytest.approx(0.55, abs=0.03)
    assert np.all(np.diff(curve[: lowest + 1]) < 0.0)
    assert np.all(np.diff(curve[lowest:]) > 0.0)
    assert curve[0] > 0.9
