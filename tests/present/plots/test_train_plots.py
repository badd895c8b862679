"""Plots of a train: beds, cooling curves and lost work, against the outlets themselves."""

from __future__ import annotations

import tomllib
from copy import deepcopy
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from plot_cases import CASE, EXAMPLES, assert_readable, case, example, words_of

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.minimise import Status
from gibbsmin.present.plots.converter_plot import plot_beds
from gibbsmin.present.plots.cooling_plot import plot_cooling
from gibbsmin.present.plots.lost_work_plot import plot_lost_work
from gibbsmin.present.plots.train_plots import plot_train, require_kind


def tables(name: str) -> dict[str, Any]:
    return tomllib.loads((EXAMPLES / name / "case.toml").read_text())


def of(outlet: Any, record: str) -> float:
    return dict(zip([r.name for r in outlet.records], outlet.amounts, strict=True))[record]


def drawn(figure: Any, colour: str) -> list[Any]:
    return [line for line in figure.axes[0].lines if line.get_color() == colour]


BED, BETWEEN, EQUILIBRIUM = "#D55E00", "#0072B2", "#000000"


@pytest.fixture(scope="module")
def converter() -> Any:
    return plot_train(example("sulphur_dioxide_converter"))


def test_a_converter_climbs_from_bed_to_bed_up_to_equilibrium(converter: Any) -> None:
    assert_readable(converter)
    (axes,) = converter.axes
    assert axes.get_xlabel() == "temperature, °C"
    assert axes.get_ylabel() == "conversion of SO2(g), %"
    stages = gibbsmin.predict(example("sulphur_dioxide_converter")).stages
    beds = drawn(converter, BED)
    fed = 100e3 / 3600
    for outlet, line in zip(stages[::2], beds, strict=True):
        assert line.get_xdata()[-1] == pytest.approx(outlet.temperature - 273.15)
        assert line.get_ydata()[-1] == pytest.approx(100 * (1 - of(outlet, "SO2(g)") / fed))
    assert len(drawn(converter, BETWEEN)) == 3
    (line,) = drawn(converter, EQUILIBRIUM)
    for bed in beds:  # the first at the line's own pressure, the others within what is one line
        at = np.interp(bed.get_xdata()[-1], line.get_xdata(), line.get_ydata())
        assert bed.get_ydata()[-1] == pytest.approx(at, abs=0.01 if bed is beds[0] else 1.0)
    assert "bed 1: 69.8 % at 623 °C" in words_of(converter)
    assert "equilibrium at 1.37 bar" in words_of(converter)


def test_a_bed_runs_along_its_enthalpy_balance(converter: Any) -> None:
    """Each point is an adiabatic outlet of its own, with the conversion held."""
    bed = drawn(converter, BED)[0]
    for k in (8, 20, 33):
        held = tables("sulphur_dioxide_converter")
        conversion = float(bed.get_ydata()[k]) / 100.0
        held["stage"] = [held["stage"][0] | {"conversion": {"SO2": conversion}}]
        outlet = gibbsmin.predict(gibbsmin.load_case(held)).final
        assert bed.get_xdata()[k] == pytest.approx(outlet.temperature - 273.15, abs=1e-6)


def test_the_equilibrium_line_is_that_of_single_predictions(converter: Any) -> None:
    (line,) = drawn(converter, EQUILIBRIUM)
    for k in (30, 200):
        single = tables("sulphur_dioxide_converter")
        at = {"name": "one", "temperature": f"{line.get_xdata()[k]} degC", "pressure": "1.37 bar"}
        single["stage"] = [at]
        outlet = gibbsmin.predict(gibbsmin.load_case(single))
        assert line.get_ydata()[k] == pytest.approx(100 * outlet.conversion["SO2(g)"], rel=1e-8)


def test_the_key_is_what_the_beds_use_up() -> None:
    figure = plot_train(example("hydrogen_unit"))
    assert_readable(figure)
    assert figure.axes[0].get_ylabel() == "conversion of CO(g), %"
    assert len(drawn(figure, BED)) == 2
    assert drawn(figure, BED)[0].get_ydata()[0] == 0.0


