"""Plots along one axis: the table's own numbers, labels apart, onsets, traces, refusals."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from plot_cases import IN_P, IN_T, RATIO, assert_readable, case, labels_of, words_of

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.present.plots.scan_plots import plot_case, plot_onset, plot_scan

GASES = {"CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)"}


@pytest.fixture(scope="module")
def found() -> Any:
    return gibbsmin.scan(case(IN_T))


def lines_of(axes: Any) -> list[Any]:
    return [line for line in axes.lines if np.size(line.get_xdata()) > 2]


def test_a_composition_has_direct_labels_apart_and_units(found: Any) -> None:
    figure = plot_scan(found)
    assert_readable(figure)
    assert words_of(figure) == GASES | {"C(graphite)"}
    above, below = figure.axes
    assert above.get_ylabel() == "gas, mol %"
    assert below.get_xlabel() == "outlet temperature, K"
    assert below.get_ylabel() == "solids,\nliquids, mol"
    assert above.get_ylim()[0] == 0.0


@pytest.mark.parametrize("show", ["wet", "dry"])
def test_the_lines_are_the_tables_columns(found: Any, show: str) -> None:
    figure = plot_scan(found, show)
    above, below = figure.axes
    drawn = {tuple(np.round(line.get_ydata(), 9)) for line in lines_of(above)}
    share = 1.0 - found.table["y H2O(g)"] if show == "dry" else 1.0
    told = GASES - ({"H2O(g)"} if show == "dry" else set())
    expected = {tuple(np.round(100.0 * found.table[f"y {name}"] / share, 9)) for name in told}
    assert drawn == expected
    (carbon,) = lines_of(below)
    assert carbon.get_ydata() == pytest.approx(found.table["amount C(graphite), mol"])


def test_a_label_has_the_colour_of_its_line_and_stands_at_its_end(found: Any) -> None:
    figure = plot_scan(found)
    above = figure.axes[0]
    ends = {line.get_color(): line.get_ydata()[-1] for line in lines_of(above)}
    texts = {text.get_text(): text for text in labels_of(figure) if text.axes is above}
    for name, text in texts.items():
        assert ends[text.get_color()] == pytest.approx(100.0 * found.table[f"y {name}"].iloc[-1])
    heights = {name: text.get_window_extent().y0 for name, text in texts.items()}
    order = sorted(texts, key=lambda name: found.table[f"y {name}"].iloc[-1])
    assert order == sorted(heights, key=lambda name: heights[name])


def test_error_bars_are_bands_about_the_lines() -> None:
    found = gibbsmin.scan(case(IN_T), uncertainty=True)
    figure = plot_scan(found, "y H2(g)")
    (band,) = figure.axes[0].collections
    top = (found.table["y H2(g)"] + found.table["u(y H2(g))"]).max()
    assert band.get_paths()[0].vertices[:, 1].max() == pytest.approx(100.0 * top)
    assert figure.get_supxlabel().startswith("Bands: one standard uncertainty")


def test_a_result_is_not_forced_down_to_zero(found: Any) -> None:
    figure = plot_scan(found, "heat")
    (axes,) = figure.axes
    assert axes.get_ylabel() == "heat added, kJ"
    assert words_of(figure) == set()
    (line,) = lines_of(axes)
    assert line.get_ydata() == pytest.approx(found.table["heat, kJ"])
    assert axes.get_ylim()[0] < found.table["heat, kJ"].min()
    cold = plot_scan(found, "pressure")
    assert cold.axes[0].get_ylim()[0] > 0.5


def test_a_logarithmic_ordinate_shows_traces() -> None:
    found = gibbsmin.scan(case(IN_T, species={"consider": "all", "leave_out": ["CH4(g)"]}))
    linear, logarithmic = plot_scan(found), plot_scan(found, logarithmic=True)
    assert_readable(logarithmic)
    assert words_of(linear) < words_of(logarithmic)
    assert "H(g)" in words_of(logarithmic)
    assert logarithmic.axes[0].get_yscale() == "log"
    labels = [text.get_text() for text in logarithmic.axes[0].get_yticklabels()]
    assert "0.0001" in labels


def test_decades_of_an_axis_are_drawn_as_such() -> None:
    figure = plot_scan(gibbsmin.scan(case(IN_P)))
    assert figure.axes[0].get_xscale() == "log"
    assert figure.axes[-1].get_xlim() == pytest.approx((1.0, 100.0))


def test_states_without_an_answer_are_gaps_that_the_foot_counts(found: Any) -> None:
    table = found.table.copy()
    numbers = [c for c in table.select_dtypes("number") if c != "outlet.temperature, K"]
    table.loc[10:19, numbers] = np.nan
    table["status"] = table["status"].astype(str)
    table.loc[10:19, "status"] = "unmet"
    figure = plot_scan(replace(found, table=table))
    assert np.isnan(lines_of(figure.axes[0])[0].get_ydata()).sum() == 10
    assert figure.get_supxlabel().startswith("10 of 41 states have no answer.")
    assert_readable(figure)


def test_onsets_are_marked_along_the_axis() -> None:
    in_t = case(IN_T)
    crossings = gibbsmin.onset(in_t)
    for figure in (plot_case(in_t), plot_onset(in_t, crossings)):
        assert_readable(figure)
        marked = [text for text in words_of(figure) if text.startswith("C(graphite) ")]
        assert len(marked) == crossings.shown.size
        first = crossings.shown[0]
        assert f"C(graphite) {'from' if crossings.forms[0] else 'up to'} {first:.1f} K" in marked
        (line, *_) = [ln for ln in figure.axes[1].lines if np.size(ln.get_xdata()) == 2]
        assert line.get_xdata()[0] == pytest.approx(first)


def test_a_title_cannot_act_as_a_formula() -> None:
    found = gibbsmin.scan(case(IN_T | {"count": 3}, title="costs $x^2$ & <b>", onset=None))
    assert plot_scan(found).axes[0].get_title(loc="left") == r"costs \$x^2\$ & <b>"


def test_what_cannot_be_plotted_is_refused(found: Any) -> None:
    three = gibbsmin.scan(
        case(
            IN_T | {"count": 2},
            RATIO | {"count": 2},
            {"vary": "outlet.pressure", "values": ["1 bar", "2 bar"]},
        )
    )
    table = replace(found, is_grid=False)
    for scan, what in ((three, "3 axes"), (table, "a table of conditions")):
        with pytest.raises(InputError) as error:
            plot_scan(scan)
        assert str(error.value) == (
            f"plot: found {what}; accepted is a grid of one or two axes to plot."
        )
    two = gibbsmin.scan(case(RATIO | {"count": 3}, IN_T | {"count": 3}))
    with pytest.raises(InputError) as error:
        plot_scan(two, "heat", logarithmic=True)
    assert str(error.value) == (
        "log: found two axes to plot with a logarithmic ordinate; accepted is one axis."
    )
    negative = gibbsmin.scan(case(IN_T | {"count": 3, "first": "300 K", "last": "320 K"}))
    assert (negative.table["heat, kJ"] < 0.0).all()
    with pytest.raises(InputError) as error:
        plot_scan(negative, "heat", logarithmic=True)
    assert str(error.value) == (
        "log: found no value above zero; accepted is a linear ordinate where all is zero or "
        "negative."
    )
