"""Plots: labels apart, axes with units, readable in grey, whole files of the same bytes."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any
from xml.etree import ElementTree

import numpy as np
import pytest
from matplotlib.colors import to_rgb
from matplotlib.figure import Figure
from matplotlib.text import Text
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.errors import InputError
from gibbsmin.present.plots.scan_plots import plot_boundary, plot_case, plot_scan
from gibbsmin.present.plots.style import COLOURS, DASHES, write_plot
from gibbsmin.present.plots.train_plots import plot_converter, plot_cooling, plot_train

EXAMPLES = Path(__file__).parents[3] / "examples"

CASE: dict[str, Any] = {
    "title": "Methane & steam <1.1>",
    "feed": {
        "gas": {
            "temperature": "500 degC",
            "pressure": "1 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0},
        },
        "steam": {
            "temperature": "500 degC",
            "pressure": "1 bar",
            "unit": "mol",
            "amounts": {"H2O": 1.1},
        },
    },
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]},
    "outlet": {"temperature": "900 K", "pressure": "1 bar"},
    "onset": {"phase": "C(graphite)"},
    "uncertainty": {"outlet.temperature": "5 K"},
}
IN_T = {"vary": "outlet.temperature", "first": "600 K", "last": "1400 K", "count": 41}
RATIO = {"ratio": "H2O/CH4", "scale": "steam", "first": 0.3, "last": 4.0, "count": 9}


def case(*axes: dict[str, Any]) -> Any:
    return gibbsmin.load_case(deepcopy(CASE) | {"axis": list(axes)})


def texts_of(figure: Figure) -> list[Any]:
    figure.canvas.draw()
    return [text for axes in figure.axes for text in axes.texts if text.get_text()]


def assert_apart(figure: Figure) -> None:
    """No two labels of a panel overlap, and none leaves the page."""
    texts = texts_of(figure)
    boxes = [Text.get_window_extent(text) for text in texts]  # without the leader lines
    page = figure.bbox
    for k, box in enumerate(boxes):
        assert box.x1 <= page.x1 + 1
        assert box.x0 >= page.x0 - 1
        for j in range(k):
            assert not box.overlaps(boxes[j]), (texts[k].get_text(), texts[j].get_text())


def test_a_composition_has_direct_labels_apart_and_units() -> None:
    figure = plot_scan(gibbsmin.scan(case(IN_T)))
    assert_apart(figure)
    labels = {text.get_text() for text in texts_of(figure)}
    assert labels == {"CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)"}
    above, below = figure.axes
    assert above.get_ylabel() == "gas, mol %"
    assert below.get_xlabel() == "outlet.temperature, K"
    assert below.get_ylabel() == "solids, liquids, mol"
    assert all(axes.get_legend() is None for axes in figure.axes)


def test_the_lines_are_the_tables_columns() -> None:
    found = gibbsmin.scan(case(IN_T))
    figure = plot_scan(found, "dry")
    lines = {
        tuple(np.round(line.get_ydata(), 9))
        for line in figure.axes[0].lines
        if line.get_xdata().size
    }
    dry = 100 * found.table["y H2(g)"] / (1 - found.table["y H2O(g)"])
    assert tuple(np.round(dry, 9)) in lines
    assert "H2O(g)" not in {text.get_text() for text in texts_of(figure)}


def test_error_bars_are_bands_about_the_lines() -> None:
    found = gibbsmin.scan(case(IN_T), uncertainty=True)
    figure = plot_scan(found, "y H2(g)")
    (band,) = figure.axes[0].collections
    vertices = band.get_paths()[0].vertices
    top = (found.table["y H2(g)"] + found.table["u(y H2(g))"]).max()
    assert vertices[:, 1].max() == pytest.approx(top)


def test_a_map_has_the_boundary_upon_it() -> None:
    figure = plot_case(case(RATIO, IN_T | {"count": 9}), "y H2(g)")
    (axes,) = figure.axes
    assert axes.get_xlabel() == "H2O/CH4"
    assert axes.get_ylabel() == "outlet.temperature, K"
    labels = {text.get_text() for text in texts_of(figure)}
    assert {"with C(graphite)", "without C(graphite)"} <= labels
    (line,) = [line for line in axes.lines if line.get_linewidth() > 2.0]
    boundary = gibbsmin.onset(case(RATIO, IN_T | {"count": 9}))
    assert np.sort(line.get_xdata()) == pytest.approx(np.sort(boundary.shown))


def test_a_boundary_stands_by_itself() -> None:
    figure = plot_boundary(gibbsmin.onset(case(RATIO, IN_T | {"count": 9})), "Carbon limit")
    assert_apart(figure)
    assert figure.axes[0].get_xlim() == (0.3, 4.0)


def test_a_converter_climbs_from_bed_to_bed_up_to_the_equilibrium_line() -> None:
    converter = gibbsmin.load_case(EXAMPLES / "sulphur_dioxide_converter" / "case.toml")
    figure = plot_converter(converter)
    assert_apart(figure)
    (axes,) = figure.axes
    assert axes.get_xlabel() == "temperature, °C"
    assert axes.get_ylabel() == "conversion of SO2(g), %"
    *segments, line = axes.lines
    beds = [s for s in segments if s.get_linestyle() == "-"]
    assert len(beds) == 4
    outlets = gibbsmin.predict(converter).stages
    so2 = [
        dict(zip([r.name for r in s.records], s.amounts, strict=True))["SO2(g)"] for s in outlets
    ]
    fed = 100e3 / 3600
    for number, bed in enumerate(beds):
        assert bed.get_ydata()[1] == pytest.approx(100 * (1 - so2[2 * number] / fed), rel=1e-9)
    # The first bed ends on the line, which is drawn at its own pressure.
    end = np.interp(beds[0].get_xdata()[1], line.get_xdata(), line.get_ydata())
    assert beds[0].get_ydata()[1] == pytest.approx(end, abs=0.01)


def test_a_cooling_curve_bends_at_the_dew_point() -> None:
    reformer = gibbsmin.load_case(EXAMPLES / "reformer" / "case.toml")
    figure = plot_train(reformer)
    assert_apart(figure)
    (text,) = texts_of(figure)
    assert text.get_text() == "H2O(l) from 175 °C"
    curve = figure.axes[0].lines[0]
    heat, T = curve.get_xdata(), curve.get_ydata()
    assert np.all(np.diff(heat) > 0.0)
    slopes = np.abs(np.diff(T) / np.diff(heat))
    dew = np.searchsorted(-T, -176.0)
    assert slopes[dew - 40] > 3 * slopes[dew + 40]
    assert figure.axes[0].get_xlabel() == "heat removed from the outlet at 25.00 bar, kW"


def test_neighbouring_lines_differ_in_grey_or_in_dashes() -> None:
    weights = np.array([0.2126, 0.7152, 0.0722])
    grey = [float(weights @ np.array(to_rgb(colour))) for colour in COLOURS]
    for k in range(len(COLOURS) - 1):
        same_dashes = DASHES[k % len(DASHES)] == DASHES[(k + 1) % len(DASHES)]
        assert not same_dashes
    for k in range(len(DASHES), len(COLOURS)):
        assert abs(grey[k] - grey[k - len(DASHES)]) > 0.04


def test_files_are_whole_valid_and_the_same_each_time(tmp_path: Path) -> None:
    found = gibbsmin.scan(case(IN_T))
    one, two = tmp_path / "one.svg", tmp_path / "two.svg"
    write_plot(plot_scan(found), one)
    write_plot(plot_scan(found), two)
    assert one.read_bytes() == two.read_bytes()
    ElementTree.fromstring(one.read_bytes())  # noqa: S314 our own file
    write_plot(plot_scan(found), tmp_path / "three.png")
    assert (tmp_path / "three.png").read_bytes().startswith(b"\x89PNG")
    assert sorted(p.name for p in tmp_path.iterdir()) == ["one.svg", "three.png", "two.svg"]


def test_a_title_cannot_act_as_a_formula(tmp_path: Path) -> None:
    tables = deepcopy(CASE) | {"title": "costs $x^2$ & <b>", "axis": [IN_T]}
    figure = plot_scan(gibbsmin.scan(gibbsmin.load_case(tables)))
    write_plot(figure, tmp_path / "plot.svg")
    ElementTree.fromstring((tmp_path / "plot.svg").read_bytes())  # noqa: S314 our own file
    assert figure.axes[0].get_title(loc="left") == r"costs \$x^2\$ & <b>"


def test_what_cannot_be_plotted_is_refused() -> None:
    found = gibbsmin.scan(case(IN_T))
    with pytest.raises(InputError) as error:
        plot_scan(found, "y NH3(g)")
    assert str(error.value).startswith(
        'show: found "y NH3(g)" to show, which is no column; accepted is one of gap, '
    )
    three = gibbsmin.scan(case({**IN_T, "count": 2}, {**RATIO, "count": 2}, {
        "vary": "outlet.pressure", "values": ["1 bar", "2 bar"],
    }))  # fmt: skip
    with pytest.raises(InputError) as error:
        plot_scan(three)
    assert str(error.value) == (
        "plot: found 3 axes; accepted is a grid of one or two axes to plot."
    )
    with pytest.raises(InputError) as error:
        plot_boundary(gibbsmin.onset(case(IN_T)), "")
    assert str(error.value) == (
        "plot: found an onset along one axis; accepted are two axes to plot."
    )
    cold = deepcopy(CASE) | {"outlet": {"temperature": "290 K", "pressure": "1 bar"}}
    with pytest.raises(InputError) as error:
        plot_cooling(gibbsmin.load_case(cold))
    assert str(error.value) == (
        "plot: found an outlet at 290.00 K; accepted is one hotter than 298.15 K, to cool."
    )


def test_commands_draw(tmp_path: Path) -> None:
    reformer = str(EXAMPLES / "reformer" / "case.toml")
    plot = tmp_path / "cooling.png"
    result = CliRunner().invoke(app, ["predict", reformer, "--plot", str(plot)])
    assert result.exit_code == 0, result.output
    assert plot.exists()
    result = CliRunner().invoke(app, ["predict", reformer, "--plot", str(tmp_path / "x.pdf")])
    assert result.exit_code == 2
    assert result.output.strip() == (
        f'{tmp_path / "x.pdf"}: found the ending ".pdf"; accepted is a file that ends in .png, '
        ".svg."
    )
    grid = str(EXAMPLES / "reformer_map" / "case.toml")
    out, plot = tmp_path / "map.csv", tmp_path / "map.svg"
    arguments = ["scan", grid, "--out", str(out), "--plot", str(plot), "--show", "y H2(g)"]
    result = CliRunner().invoke(app, arguments)
    assert result.exit_code == 0, result.output
    assert plot.exists()
