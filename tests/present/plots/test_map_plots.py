"""Plots over two axes: lines of equal value, solved and coarse boundaries, targets."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from matplotlib.colors import to_hex
from plot_cases import IN_P, IN_T, RATIO, assert_readable, case, words_of

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.present.plots.map_plots import plot_boundary, plot_map, plot_target

COARSE = IN_T | {"count": 9}


@pytest.fixture(scope="module")
def over_two() -> Any:
    return case(RATIO, COARSE)


@pytest.fixture(scope="module")
def found(over_two: Any) -> Any:
    return gibbsmin.scan(over_two)


@pytest.fixture(scope="module")
def boundary(over_two: Any) -> Any:
    return gibbsmin.onset(over_two)


def thick(axes: Any) -> list[Any]:
    return [line for line in axes.lines if line.get_linewidth() > 2.0]


def test_a_map_has_the_solved_boundary_upon_it(found: Any, boundary: Any) -> None:
    figure = plot_map(found, "fraction H2", boundary)
    assert_readable(figure)
    (axes,) = figure.axes
    assert axes.get_xlabel() == "H2O/CH4, mol/mol"
    assert axes.get_ylabel() == "outlet temperature, K"
    assert axes.get_title(loc="left") == "Methane & steam <1.1>\nH2(g) in the gas, mol %"
    assert {"with C(graphite)", "without C(graphite)"} <= words_of(figure)
    drawn = np.concatenate([line.get_xdata() for line in thick(axes)])
    assert np.sort(drawn) == pytest.approx(np.sort(boundary.shown))


def test_the_lines_stand_where_the_result_has_their_value(found: Any, boundary: Any) -> None:
    figure = plot_map(found, "heat", boundary)
    (axes,) = figure.axes
    levels = axes.collections[-1].levels
    named = sorted(float(text) for text in words_of(figure) if "graphite" not in text)
    assert set(named) <= set(levels.tolist())
    assert len(named) >= 3
    values = found.table["heat, kJ"].to_numpy().reshape(9, 9)
    across, up = found.axes
    for path, level in zip(axes.collections[-1].get_paths(), levels, strict=True):
        for x, y in path.vertices[::7]:
            # Linear between the states of the grid, along whichever of its edges the line crosses.
            if np.isclose(across.shown, x).any():
                column = int(np.argmin(np.abs(across.shown - x)))
                assert np.interp(y, up.shown, values[column]) == pytest.approx(level)


def test_a_label_stands_on_its_own_side(found: Any, boundary: Any) -> None:
    figure = plot_map(found, "fraction H2", boundary)
    (axes,) = figure.axes
    for text in axes.texts:
        if "graphite" not in text.get_text():
            continue
        box = text.get_window_extent()
        x, y = axes.transData.inverted().transform(
            [0.5 * (box.x0 + box.x1), 0.5 * (box.y0 + box.y1)]
        )
        row = int(np.argmin(np.abs(boundary.second.shown - y)))
        crossings = np.sort(boundary.shown[boundary.row == row])
        there = bool(boundary.there[row]) ^ bool(np.searchsorted(crossings, x) % 2)
        assert there == text.get_text().startswith("with ")


def test_without_an_onset_the_grid_tells_where_a_phase_ends(found: Any) -> None:
    figure = plot_map(found, "fraction H2")
    assert_readable(figure)
    assert {"with C(graphite)", "without C(graphite)"} <= words_of(figure)
    assert figure.get_supxlabel().startswith("Dashed: where C(graphite) ends, to the grid.")
    (axes,) = figure.axes
    there = found.table["phases"].astype(str).eq("C(graphite)").to_numpy().reshape(9, 9).T
    border = axes.collections[-1]
    assert to_hex(border.get_edgecolor()[0]) == "#d55e00"
    across, up = found.axes
    for x, y in border.get_paths()[0].vertices:
        row, column = np.argmin(np.abs(up.shown - y)), np.argmin(np.abs(across.shown - x))
        near = there[max(0, row - 1) : row + 2, max(0, column - 1) : column + 2]
        assert near.any()
        assert not near.all()


def test_a_result_over_decades_has_lines_by_decades() -> None:
    found = gibbsmin.scan(case(IN_T | {"count": 9}, IN_P | {"count": 5}, onset=None))
    figure = plot_map(found, "fraction CO")
    assert figure.axes[0].get_yscale() == "log"
    levels = figure.axes[0].collections[1].levels
    assert np.all(np.log10(levels[1:] / levels[:-1]) < 1.01)
    assert set(np.round(levels / 10.0 ** np.floor(np.log10(levels * 1.0001)), 6)) <= {1.0, 2.0, 5.0}


def test_a_result_that_is_the_same_everywhere_is_told(found: Any) -> None:
    figure = plot_map(found, "pressure")
    assert "1 everywhere" in words_of(figure)
    table = found.table.copy()
    table["heat, kJ"] = np.nan
    figure = plot_map(replace(found, table=table), "heat")
    assert "no state has an answer" in words_of(figure)


def test_a_boundary_stands_by_itself(boundary: Any) -> None:
    figure = plot_boundary(boundary, "Carbon limit")
    assert_readable(figure)
    (axes,) = figure.axes
    assert axes.get_xlim() == (0.3, 4.0)
    assert axes.get_ylim() == (600.0, 1400.0)


def test_a_target_over_two_axes_is_a_curve() -> None:
    tables = {"target": {"result": "dry fraction CH4", "value": "10 %"}, "onset": None}
    answers = gibbsmin.target(case(RATIO, COARSE, **tables))
    figure = plot_target(answers, "10 %", "Slip")
    assert_readable(figure)
    assert words_of(figure) == {"dry fraction CH4 10 %"}
    drawn = np.concatenate([line.get_xdata() for line in thick(figure.axes[0])])
    assert np.sort(drawn) == pytest.approx(np.sort(answers.shown))
    none = gibbsmin.target(
        case(RATIO, COARSE | {"first": "1300 K"}, target=tables["target"], onset=None)
    )
    assert words_of(plot_target(none, "10 %", "Slip")) == {"nowhere: dry fraction CH4 10 %"}


def test_along_one_axis_there_is_no_curve() -> None:
    with pytest.raises(InputError) as error:
        plot_boundary(gibbsmin.onset(case(COARSE)), "")
    assert str(error.value) == "plot: found an onset along one axis; accepted are two axes to plot."
    target = {"result": "dry fraction CH4", "value": "10 %"}
    with pytest.raises(InputError) as error:
        plot_target(gibbsmin.target(case(COARSE, target=target, onset=None)), "10 %", "")
    assert str(error.value) == "plot: found a target along one axis; accepted are two axes to plot."