def test_a_cold_stream_between_beds_joins_what_it_brings() -> None:
    """Quench: fresh gas joins before the second bed and lowers the conversion of the whole."""
    quench = tables("sulphur_dioxide_converter")
    quench["feed"]["cold"] = deepcopy(quench["feed"]["gas"]) | {"temperature": "60 degC"}
    quench["feed"]["cold"]["amounts"] = {"SO2": 50, "O2": 55, "N2": 395}
    first, _, second, *_ = quench["stage"]
    quench["stage"] = [
        first | {"feeds": ["gas"]},
        {"name": "quench", "heat": "0 kW", "pressure": "1.3 bar", "reactions": "none"}
        | {"feeds": ["cold"]},
        second,
    ]
    case_of_quench = gibbsmin.load_case(quench)
    figure = plot_beds(case_of_quench)
    assert_readable(figure)
    outlets = gibbsmin.predict(case_of_quench).stages
    fed = 100e3 / 3600
    one, two = drawn(figure, BED)
    assert one.get_ydata()[-1] == pytest.approx(100 * (1 - of(outlets[0], "SO2(g)") / fed))
    mixed = 100 * (1 - (of(outlets[0], "SO2(g)") + 0.5 * fed) / (1.5 * fed))
    assert two.get_ydata()[0] == pytest.approx(mixed)
    assert two.get_ydata()[-1] == pytest.approx(100 * (1 - of(outlets[2], "SO2(g)") / (1.5 * fed)))
    (step,) = drawn(figure, BETWEEN)
    assert (step.get_xdata()[0], step.get_ydata()[0]) == (
        one.get_xdata()[-1],
        one.get_ydata()[-1],
    )
    assert step.get_xdata()[-1] == pytest.approx(two.get_xdata()[0])
    # The same with the cold gas led right into the second bed.
    quench["stage"] = [first | {"feeds": ["gas"]}, second | {"feeds": ["cold"]}]
    direct = plot_beds(gibbsmin.load_case(quench))
    assert_readable(direct)
    _, straight = drawn(direct, BED)
    assert straight.get_xdata()[0] == pytest.approx(two.get_xdata()[0], abs=1e-3)
    assert straight.get_ydata()[0] == pytest.approx(mixed)
    (step,) = drawn(direct, BETWEEN)
    assert step.get_ydata().tolist() == [one.get_ydata()[-1], straight.get_ydata()[0]]


def test_absorption_between_beds_gives_a_second_equilibrium_line() -> None:
    absorbed = tables("sulphur_dioxide_converter")
    absorbed["stage"][5]["remove"] = {"SO3": "99.9 %"}
    figure = plot_beds(gibbsmin.load_case(absorbed))
    assert_readable(figure)
    names = {text for text in words_of(figure) if text.startswith("equilibrium")}
    assert names == {"equilibrium, bed 1, 1.37 bar", "equilibrium, bed 4, 1.22 bar"}


def test_a_cooling_curve_bends_at_the_dew_point() -> None:
    figure = plot_train(example("reformer"))
    assert_readable(figure)
    assert words_of(figure) == {"H2O(l) from 175 °C"}  # the outlet's own water dew point, 175.12 °C
    (axes,) = figure.axes
    assert axes.get_xlabel() == "heat removed from the outlet at 25 bar, MW"
    curve = axes.lines[0]
    heat, T = curve.get_xdata(), curve.get_ydata()
    assert np.all(np.diff(heat) > 0.0)
    slopes = np.abs(np.diff(T) / np.diff(heat))
    dew = np.searchsorted(-T, -176.0)
    assert slopes[dew - 10] > 3 * slopes[dew + 10]


def test_the_heat_is_that_of_a_cooler() -> None:
    train = tables("reformer")
    train["stage"] = [
        {"name": "reformer", **train.pop("outlet")},
        {"name": "cooler", "temperature": "60 degC", "pressure": "24 barg", "reactions": "none"}
        | {"condense": ["H2O"]},
    ]
    cooler = gibbsmin.predict(gibbsmin.load_case(train)).final
    curve = plot_cooling(gibbsmin.load_case(train), "reformer").axes[0].lines[0]
    at = np.interp(-60.0, -curve.get_ydata(), curve.get_xdata())
    # Traces below 1 ppm of the outlet are left out of the curve.
    assert at == pytest.approx(-cooler.heat / 1e6, rel=1e-5)


