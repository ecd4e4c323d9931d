"""Pores and flow brought to agree with what a step does to them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from gossan.base.errors import SolveError
from gossan.coupling.attempt import Trial, attempt
from gossan.coupling.drive import Drive
from gossan.coupling.splitting import AT_REST, Turn

ROUNDS = 30  # where pores change by one per cent each round leaves about a hundredth of the last one's change


def fed_back(drive: Drive, turn: Turn, trial: Trial) -> tuple[Turn, Trial, np.ndarray]:
    """Try a step anew with the flow, and the conductances, of the middle of the step that it leads to.

    Water then leaves as solids push it out in this very step, not as they did in the last (equations.md, 89).
    Returns  turn, trial and head (face,) m once the water of no cell changes any more
    Raises   SolveError where it goes on to change, or a cell finds no equilibrium
    """
    problem, state, dt = turn.problem, turn.state, turn.dt
    change = np.zeros(0)
    for _ in range(ROUNDS):
        after, still = trial.state, state.still
        if still is not None and after.still is not None:
            still = replace(still, swelling=after.still.swelling)
        begun = replace(state, swelling=after.swelling, still=still)
        middle = 0.5 * (problem.water(state) + problem.water(after))
        span = dt if drive.ramps else 0.0
        darcy_flux, head = replace(drive, state=begun).flow(dt, span, middle)
        faces = drive.faces(darcy_flux, span, 0.5 * (state.water + after.water))
        turn = replace(turn, state=begun, faces=faces)
        again = attempt(turn)
        change = np.abs(again.state.water - after.water) / state.water
        trial = again
        if change.max() <= AT_REST:
            return turn, trial, head
    raise SolveError(f"pores and flow still disagree after {ROUNDS} rounds", cell=int(change.argmax()))
