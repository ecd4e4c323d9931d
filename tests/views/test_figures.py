"""Figures: every axis has a title with its unit, every line a name, nothing is clipped."""

from __future__ import annotations

import matplotlib
import numpy as np
import pytest
from tests.support.small_cases import GYPSUM

from gossan.case.bounds import bounds_of
from gossan.case.read import case_from_text
from gossan.recording import run
from gossan.views import figures, style


@pytest.fixture(scope="module")
def drawn(result):
    return dict(figures.all_figures(result, bounds_of(case_from_text(GYPSUM))))


def visible(figure) -> list:
    return [ax for ax in figure.axes if ax.get_visible()]


def names_in(figure) -> set[str]:
    legends = [*figure.legends, *(ax.get_legend() for ax in figure.axes if ax.get_legend())]
    return {text.get_text() for legend in legends for text in legend.get_texts()}


def test_every_figure_is_there(drawn):
    assert list(drawn) == ["breakthrough-outlet", "dissolved", "minerals", "pores", "ledger"]


def test_every_axis_has_a_title(drawn):
    for figure in drawn.values():
        for ax in visible(figure):
            assert ax.get_ylabel() or ax.get_xlabel()
        assert any("(h)" in ax.get_xlabel() or "(cm)" in ax.get_xlabel() for ax in visible(figure))


def test_every_line_with_a_name_is_in_a_legend(drawn):
    for figure in drawn.values():
        lines = {line.get_label() for ax in visible(figure) for line in ax.get_lines()}
        assert {name for name in lines if not name.startswith("_")} <= names_in(figure)


def test_breakthrough_shows_limits_in_print_and_pore_volumes(drawn):
    figure = drawn["breakthrough-outlet"]
    texts = {text.get_text() for ax in figure.axes for text in ax.texts}
    assert "limit SO₄²⁻ 500 mg/L" in texts
    assert "SO₄²⁻" in names_in(figure)
    assert "bromide (mmol/L)" in names_in(figure)
    (upper,) = [ax for ax in figure.axes if ax.get_xlabel() == "pore volumes"]
    assert [label.get_text() for label in upper.get_xticklabels()] == ["0", "1", "2", "3", "4"]
    assert {ax.get_yscale() for ax in figure.axes} == {"linear", "log"}


def test_pore_volumes_stand_where_they_passed(result, drawn):
    (upper,) = [ax for ax in drawn["breakthrough-outlet"].axes if ax.get_xlabel() == "pore volumes"]
    port = result.ports["outlet"]
    hours = np.interp([1.0, 2.0], port.pore_volumes.values, port.time.values) / 3600.0
    assert upper.get_xticks()[1:3] == pytest.approx(hours)


def test_profiles_are_drawn_at_six_times_first_and_last_among_them(drawn):
    names = names_in(drawn["minerals"])
    assert len(names) == 6
    assert "after 0 h" in names
    assert "19.2 h" in names


def test_nothing_is_clipped(drawn):
    for figure in drawn.values():
        figure.canvas.draw()
        whole = figure.bbox
        for ax in visible(figure):
            box = ax.get_tightbbox()
            assert box.x0 >= -1.0
            assert box.y0 >= -1.0
            assert box.x1 <= whole.x1 + 1.0
            assert box.y1 <= whole.y1 + 1.0


def test_what_the_bed_holds_back_is_drawn(tmp_path):
    """A layer with immobile water and an isotherm behind one without."""
    text = GYPSUM.replace("[flow]", """[[layers]]
name = "clay lumps"
length = "10 cm"
cells = 4
porosity = 0.4
dispersivity = "1 cm"
conductivity = "10 m/d"
water = "pore"
sorption.bromide = {law = "linear", kd = "0.5 L/kg"}
immobile = {fraction = 0.3, transfer = "1e-5 1/s"}
[flow]""")
    found = run(case_from_text(text), tmp_path / "held.h5").loaded()
    sorbed = found.profiles.sorbed.sel(component="bromide").values[-1]
    assert (sorbed[:8] == 0.0).all()
    assert sorbed[8:].min() > 0.0
    beside = found.profiles.immobile_dissolved.sel(component="bromide").values[-1]
    assert np.isnan(beside[:8]).all()
    assert beside[8:].min() > 0.0
    figure = dict(figures.all_figures(found))["retention"]
    labels = {ax.get_ylabel() for ax in visible(figure)}
    assert {"bromide sorbed\n(mol m-3 of bulk)", "bromide, immobile\n(mmol/L)"} <= labels
    figure.canvas.draw()


def test_lines_differ_without_colour():
    from gossan.views.style import SERIES, TIMES

    assert len({(str(dashes), mark) for _, dashes, mark in SERIES}) == len(SERIES)
    lightness = [matplotlib.colors.to_rgb(colour) @ np.array([0.2126, 0.7152, 0.0722]) for colour in TIMES]
    assert (np.diff(lightness) < -0.04).all()  # each time darker than the one before, visibly so


def test_drawing_leaves_the_settings_of_matplotlib_alone(result):
    before = dict(matplotlib.rcParams)
    figures.pores(result)
    assert dict(matplotlib.rcParams) == before


def test_a_run_that_has_only_begun_can_be_drawn(result, tmp_path):
    """One frame, one record, no steps."""
    from gossan.case.build import build, first_pace
    from gossan.coupling.shadow import shadow_of
    from gossan.observing import axes_of
    from gossan.recording import CAUTION, _Run
    from gossan.store.read import open_result
    from gossan.store.write import ResultWriter

    case = case_from_text(GYPSUM)
    problem = build(case)
    shadow = shadow_of(problem, problem.initial)
    with (
        ResultWriter(tmp_path / "begun.h5", axes_of(problem), case.title, case.text, CAUTION) as writer,
        _Run(problem, writer, None, shadow) as run,
    ):
        run.frame(problem.initial)
        run.records(problem.initial)
        writer.checkpoint({"state": problem.initial, "pace": first_pace(problem)})
    begun = open_result(tmp_path / "begun.h5")
    for _, figure in figures.all_figures(begun, bounds_of(case)):
        figure.canvas.draw()


@style.in_style
def _with_times(labels: list[str]):
    figure, grid = style.sheet_of_paper(2, 2, 5.0)
    for number, label in enumerate(labels):
        style.time_line(grid[0, 0], np.arange(3.0), np.arange(3.0), number, len(labels), label)
    style.headed(figure, "A title", "profiles", "A caution.", legend_of=grid[0, 0])
    figure.canvas.draw()
    return figure


def test_the_times_of_a_long_run_fit_into_one_row():
    """Six times of as many figures as are printed: the row ends within the page."""
    figure = _with_times(["after 0 d", "218.7 d", "437.5 d", "656.2 d", "874.9 d", "1093 d"])
    (row,) = figure.legends
    assert row.get_window_extent().x1 < figure.bbox.x1
