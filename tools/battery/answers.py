"""Asking the program, from nothing but the amounts."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from tools.battery.mixes import Batch

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import Equilibrium, Solver

BLOCK = 500  # waters in one call; a failed block is asked again, half by half


@dataclass(frozen=True, eq=False)
class Answers:
    """What the program found for a batch; the waters it gave up on are not in `found`."""

    batch: Batch  # of the waters that were solved
    water: np.ndarray  # (cell,) their numbers in the batch that was asked
    found: Equilibrium
    failures: tuple[tuple[int, str], ...]  # number of the water, the reason


def solve(batch: Batch) -> Answers:
    """Equilibrate every water of a batch, cold."""
    solver = Solver(batch.system)
    parts: list[Equilibrium] = []
    solved: list[np.ndarray] = []
    failures: list[tuple[int, str]] = []
    waiting = [np.arange(start, min(start + BLOCK, len(batch.totals)))
               for start in range(0, len(batch.totals), BLOCK)][::-1]  # fmt: skip
    while waiting:
        waters = waiting.pop()
        amount, upper = batch.totals[waters].T, batch.upper[waters].T
        try:
            parts.append(solver.cold(np.ones(len(waters)), amount, np.zeros_like(upper), upper))
            solved.append(waters)
        except SolveError as error:
            if len(waters) == 1:
                failures.append((int(waters[0]), error.reason))
            else:
                waiting += np.array_split(waters, 2)[::-1]
    water = np.concatenate(solved) if solved else np.zeros(0, int)
    kept = Batch(batch.name, batch.system, batch.totals[water], batch.upper[water])
    return Answers(kept, water, _joined(parts, batch), tuple(failures))


def _joined(parts: list[Equilibrium], batch: Batch) -> Equilibrium:
    names = (
        "amount", "solid", "presence", "ln_activity", "ionic_strength", "solved", "steps", "given", "seen",
    )  # fmt: skip
    if not parts:
        raise SolveError(f"none of the waters of {batch.name} was solved")
    return Equilibrium(batch.system, **{  # type: ignore[arg-type]
        name: np.concatenate([getattr(part, name) for part in parts], axis=-1) for name in names
    })  # fmt: skip
