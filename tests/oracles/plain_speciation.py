"""Equilibrium the slow and obvious way, in double precision: try every set of minerals until one is right.

For waters without near cancellation: the mass balances are met in full, so that a trace that is the
difference of two totals drowns in their rounding. tests/oracles/newton60.py is for those.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import product

import numpy as np
from numpy.typing import ArrayLike
from tests.oracles.activity_laws import LnGamma
from tests.support.small_systems import PlainSystem

ABSENT, PRESENT, FULL = 0, 1, 2
MOST_MINERALS = 6  # 3^6 = 729 sets to try
LONGEST_STEP = 5.0  # in ln activity
PATIENCE = 500
RUNAWAY = 250.0  # a ln activity beyond it is on its way to infinity: these minerals cannot all be there
EVEN = 1e-13  # relative change of the ionic strength that counts as none
SLACK = 1e-9  # what rounding may do to a sign: of ln saturation, and of amounts over the largest total


class NoSpeciation(ArithmeticError):
    """No set of minerals gave an answer that meets every condition."""


@dataclass(frozen=True)
class Speciation:
    """One equilibrium."""

    ln_activity: np.ndarray  # (component,)
    molality: np.ndarray  # (species,) mol per kg of water
    amount: np.ndarray  # (mineral,) mol per kg of water
    presence: np.ndarray  # (mineral,) 0 absent, 1 present, 2 full
    ionic_strength: float  # mol per kg of water


def speciate(
    system: PlainSystem,
    totals: ArrayLike,
    upper: ArrayLike | None = None,
    ln_gamma: LnGamma | None = None,
) -> Speciation:
    """The first set of minerals, fewest first, whose equilibrium breaks no condition.

    totals   (component,), mol per kg of water; none of them zero but H^+
    upper    (mineral,), mol per kg of water, the most there can be; default: no bound
    ln_gamma ionic strength to (species,); default: ideal
    Raises   NoSpeciation
    """
    return next(all_speciations(system, totals, upper, ln_gamma))


def all_speciations(
    system: PlainSystem,
    totals: ArrayLike,
    upper: ArrayLike | None = None,
    ln_gamma: LnGamma | None = None,
) -> Iterator[Speciation]:
    """Every set of minerals that works: a second one means that the equilibrium is not unique.

    Raises   NoSpeciation, where there is none
    """
    count = len(system.minerals)
    if count > MOST_MINERALS:
        raise ValueError(f"{count} minerals make too many sets to try; at most {MOST_MINERALS}")
    upper = np.full(count, np.inf) if upper is None else np.asarray(upper, dtype=float)
    ln_gamma = ln_gamma or (lambda _: [0.0] * len(system.species))
    states = [(ABSENT, PRESENT, FULL) if 0 < u < np.inf else (ABSENT, PRESENT)[: 1 + (u > 0)] for u in upper]
    any_found = False
    for presence in sorted(product(*states), key=np.count_nonzero):
        found = _with_set(system, np.asarray(totals, dtype=float), upper, np.array(presence), ln_gamma)
        if found is not None:
            any_found = True
            yield found
    if not any_found:
        raise NoSpeciation("no set of minerals gives an equilibrium")


def _with_set(system, totals, upper, presence, ln_gamma) -> Speciation | None:
    """The equilibrium with these minerals, or None where there is none or one of its signs is wrong."""
    present, full = presence == PRESENT, presence == FULL
    rows, right = system.dissolution[present], system.mineral_ln_k[present]
    if np.linalg.matrix_rank(rows) < len(rows):
        return None
    left = totals - system.dissolution[full].T @ upper[full]
    x = np.log(np.maximum(np.abs(totals), 1e-9))
    strength = 0.1
    for _ in range(PATIENCE):
        found = _frozen(system, left, rows, right, x, np.array(ln_gamma(strength), dtype=float))
        if found is None:
            return None
        x, molality, n = found
        before, strength = strength, 0.5 * (system.charge**2 @ molality)
        if abs(strength - before) <= EVEN * strength:
            break
    else:
        return None
    amount = np.where(full, upper, 0.0)
    amount[present] = n
    ln_saturation = system.dissolution @ x - system.mineral_ln_k
    slack = SLACK * np.abs(totals).max()
    wrong = (
        (amount < -slack).any()
        or (amount > upper + slack).any()
        or (ln_saturation[(presence == ABSENT) & (upper > 0)] > SLACK).any()
        or (ln_saturation[full] < -SLACK).any()
    )
    return None if wrong else Speciation(x, molality, amount, presence, float(strength))


def _frozen(system, totals, rows, right, x, logs):
    """Damped Newton with the activity coefficients held: (ln activity, molality, amounts) or None."""

    def height(trial):
        molality = np.exp(np.clip(system.ln_k + system.formation @ trial - logs, -RUNAWAY, RUNAWAY))
        return molality.sum() - totals @ trial, molality

    if len(rows):
        x = x + np.linalg.lstsq(rows, right - rows @ x, rcond=None)[0]
    low, molality = height(x)
    for _ in range(PATIENCE):
        if np.abs(x).max() > RUNAWAY:
            return None
        hessian = system.formation.T @ (molality[:, None] * system.formation)
        missing = totals - system.formation.T @ molality
        scale = 1 / np.sqrt(np.diag(hessian))
        step, n = _saddle(hessian, rows, missing, scale)
        if step is None:
            return None
        length = np.abs(step).max()
        if length < 1e-12:
            return x + step, molality, n
        factor = min(1.0, LONGEST_STEP / length)
        slope = missing @ step  # of minus the height; the present minerals add nothing along their plane
        while length * factor > 1e-6:  # below, rounding decides whether the height falls
            if height(x + factor * step)[0] <= low - 1e-4 * factor * slope:
                break
            factor /= 2
        x = x + factor * step
        low, molality = height(x)
    return None


def _saddle(hessian, rows, missing, scale):
    """Newton's step along the plane of the present minerals, and their amounts: the plane's multipliers."""
    count = len(rows)
    matrix = np.zeros((len(missing) + count,) * 2)
    matrix[: len(missing), : len(missing)] = hessian * scale[:, None] * scale
    weight = 1 / np.abs(rows * scale).max(axis=1, initial=1e-300)
    matrix[len(missing) :, : len(missing)] = rows * scale * weight[:, None]
    matrix[: len(missing), len(missing) :] = matrix[len(missing) :, : len(missing)].T
    try:
        solved = np.linalg.solve(matrix, np.concatenate([missing * scale, np.zeros(count)]))
    except np.linalg.LinAlgError:
        return None, None
    return solved[: len(missing)] * scale, solved[len(missing) :] * weight