def test_what_is_taken_out_does_not_cool() -> None:
    figure = plot_cooling(example("sulphur_furnace"))
    assert_readable(figure)
    assert "S(monoclinic) from 115 °C" not in words_of(figure)
    kept = tables("sulphur_furnace")
    del kept["stage"][2]["remove"]
    figure = plot_cooling(gibbsmin.load_case(kept))
    assert_readable(figure)
    assert "S(monoclinic) from 115 °C" in words_of(figure)


def test_lost_work_has_a_bar_a_stage() -> None:
    unit = example("hydrogen_unit")
    figure = plot_lost_work(unit)
    assert_readable(figure)
    outlet = gibbsmin.predict(unit)
    bars = [patch.get_width() for patch in figure.axes[0].patches]
    assert bars == pytest.approx([stage.entropy.lost_work / 1e3 for stage in outlet.stages])
    names = [text.get_text() for text in figure.axes[0].get_yticklabels()]
    assert names == [stage.name for stage in outlet.stages]
    assert figure.axes[0].get_xlabel() == "lost work, kW (surroundings at 298.15 K)"
    shares = [int(text.partition(", ")[2].removesuffix(" %")) for text in words_of(figure)]
    assert abs(sum(shares) - 100) <= 3


def test_a_stage_without_lost_work_tells_why() -> None:
    tall = deepcopy(CASE) | {"outlet": {"temperature": "900 K", "pressure": "2 bar"}}
    figure = plot_lost_work(gibbsmin.load_case(tall))
    (text,) = words_of(figure)
    assert "compressor" in text


def test_what_does_not_suit_is_refused() -> None:
    one = example("reformer")
    with pytest.raises(InputError) as error:
        plot_beds(one)
    assert str(error.value) == (
        f"{one.file}: plot: found no adiabatic bed; accepted is a case with a stage of "
        'heat = "0 kW" in which reactions run.'
    )
    with pytest.raises(InputError) as error:
        plot_cooling(one, "boiler")
    assert str(error.value) == (
        f'{one.file}: stage: found "boiler", which is no stage; accepted is outlet.'
    )
    cold = {"temperature": "290 K", "pressure": "1 bar"}
    with pytest.raises(InputError) as error:
        plot_cooling(case(outlet=cold))
    assert str(error.value) == (
        "plot: found an outlet at 290.00 K; accepted is one hotter than 298.15 K, to cool."
    )
    beds = tables("sulphur_dioxide_converter")
    beds["stage"][1] = {"name": "cooler 1", "heat": "-99999 kW", "reactions": "none"} | {
        "pressure_drop": "0.02 bar"
    }
    with pytest.raises(InputError) as error:
        plot_beds(gibbsmin.load_case(beds))
    assert str(error.value) == (
        "plot: found that cooler 1 has no answer; accepted are stages that are certified, to plot."
    )
    with pytest.raises(InputError) as error:
        require_kind("bed")
    assert str(error.value) == (
        'show: found "bed" to show; accepted is one of beds, cooling, lost work.'
    )
    with pytest.raises(InputError) as error:
        plot_train(one, "lost work", "outlet")
    assert str(error.value) == (
        'stage: found a stage beside "lost work"; accepted is one for cooling alone.'
    )


def test_an_outlet_without_an_answer_does_not_cool(monkeypatch: pytest.MonkeyPatch) -> None:
    whole = gibbsmin.predict(case())
    lost = replace(whole, stages=(replace(whole.final, status=Status.UNCERTIFIED),))
    monkeypatch.setattr("gibbsmin.present.plots.cooling_plot.predict", lambda _: lost)
    with pytest.raises(InputError) as error:
        plot_cooling(case())
    assert str(error.value) == (
        "plot: found an outlet without an answer (No method reached amounts that could be proved "
        "right within the tolerances); accepted is one that is certified, to cool."
    )
