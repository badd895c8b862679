"""Labels: apart, near where they belong, off each other and off lines."""

from __future__ import annotations

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st
from matplotlib.text import Text

from gibbsmin.present.plots.labels import Placer, Spot, apart, around, settle, way_of
from gibbsmin.present.plots.style import new_figure

places = st.lists(st.floats(0.0, 1.0), min_size=1, max_size=12).map(sorted)


@given(places)
def test_places_are_apart_and_within_the_panel(wanted: list[float]) -> None:
    found = apart(np.array(wanted), 0.05)
    assert np.all(np.diff(found) > 0.05 - 1e-9)
    assert found[0] > -1e-9
    assert found[-1] < 1.0 + 1e-9


@given(places)
def test_no_other_places_are_nearer_to_the_wanted_ones(wanted: list[float]) -> None:
    found = apart(np.array(wanted), 0.05)
    cost = np.square(found - wanted).sum()
    steps = 0.05 * np.arange(found.size)
    room = 1.0 - steps[-1]
    rng = np.random.default_rng(1)
    for _ in range(40):
        # Any rising levels within the room are places that are allowed.
        other = np.sort(np.clip(found - steps + rng.normal(0, 0.02, found.size), 0, room)) + steps
        assert np.square(other - wanted).sum() >= cost - 1e-9


def test_more_than_there_is_room_for_are_apart_about_the_middle() -> None:
    found = apart(np.zeros(30), 0.05)
    assert np.allclose(np.diff(found), 0.05)
    assert abs(found.mean() - 0.5) < 1e-9


@settings(max_examples=10, deadline=None)
@given(st.lists(st.tuples(st.floats(0.2, 0.8), st.floats(0.2, 0.8)), min_size=1, max_size=3))
def test_labels_keep_off_lines_and_each_other(points: list[tuple[float, float]]) -> None:
    figure, (axes,) = new_figure("Labels")
    axes.set_xlim(0.0, 1.0)
    axes.set_ylim(0.0, 1.0)
    settle(figure)
    x = np.linspace(0.0, 1.0, 5)
    way = way_of(axes, x, x)
    placer = Placer(axes, [way])
    for number, point in enumerate(points):
        spots = [spot for by in (8.0, 25.0, 45.0, 70.0) for spot in around(*point, by)]
        placer.place(f"label {number}", spots, "black")
    boxes = [Text.get_window_extent(text) for text in axes.texts]
    for k, box in enumerate(boxes):
        inside = (way > [box.x0, box.y0]) & (way < [box.x1, box.y1])
        assert not inside.all(axis=1).any()
        assert not any(box.overlaps(other) for other in boxes[:k])


def test_a_label_that_is_not_needed_stays_away_where_there_is_no_room() -> None:
    figure, (axes,) = new_figure("Labels")
    settle(figure)
    placer = Placer(axes)
    spot = Spot(0.5, 0.5)
    placer.place("first", [spot], "black")
    placer.place("second", [spot], "black", needed=False)
    placer.avoiding([]).place("third", [spot], "black", needed=False)
    assert [text.get_text() for text in axes.texts] == ["first"]
    placer.place("fourth", [spot], "black")
    assert [text.get_text() for text in axes.texts] == ["first", "fourth"]


def test_a_far_label_is_led_to_its_place() -> None:
    figure, (axes,) = new_figure("Labels")
    settle(figure)
    placer = Placer(axes)
    placer.place("near", [Spot(0.5, 0.5, 7.0)], "black")
    placer.place("far", [Spot(0.2, 0.5, 30.0, 30.0)], "black")
    near, far = axes.texts
    assert near.arrow_patch is None  # type: ignore[attr-defined]
    assert far.arrow_patch is not None  # type: ignore[attr-defined]
