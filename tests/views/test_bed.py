"""What clogging leaves of a column, against sums by hand; what is printed of it, and what machines get."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import case_of, column
from tests.support.salts import Salt, water, write_salts

import gossan
from gossan.transport.clogging import Clogging
from gossan.views.bed import CRITICAL_SHARE, SPOKEN, Bed, head_loss_of
from gossan.views.figures import all_figures
from gossan.views.run_sheets import run_sheets
from gossan.views.summary import run_json, summary_of

DAY = 86400.0


CUBE = (Clogging("power", 3.0),)


def bed(porosity, laws=CUBE, clean=(1e-4, 1e-4), layer=(0, 0), time=(0.0, 10.0)) -> Bed:
    return Bed(
        time=np.array(time), x=np.array([0.05, 0.2]), porosity=np.array(porosity), first=np.full(2, 0.4),
        clean=np.array(clean), width=np.array([0.1, 0.2]), layer=np.array(layer), laws=laws,
    )  # fmt: skip


def test_cells_are_resistances_in_series():
    found = bed([[0.4, 0.4], [0.2, 0.4]], clean=(1e-4, 2e-4))
    assert found.cells[-1] == pytest.approx([0.125, 1.0], rel=1e-14)
    assert found.least_cell.last == pytest.approx(0.125, rel=1e-14)
    assert found.column.last == pytest.approx((0.1 + 0.1) / (0.1 * 8 + 0.1), rel=1e-14)


def test_a_column_that_is_closed_somewhere_has_nothing_left():
    assert bed([[0.4, 0.4], [0.0, 0.4]]).column.last == 0.0


def test_levels_are_reached_where_the_pores_do_between_frames():
    """Pores go straight from 0.4 to 0.04 in ten days; half of the conductivity is left at 0.4 / 2^(1/3)."""
    falls = bed([[0.4, 0.4], [0.04, 0.04]]).column.falls
    for name, level in (("half", 0.5), ("tenth", 0.1), ("hundredth", 0.01)):
        porosity = 0.4 * level ** (1.0 / 3.0)
        assert falls[name].at == pytest.approx(10.0 * (0.4 - porosity) / 0.36, abs=2e-5)
        assert falls[name].error == 5.0
    assert bed([[0.4, 0.4], [0.35, 0.35]]).column.falls["half"] is None


def test_the_least_cell_falls_before_the_column():
    found = bed([[0.4, 0.4], [0.1, 0.39]])
    assert found.least_cell.falls["half"].at < found.column.falls["half"].at


def test_the_band_is_the_column_by_other_laws():
    found = bed([[0.4, 0.4], [0.3, 0.3]], laws=(Clogging("power", 5.0), Clogging("none")), layer=(0, 1))
    left = {name: one.last for name, one in found.band.items()}
    assert left["kozeny-carman"] == pytest.approx(0.75**3 * (0.6 / 0.7) ** 2, rel=1e-13)
    assert left["power 3"] == pytest.approx(0.75**3, rel=1e-13)
    assert left["power 8"] == pytest.approx(0.75**8, rel=1e-13)
    open_share = (0.75 - CRITICAL_SHARE) / (1 - CRITICAL_SHARE)
    assert left["threshold"] == pytest.approx(open_share**3, rel=1e-13)
    own = 0.3 / (0.1 / 0.75**5 + 0.2)
    assert found.column.last == pytest.approx(own, rel=1e-13)
    assert found.has_band
    assert not bed([[0.4, 0.4], [0.3999, 0.3999]]).has_band


def test_without_a_conductivity_everywhere_there_is_no_column():
    found = bed([[0.4, 0.4], [0.2, 0.4]], clean=(np.nan, 1e-4))
    assert found.known
    assert not found.in_series
    assert found.least_cell.last == 1.0


@pytest.fixture(scope="module")
def clogged(tmp_path_factory):
    """A large salt takes the place of a small one in the second of two layers, until that closes."""
    folder = tmp_path_factory.mktemp("clogged")
    chemistry = write_salts(folder, Salt("small", "Na", 1.0, 50.0), Salt("large", "K", 1e-6, 400.0))
    text = column(
        water("feed", K=500.0, NO3=500.0) + water("pore", Na=1.0, Cl=1.0), cells=2, length="20 cm",
        flow='darcy_flux = "8 cm/d"', layer='conductivity = "1 m/d"', chemistry=chemistry, duration="20 d",
        run='profiles_every = "0.25 d"',
    )  # fmt: skip
    second = """[[layers]]
