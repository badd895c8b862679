"""Every example gives the result that stands beside it."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest

import gibbsmin
from gibbsmin.present.conditions_file import read_conditions
from gibbsmin.present.outlet_document import outlet_document
from gibbsmin.present.search_document import onset_document

EXAMPLES = Path(__file__).parent.parent / "examples"
CASES = sorted(EXAMPLES.glob("*/case.toml"))


def assert_same(found: Any, expected: Any, place: str) -> None:
    """Figures agree to 1e-7 relative: far more than rounding moves and less than anyone reads."""
    if isinstance(expected, dict):
        assert set(found) == set(expected), place
        for key in expected:
            if key not in ("certificate", "method"):  # these depend on the path to the answer
                assert_same(found[key], expected[key], f"{place}.{key}")
    elif isinstance(expected, list):
        assert len(found) == len(expected), place
        for index, (a, b) in enumerate(zip(found, expected, strict=True)):
            assert_same(a, b, f"{place}[{index}]")
    elif isinstance(expected, float):
        assert found == pytest.approx(expected, rel=1e-7, abs=1e-12), place
    else:
        assert found == expected, place


def test_there_are_examples() -> None:
    assert [path.parent.name for path in CASES]


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.parent.name)
def test_example(path: Path) -> None:
    expected = json.loads((path.parent / "expected.json").read_text(encoding="utf-8"))
    outlet = gibbsmin.predict(gibbsmin.load_case(path))
    assert_same(json.loads(json.dumps(outlet_document(outlet))), expected, path.parent.name)


@pytest.mark.parametrize("path", CASES, ids=lambda path: path.parent.name)
def test_example_says_that_its_data_are_invented(path: Path) -> None:
    assert "invented" in (path.parent / "README.md").read_text(encoding="utf-8")


TABLES = sorted(EXAMPLES.glob("*/expected_scan.csv"))
ONSETS = sorted(EXAMPLES.glob("*/expected_onset.json"))


@pytest.mark.parametrize("path", TABLES, ids=lambda path: path.parent.name)
def test_example_of_a_scan(path: Path) -> None:
    case = gibbsmin.load_case(path.parent / "case.toml")
    conditions = path.parent / "conditions.csv"
    table = (
        gibbsmin.scan(case, read_conditions(conditions), uncertainty=True).table
        if conditions.exists()
        else gibbsmin.scan(case).table
    )
    expected = pd.read_csv(path, dtype={"reason": str}).fillna({"reason": ""})
    assert list(table) == list(expected)
    for name in expected:
        if name == "gap":  # it depends on the path to the answer
            assert (table[name] < 1e-10).all()
        elif expected[name].dtype.kind == "f":
            np.testing.assert_allclose(table[name], expected[name], rtol=1e-7, atol=1e-12)
        else:
            assert table[name].astype(str).tolist() == expected[name].astype(str).tolist()


@pytest.mark.parametrize("path", ONSETS, ids=lambda path: path.parent.name)
def test_example_of_an_onset(path: Path) -> None:
    found = gibbsmin.onset(gibbsmin.load_case(path.parent / "case.toml"))
    expected = json.loads(path.read_text(encoding="utf-8"))
    crossings = json.loads(json.dumps(onset_document(found)))["crossings"]
    assert found.certified.all()
    assert all(each.proved for each in found.completeness)
    assert len(crossings) == len(expected["crossings"])
    # So close to zero the figures of both sides depend on the path to the answer.
    small = dict.fromkeys(("gap", "driving_force_below", "driving_force_above"), 0.0)
    for a, b in zip(crossings, expected["crossings"], strict=True):
        assert_same(a | small, b | small, "crossing")
        assert (a["driving_force_above"] > 0.0) == b["forms_as_it_rises"]
        assert a["driving_force_below"] * a["driving_force_above"] < 0.0
