"""Style: files whole and the same each time, grey contrast, titles, scales."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path
from xml.etree import ElementTree

import numpy as np
import pytest
from matplotlib.colors import to_rgb

from gibbsmin.errors import OutputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.present.plots.style import (
    CAUTION,
    COLOURS,
    DASHES,
    foot,
    is_logarithmic,
    line_style,
    name_axes,
    new_figure,
    scale_axis,
    shortened,
    svg_of,
    write_plot,
)

LONG = "A very long title of a case that an engineer wrote to tell all about it " * 4


def axis(*values: float) -> Axis:
    return Axis("outlet.pressure", np.array(values) * 1e5, np.array(values), "bar")


def drawn(title: str) -> object:
    figure, (axes,) = new_figure(title)
    name_axes(axes, "x, K", "y, %")
    foot(figure)
    axes.plot([1, 2], [3, 4])
    return figure


def test_neighbouring_lines_differ_in_grey_or_in_dashes() -> None:
    styles = [line_style(k) for k in range(len(COLOURS) * len(DASHES))]
    assert len({(s["color"], str(s["linestyle"])) for s in styles}) == len(styles)
    weights = np.array([0.2126, 0.7152, 0.0722])
    grey = [float(weights @ np.array(to_rgb(style["color"]))) for style in styles]
    for one, other in pairwise(styles):
        assert one["linestyle"] != other["linestyle"]
    for k, style in enumerate(styles[:9]):  # as many as a linear plot has at most
        for j in range(k):
            if styles[j]["linestyle"] == style["linestyle"]:
                assert abs(grey[k] - grey[j]) > 0.04, (j, k)


def test_a_title_is_broken_and_shortened_to_two_lines() -> None:
    assert shortened("Short") == "Short"
    lines = shortened(LONG).splitlines()
    assert len(lines) == 2
    assert lines[1].endswith(" …")
    figure, (axes,) = new_figure(LONG)
    figure.canvas.draw()
    assert axes._left_title.get_window_extent().x1 <= figure.bbox.x1


def test_an_axis_is_logarithmic_where_its_values_rise_by_factors() -> None:
    assert is_logarithmic(axis(1, 10, 100))
    assert is_logarithmic(axis(1, 3, 10, 30, 100))
    assert is_logarithmic(axis(100, 10, 1))
    assert not is_logarithmic(axis(50, 100, 150, 200, 300))
    assert not is_logarithmic(axis(0, 10, 100))
    assert not is_logarithmic(axis(1, 2, 4))


def test_ticks_of_decades_are_read_aloud() -> None:
    figure, (axes,) = new_figure("Ticks")
    scale_axis(axes, axis(1, 10, 100))
    figure.canvas.draw()
    low, high = axes.get_xlim()
    ticks = zip(axes.get_xticks(), axes.get_xticklabels(), strict=True)
    shown = [label.get_text() for place, label in ticks if low <= place <= high]
    assert shown == ["1", "2", "5", "10", "20", "50", "100"]


def test_files_are_whole_valid_and_the_same_each_time(tmp_path: Path) -> None:
    for ending, start in ((".svg", b"<?xml"), (".png", b"\x89PNG")):
        one, two = tmp_path / f"one{ending}", tmp_path / f"two{ending}"
        write_plot(drawn("Same & <again>"), one)  # type: ignore[arg-type]
        write_plot(drawn("Same & <again>"), two)  # type: ignore[arg-type]
        assert one.read_bytes() == two.read_bytes()
        assert one.read_bytes().startswith(start)
    assert len(list(tmp_path.iterdir())) == 4


def test_svg_is_valid_and_its_text_cannot_act() -> None:
    text = svg_of(drawn("costs $x^2$ & <script>alert(1)</script> --> <b>"))  # type: ignore[arg-type]
    root = ElementTree.fromstring(text)  # noqa: S314 our own document
    names = {element.tag.rpartition("}")[2] for element in root.iter()}
    assert "script" not in names
    assert "b" not in names
    assert float(root.get("width", "").removesuffix("pt")) == pytest.approx(6.9 * 72)


def test_the_caution_stands_at_the_foot() -> None:
    figure = drawn("Caution")
    assert figure.get_supxlabel() == CAUTION  # type: ignore[attr-defined]


def test_another_ending_or_folder_is_refused(tmp_path: Path) -> None:
    for name, found in (("plot.pdf", 'the ending ".pdf"'), ("plot", "no ending")):
        with pytest.raises(OutputError) as error:
            write_plot(drawn("Ending"), tmp_path / name)  # type: ignore[arg-type]
        assert str(error.value) == (
            f"{tmp_path / name}: found {found}; accepted is a file that ends in .png, .svg."
        )
    with pytest.raises(OutputError) as error:
        write_plot(drawn("Folder"), tmp_path / "none" / "plot.svg")  # type: ignore[arg-type]
    assert str(error.value) == (
        f"{tmp_path / 'none' / 'plot.svg'}: found that it cannot be written (no such file or "
        "directory); accepted is a file in a folder that exists and may be written."
    )
    assert list(tmp_path.iterdir()) == []