name = "salt"
length = "40 cm"
cells = 8
porosity = 0.4
dispersivity = "0 m"
conductivity = "2 m/d"
clogging = {law = "power", exponent = 3}
water = "pore"
minerals = {small = "10 vol%"}
[flow]"""
    return gossan.run(case_of(text.replace("[flow]", second, 1), folder), folder / "run.h5").loaded()


def test_where_a_column_closed_and_what_fills_it(clogged):
    found = summary_of(clogged).bottleneck
    assert clogged.reason == "clogged"
    assert (found.layer, found.at) == ("salt", pytest.approx(0.225))
    assert found.filled_by == {"large": 1.0}
    assert found.fraction == pytest.approx((1e-3 / 0.4) ** 3, rel=2e-2)


def test_head_is_lost_where_the_column_closes(clogged):
    whole = head_loss_of(clogged)
    assert whole.layers == ("bed", "salt")
    assert whole.loss[0] == pytest.approx([0.08 * 0.2, 0.08 * 0.2], rel=1e-3)
    assert whole.whole == pytest.approx(clogged.profiles.head.values[:, 0], rel=1e-12)
    assert whole.loss[:, 0] == pytest.approx(0.08 * 0.2, rel=0.03), "nothing grows in the first layer"
    halfway = head_loss_of(clogged, np.array([0.125 * DAY]))
    assert halfway.loss[0, 1] == pytest.approx(whole.loss[:2, 1].mean(), rel=1e-12)
    summary = summary_of(clogged)
    ratio = whole.whole[-1] / whole.whole[0]
    # but for the tenth that solids push out on top of what enters
    assert ratio == pytest.approx(1.0 / summary.bed.column.last, rel=0.1)


def test_machines_are_told_the_same(clogged):
    summary = summary_of(clogged)
    told = run_json(summary)
    found = told["conductivity"]
    assert (told["status"], told["reason"]) == ("finished", "clogged")
    assert found["least_fraction"] == summary.bottleneck.fraction
    assert found["at_m"] == pytest.approx(0.225)
    assert 0.0 < found["half_at_s"] < found["tenth_at_s"] < found["hundredth_at_s"] < summary.time
    column = found["column"]
    assert found["half_at_s"] < column["half_at_s"] < column["tenth_at_s"] < column["hundredth_at_s"]
    assert set(found["band"]) == {"kozeny-carman", "power 3", "power 8", "threshold"}
    assert found["band"]["power 8"]["half_at_s"] < found["band"]["power 3"]["half_at_s"]
    heads = told["head_loss"]
    assert heads["time_s"][-1] == summary.time
    assert heads["whole_m"][-1] == pytest.approx(heads["layers_m"]["bed"][-1] + heads["layers_m"]["salt"][-1])


def test_the_figure_shows_every_law_and_every_layer(clogged):
    figure = dict(all_figures(clogged))["conductivity"]
    names = {text.get_text() for ax in figure.axes for text in ax.get_legend().get_texts()}
    assert {"as the case says", *SPOKEN.values()} | {"layer bed", "layer salt", "whole column"} == names
    assert [ax.get_yscale() for ax in figure.axes] == ["log", "log"]


def test_people_are_told_the_same(clogged):
    sheets = {sheet.title: sheet for sheet in run_sheets(summary_of(clogged))}
    bed = dict(sheets["Bed"].rows)
    assert "in layer salt, x = 0.225 m" in bed["least conductivity"]
    assert bed["what grew there"] == "large"
    rows = [row[0].strip() for row in sheets["Conductivity left"].rows]
    assert rows[:3] == ["a first cell", "the whole column", "Kozeny-Carman (even coats)"]
    assert sheets["Head loss"].heads == ("time (d)", "bed (m)", "salt (m)", "column (m)")
    assert sheets["Capacity"].heads[-1] == "(%)"
