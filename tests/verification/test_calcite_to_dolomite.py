"""Magnesium chloride flushes calcite out of a column; dolomite forms and goes: cases/calcite-to-dolomite.

The statement of the problem is complete; of its profiles only the shape is known: a band of dolomite between
two fronts, of the order of 1e-5 mol per kg of solid.

Citations
  engesgaard1992 Engesgaard & Kipp (1992), Water Resour. Res. 28, 2829-2843
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from tests.support.agreement import Between, Check, Within
from tests.support.columns import Walk, walk

from gossan.case.build import build
from gossan.case.read import case_from_text

FOLDER = Path(__file__).resolve().parents[2] / "cases" / "calcite-to-dolomite"
END, CELL = 21000.0, 0.005  # s, m
DRY = 1800.0  # kg of solid per m3 of bulk


@cache
def flushed(own: bool = False) -> Walk:
    """The case, run once; with the program's own constants in place of the recalled ones where asked for."""
    text = (FOLDER / "case.toml").read_text(encoding="utf-8")
    if own:
        assert "\nconstants =" in text
        text = text.replace("\nconstants =", "\n# constants =")
    return walk(build(case_from_text(text, "case.toml", FOLDER)))


@dataclass(frozen=True)
class Band:
    """Where a mineral begins and ends, m, and the most there is of it, mol m-3 of bulk."""

    begins: float
    ends: float
    most: float


def band(run: Walk, mineral: str, time: float = END) -> Band:
    """What there is of a mineral at a recorded time, s."""
    state = next(frame for frame in run.frames if frame.time == pytest.approx(time))
    solid, edges = run.solid(mineral, state), run.problem.grid.edges
    there = np.flatnonzero(solid > 0.0)
    return Band(float(edges[there[0]]), float(edges[there[-1] + 1]), float(solid.max()))


def ph_at_start() -> float:
    run = flushed()
    return -float(run.records[0].ln_activity[0, 0]) / np.log(10.0)


def calcium_at_start() -> float:
    return float(flushed().dissolved("Ca^2+", flushed().records[0])[0])


def middle_of_tracer() -> float:
    run = flushed()
    return float(np.interp(-0.5, -run.dissolved("bromide"), run.problem.grid.centres))


CHECKS = [
    Check("pH of the water at the start", ph_at_start, Within(9.91, 0.01), "engesgaard1992", False,
          "printed digits", logarithmic=True),
    Check("calcium of the water at the start, mol/m3", calcium_at_start, Within(0.122, 0.002),
          "engesgaard1992", False, "a hundredth of log10 K of calcite is 1 % of it"),
    Check("where the tracer is at one half, m", middle_of_tracer, Within(0.196875, CELL / 4),
          "engesgaard1992", False, "velocity times time; 30 dispersivities in it leans by a thousandth"),
    Check("where calcite begins, m", lambda: band(flushed(), "calcite").begins, Between(0.0, 0.196875),
          "engesgaard1992", False, "it trails the tracer"),
    Check("most dolomite, mol per kg of solid", lambda: band(flushed(), "dolomite").most / DRY,
          Between(5e-6, 2.17e-5), "engesgaard1992", False, "of the order of 1e-5; no more than the calcite"),
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_agrees(check):
    check.judge()


@pytest.mark.parametrize("own", [False, True])
def test_a_band_of_dolomite_walks_between_two_fronts(own):
    run = flushed(own)
    middle, last = band(run, "dolomite", END / 2), band(run, "dolomite")
    calcite = band(run, "calcite")
    assert 0.0 < middle.begins < last.begins < last.ends < 0.5
    assert last.ends - calcite.begins == pytest.approx(0.0, abs=1.01 * CELL)  # it ends where calcite begins
    assert calcite.ends == 0.5
    assert last.ends - last.begins > 1.3 * (middle.ends - middle.begins)
    upstream = run.problem.grid.centres < last.begins
    assert not run.solid("calcite")[upstream].any()
    assert not run.solid("dolomite")[upstream].any()
    assert run.strides == pytest.approx(204, rel=0.05)


def test_the_constant_of_dolomite_moves_the_band():
    """By half a unit of log10 K, as far as sources disagree: some centimetres at either end."""
    recalled, ordered = band(flushed(), "dolomite"), band(flushed(own=True), "dolomite")
    assert (recalled.begins, recalled.ends) == pytest.approx((0.11, 0.175), abs=1.01 * CELL)
    assert (ordered.begins, ordered.ends) == pytest.approx((0.085, 0.215), abs=1.01 * CELL)


def test_no_carbon_comes_from_anywhere():
    """None flows in: what left, and what the water and the two minerals hold, is what was there."""
    run = flushed()
    first, last = run.records[0], run.last
    width = run.problem.grid.width

    def stored(state) -> float:
        dissolved = run.dissolved("CO3^2-", state) * state.water
        return float((dissolved + run.solid("calcite", state) + 2.0 * run.solid("dolomite", state)) @ width)

    k = run.problem.solutes.index("CO3^2-")
    assert last.passed[0, k].sum() == 0.0
    assert last.passed[1, k].sum() > 0.05 * stored(first)
    assert stored(last) + last.passed[1, k].sum() == pytest.approx(stored(first), rel=1e-13)
