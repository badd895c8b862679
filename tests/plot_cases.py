"""Cases to plot, and what every plot must meet: labels apart and on the page, axes named."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any

from matplotlib.figure import Figure
from matplotlib.text import Text

import gibbsmin

EXAMPLES = Path(__file__).parents[1] / "examples"

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
IN_P = {
    "vary": "outlet.pressure",
    "first": "1 bar",
    "last": "100 bar",
    "count": 21,
    "spacing": "logarithmic",
}


def case(*axes: dict[str, Any], **tables: Any) -> Any:
    """The case with these axes and tables in place of its own; None takes a table away."""
    whole = deepcopy(CASE) | tables | {"axis": list(axes)}
    return gibbsmin.load_case({key: value for key, value in whole.items() if value is not None})


def example(name: str) -> Any:
    """One of the examples."""
    return gibbsmin.load_case(EXAMPLES / name / "case.toml")


def labels_of(figure: Figure) -> list[Any]:
    """The labels within all panels, drawn."""
    canvas: Any = figure.canvas
    canvas.draw()
    return [text for axes in figure.axes for text in axes.texts if text.get_text()]


def words_of(figure: Figure) -> set[str]:
    """What the labels say."""
    return {text.get_text() for text in labels_of(figure)}


def assert_readable(figure: Figure) -> None:
    """No two labels overlap, none leaves the page, and all axes are named."""
    texts = labels_of(figure)
    boxes = [Text.get_window_extent(text) for text in texts]  # without lines that lead to them
    page = figure.bbox
    for k, box in enumerate(boxes):
        assert box.x0 >= page.x0 - 1, texts[k].get_text()
        assert box.x1 <= page.x1 + 1, texts[k].get_text()
        assert box.y0 >= page.y0 - 1, texts[k].get_text()
        assert box.y1 <= page.y1 + 1, texts[k].get_text()
        for j in range(k):
            assert not box.overlaps(boxes[j]), (texts[k].get_text(), texts[j].get_text())
    for axes in figure.axes:
        title = axes.title if axes.get_title() else axes._left_title
        assert title.get_window_extent().x1 <= page.x1
    assert figure.axes[-1].get_xlabel()
    assert all(axes.get_legend() is None for axes in figure.axes)
