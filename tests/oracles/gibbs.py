"""Equilibrium of an ideal solution as the least Gibbs energy: a convex program for a general-purpose solver.

In units of RT, and with the components' standard potentials at zero, the energy of a water is

    sum c (ln c - 1 - ln_k) + sum n mineral_ln_k      subject to  formation' c + dissolution' n = totals,

c >= 0, 0 <= n <= upper (van Zeggeren & Storey 1970, The Computation of Chemical Equilibria, from memory). The
ln activities are the multipliers of the mass balances. Electrons are balanced like any component, and there
is no species of them; what an open gas gives may have either sign. Nothing here knows Newton's method or
active sets.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass

import cvxpy as cp
import numpy as np
from numpy.typing import ArrayLike
from tests.support.small_systems import PlainSystem

ACCURACY = 1e-6  # an answer is refused unless it is exact for totals and ln constants moved by less than this
LN10 = np.log(10.0)
# pH and pe at which the energies of H^+ and e^- are counted as nil to begin with; the next one where the
# solver gets nowhere, since it does not like energies of hundreds of RT
ORIGINS = ((0.0, 0.0), (7.0, 4.0), (7.0, -4.0), (4.0, 13.0), (10.0, -8.0))
ROUNDS = 5  # each starts the solver anew from energies measured against the last multipliers
SOLVER = {
    "tol_gap_abs": 1e-13,
    "tol_gap_rel": 1e-13,
    "tol_feas": 1e-13,
    "max_iter": 200,
    # the default of 1e-8 stalls ten times further from the answer, measured on 40 random waters
    "static_regularization_constant": 1e-12,
    "static_regularization_proportional": 1e-24,
}


class NotConverged(ArithmeticError):
    """The solver gave nothing, or nothing that its own multipliers confirm."""


@dataclass(frozen=True)
class Least:
    """The minimum: amounts good to about ACCURACY of the largest total, ln activities of traces not."""

    molality: np.ndarray  # (species,) mol per kg of water
    amount: np.ndarray  # (mineral,) mol per kg of water
    ln_activity: np.ndarray  # (component,)
    error: float  # exact for totals (over the largest) and ln constants moved by no more than this


def least_gibbs_energy(system: PlainSystem, totals: ArrayLike, upper: ArrayLike | None = None) -> Least:
    """The water's ideal equilibrium.

    totals   (component,), mol per kg of water; none of them zero but H^+
    upper    (mineral,), mol per kg of water, the most there can be; default: no bound
    Raises   NotConverged
    """
    totals = np.asarray(totals, dtype=float)
    scale = np.abs(totals).max() or 1.0
    upper = np.full(len(system.minerals), np.inf) if upper is None else np.asarray(upper, dtype=float)
    best: Least | None = None
    for origin in ORIGINS:
        best = _refined(system, totals, upper, scale, origin, best)
        if best is not None and best.error <= ACCURACY:
            break
    if best is None:
        raise NotConverged("the convex solver gave no numbers")
    if best.error > ACCURACY:
        raise NotConverged(f"the best answer is exact only for a water {best.error:.1e} away")
    return best


def _refined(system, totals, upper, scale, origin, best):
    """Solve a few times, each from energies counted from the last multipliers; the best answer so far."""
    acidity = {"H^+": -origin[0] * LN10, "e^-": -origin[1] * LN10}
    multipliers = np.array([acidity.get(name, 0.0) for name in system.components])
    for _ in range(ROUNDS):
        found = _solved(system, totals / scale, upper / scale, multipliers, np.log(scale))
        if found is None:
            break
        c, n, multipliers = found
        error = _perturbation(system, totals / scale, upper / scale, c, n, multipliers, np.log(scale))
        if best is None or error < best.error:
            best = Least(c * scale, n * scale, multipliers, error)
        if error < ACCURACY / 100:
            break
    return best


def _solved(system, totals, upper, multipliers, ln_scale):
    """One call of the solver, energies counted from the given ln activities: (c, n, ln activity) or None."""
    potential = -(system.ln_k + system.formation @ multipliers) + ln_scale
    mineral_potential = system.mineral_ln_k - system.dissolution @ multipliers
    there = np.flatnonzero(upper > 0)
    bounded = np.flatnonzero(np.isfinite(upper[there]))
    finite = np.flatnonzero(~system.held_open()[there])
    c = cp.Variable(len(potential))
    balance = system.formation.T @ c
    energy = -cp.sum(cp.entr(c)) + (potential - 1) @ c
    limits = []
    n = cp.Variable(len(there)) if len(there) else None
    if n is not None:
        balance = balance + system.dissolution[there].T @ n
        energy = energy + mineral_potential[there] @ n
        if len(finite):
            limits.append(n[finite] >= 0)
        if len(bounded):
            limits.append(n[bounded] <= upper[there][bounded])
    mass = balance == totals
    problem = cp.Problem(cp.Minimize(energy), [mass, *limits])
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", UserWarning)  # "may be inaccurate": judged by the numbers instead
        try:
            problem.solve(solver=cp.CLARABEL, **SOLVER)
        except cp.SolverError:
            return None
    if c.value is None or mass.dual_value is None:
        return None
    amounts = np.zeros(len(upper))
    if n is not None:
        least = np.where(system.held_open()[there], -np.inf, 0.0)
        amounts[there] = np.clip(np.asarray(n.value), least, upper[there])
    return np.maximum(c.value, 0.0), amounts, multipliers - np.asarray(mass.dual_value)


def _perturbation(system, totals, upper, c, n, multipliers, ln_scale):
    """By how much totals and ln constants must be moved to make the answer exact.

    balance, law: totals, once each molality is the one that the multipliers give; idle: an amount set to zero
    (or to its bound), or else a ln constant moved to saturation, whichever is less.
    """
    balance = system.formation.T @ c + system.dissolution.T @ n - totals
    exponent = system.ln_k + system.formation @ multipliers - ln_scale
    law = np.exp(np.clip(exponent, -300.0, 50.0)) - c
    ln_saturation = system.dissolution @ multipliers - system.mineral_ln_k
    idle_below = np.where(
        system.held_open(), np.abs(ln_saturation), np.minimum(n, np.maximum(-ln_saturation, 0.0))
    )
    idle_above = np.minimum(upper - n, np.maximum(ln_saturation, 0.0))
    return float(max(np.abs(part).max(initial=0.0) for part in (balance, law, idle_below, idle_above)))
