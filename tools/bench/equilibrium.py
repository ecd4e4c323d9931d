"""Local equilibrium against scipy's root finder, and against its own arithmetic."""

from __future__ import annotations

import numpy as np
from tools.bench.floor import least_seconds, pieces
from tools.bench.roots import PlainWater
from tools.bench.timing import Goal, medians
from tools.bench.waters import COPIES, OneWater, some_waters

WATERS = 40
TYPICAL = 3  # minerals present in the water whose floor is measured

GOALS = (
    Goal("cold equilibrium against scipy.optimize.root", 40, 100, "x"),
    Goal("warm equilibrium against scipy.optimize.root", 60, 300, "x"),
    Goal("warm equilibrium against its floor, water by water", 8, 2, "x", more_is_better=False),
    Goal("warm equilibrium against its floor in lanes of 16", 8, 2, "x", more_is_better=False),
)


def measure() -> list[tuple[float, str]]:
    """(value, note) of each goal."""
    system, waters = some_waters(WATERS)
    cold, warm, plain_cold, plain_warm, right = np.array([_seconds(water) for water in waters]).T
    typical = [n for n, water in enumerate(waters) if water.minerals() == TYPICAL]
    steps = float(np.median([waters[n].warm().steps[0] for n in typical]))
    alone, lanes = least_seconds(pieces(system, len(system.components) - TYPICAL), steps)
    own = float(np.median(warm[typical]))
    us = [f"{1e6 * np.median(t):.3g} us" for t in (plain_cold, cold, plain_warm, warm)]
    many = f"{steps:.0f} steps, {TYPICAL} minerals"
    return [
        (
            float(np.median(plain_cold) / np.median(cold)),
            f"{us[0]} against {us[1]}; root finds {right.mean():.0%} of them",
        ),
        (float(np.median(plain_warm) / np.median(warm)), f"{us[2]} against {us[3]}"),
        (own / alone, f"{1e6 * own:.3g} us against {1e6 * alone:.3g} us, {many}"),
        (own / lanes, f"{1e6 * own:.3g} us against {1e6 * lanes:.3g} us, {many}"),
    ]


def _seconds(water: OneWater) -> tuple[float, float, float, float, bool]:
    """Median seconds of a solve: cold, warm, the yardstick's cold and warm; whether its cold one is right."""
    system = water.solver.system
    before, after = PlainWater(system, water.total), PlainWater(system, water.changed)
    found, first = water.found, before.first_guess()
    known = np.concatenate((found.ln_activity[:, 0], found.solid[:, 0], found.ionic_strength[:1]))
    with np.errstate(all="ignore"):  # the yardstick wanders off
        cold, warm, plain_cold, plain_warm = medians(
            water.cold, water.warm, lambda: before.solved(first), lambda: after.solved(known)
        )
        right = np.allclose(before.solved(first)[: len(water.total)], known[: len(water.total)], atol=1e-4)
    return cold / COPIES, warm / COPIES, plain_cold, plain_warm, right
