"""Newton at 60 digits: settles what a double-precision equilibrium claims, traces and minerals included.

With the activity coefficients frozen an equilibrium is the minimum of a convex function of x = ln activity,
sum of molalities - totals . x, on the plane where the present minerals are saturated. Plain damped Newton
finds it from anywhere; the ionic strength joins as one more unknown at the end. Forty spare digits carry the
cancellation: a free sulfide of 1e-25 beside totals of 0.1 costs 25 of them. Electrons are one more component,
of which nothing is free; where they balance exactly, traces of oxygen or hydrogen decide, and 120 digits do.
"""

from __future__ import annotations

from dataclasses import dataclass

import mpmath as mp
import numpy as np
from numpy.typing import ArrayLike
from tests.oracles.activity_laws import LnGamma
from tests.oracles.algebra60 import column, dot, solve
from tests.oracles.plane60 import ABSENT, FULL, PRESENT, Plane, hessian
from tests.support.small_systems import PlainSystem

SPARE_DIGITS = 40
LONGEST_STEP = 20  # in ln activity: far from the answer the exponentials know only the direction
PATIENCE = 150  # damped steps: thirty decades of excess shrink by one factor e at a time
MOST_CHANGES = 60  # of the set of present minerals


class NoAnswer(ArithmeticError):
    """The oracle itself failed; nothing follows about the answer that was to be judged."""


@dataclass(frozen=True)
class Settled:
    """The equilibrium at many digits, and how far the given answer was from it."""

    ln_activity: list  # (component,) mpf
    amount: list  # (mineral,) mpf, mol per kg of water
    molality: list  # (species,) mpf
    ionic_strength: mp.mpf
    presence: np.ndarray  # (mineral,) 0 absent, 1 present, 2 full
    changes: tuple[str, ...]  # what was wrong with the given set of minerals; () confirms it
    error: float  # the largest error of the given ln activities
    amount_error: float  # the largest error of the given amounts, over the largest total


def settle(
    system: PlainSystem,
    totals: ArrayLike,
    ln_activity: ArrayLike,
    amount: ArrayLike,
    presence: ArrayLike,
    upper: ArrayLike | None = None,
    ln_gamma: LnGamma | None = None,
    digits: int = 60,
) -> Settled:
    """The equilibrium of a water, started from a given answer; a wrong set of minerals is named and repaired.

    One mineral is repaired at a time: where nothing is known, begin with `least_gibbs_energy`.

    totals      (component,), mol per kg of water, none of them zero but those of H^+ and e^-
    ln_activity (component,), the answer to judge; finite
    amount      (mineral,), mol per kg of water, the same; of an open gas what it gave less what it took
    presence    (mineral,), the same: 0 absent, 1 present, 2 full (at its upper bound); open gases are present
    upper       (mineral,), mol per kg of water, the most there can be; default: no bound
    ln_gamma    ionic strength to (species,); default: ideal
    Raises      NoAnswer
    """
    with mp.workdps(digits + SPARE_DIGITS):
        water = _Water(system, totals, upper, ln_gamma, digits)
        given, given_n = _exactly(ln_activity), _exactly(amount)
        x, n, molality, strength, held, changes = _right_set(water, given, presence)
        scale = max(abs(t) for t in water.totals) or mp.mpf(1)
        return Settled(
            ln_activity=x,
            amount=n,
            molality=molality,
            ionic_strength=strength,
            presence=held,
            changes=tuple(changes),
            error=float(max(abs(a - b) for a, b in zip(x, given, strict=True))),
            amount_error=float(
                max((abs(a - b) for a, b in zip(n, given_n, strict=True)), default=mp.mpf(0)) / scale
            ),
        )


class _Water:
    """The given numbers, exactly: a double is the fraction it holds, not the decimal it was read from."""

    def __init__(self, system, totals, upper, ln_gamma, digits):
        self.formation = [_exactly(row) for row in system.formation]
        self.ln_k = _both(system.ln_k, system.ln_k_rest)
        self.charge = _exactly(system.charge)
        self.dissolution = [_exactly(row) for row in system.dissolution]
        self.mineral_ln_k = _both(system.mineral_ln_k, system.mineral_ln_k_rest)
        self.open = system.held_open()
        self.totals = _exactly(totals)
        self.upper = _exactly(np.full(len(self.mineral_ln_k), np.inf) if upper is None else upper)
        self.names = system.minerals
        self.ideal = ln_gamma is None
        self.ln_gamma = ln_gamma or (lambda _: [mp.mpf(0)] * len(self.ln_k))
        self.tolerance = mp.mpf(10) ** -digits
        self.rounding = mp.mpf(10) ** (-digits - SPARE_DIGITS // 2)

    def molality(self, x, strength):
        logs = self.ln_gamma(strength)
        return [
            mp.exp(k + dot(row, x) - g) for k, row, g in zip(self.ln_k, self.formation, logs, strict=True)
        ]

    def strength(self, molality):
        return dot([z * z for z in self.charge], molality) / 2

    def ln_saturation(self, x):
        return [dot(row, x) - k for row, k in zip(self.dissolution, self.mineral_ln_k, strict=True)]


def _exactly(values: ArrayLike) -> list:
    return [mp.mpf(v) for v in np.asarray(values, dtype=float).tolist()]


def _both(values: ArrayLike, rest: ArrayLike | None) -> list:
    if rest is None:
        return _exactly(values)
    return [a + b for a, b in zip(_exactly(values), _exactly(rest), strict=True)]


def _right_set(water, x, presence):
    """Solve, look at the signs, change one mineral, solve again."""
    held = np.where(water.open, PRESENT, np.array(presence, dtype=np.int8))
    seen: set[bytes] = set()
    changes: list[str] = []
    strength = water.strength(water.molality(x, mp.mpf("0.1")))
    strength = min(max(strength, mp.mpf("1e-7")), mp.mpf(10))
    last = None  # the last set with an equilibrium
    while len(changes) <= MOST_CHANGES:
        seen.add(held.tobytes())
        plane = Plane(water, held, x)
        if plane.dependent is not None:
            held[plane.dependent] = ABSENT
            changes.append(f"{water.names[plane.dependent]} depends on the other present minerals")
            continue
        try:
            x, strength = _on_plane(water, plane, x, strength)
        except NoAnswer:
            if last is None and not held[~water.open].any():
                raise
            changes.append("no water has just these minerals")
            if last is None:
                held = np.where(water.open, PRESENT, ABSENT)
                continue
        else:
            molality = water.molality(x, strength)
            last = plane, held, plane.amounts(molality), water.ln_saturation(x)
        change = _wanted_change(water, *last, seen)
        if change is None:
            return x, last[2], molality, strength, held, changes
        held, told = change
        changes.append(told)
    raise NoAnswer("the set of present minerals did not settle: " + ", ".join(changes[-6:]))


def _wanted_change(water, plane, held, n, ln_saturation, seen):
    """The most urgent change of the mineral set, among those not yet tried; None where the set is right."""
    scale = max(abs(t) for t in water.totals)
    wanted = []
    for m, state in enumerate(held):
        name = water.names[m]
        if water.open[m]:
            continue
        if state == PRESENT and n[m] < -water.tolerance * scale:
            wanted.append((1, -n[m], m, ABSENT, f"{name} has a negative amount"))
        elif state == PRESENT and n[m] > water.upper[m] + water.tolerance * scale:
            wanted.append((1, n[m] - water.upper[m], m, FULL, f"{name} is above its bound"))
        elif state == FULL and ln_saturation[m] < -water.tolerance:
            wanted.append((0, -ln_saturation[m], m, PRESENT, f"{name} is full, yet undersaturated"))
        elif state == ABSENT and ln_saturation[m] > water.tolerance and water.upper[m] > 0:
            wanted.append((0, ln_saturation[m], m, PRESENT, f"{name} is absent, yet supersaturated"))
    for _, _, m, state, told in sorted(wanted, reverse=True):
        trial = held.copy()
        trial[m] = state
        if state == PRESENT:
            _make_room(water, plane, trial, n, m, from_full=held[m] == FULL)
        if trial.tobytes() not in seen:
            return trial, told
    if wanted:
        raise NoAnswer("every change of the mineral set was tried before: " + wanted[0][-1])
    return None


def _make_room(water, plane, trial, n, entering, from_full):
    """Where the entering mineral is a sum of present ones, it replaces the one that it uses up first."""
    shares = plane.as_sum_of_present(water.dissolution[entering])
    if shares is None:
        return
    way = -1 if from_full else 1
    limits = [(water.upper[entering], entering, ABSENT if from_full else FULL)]
    for m, share in shares.items():
        if water.open[m]:
            continue
        if share * way > 0:
            limits.append((n[m] / (share * way), m, ABSENT))
        elif share * way < 0:
            limits.append(((water.upper[m] - n[m]) / -(share * way), m, FULL))
    _, m, state = min(limits)
    trial[m] = state


def _on_plane(water, plane, x, strength):
    """The minimum on the plane: frozen coefficients until near, then ionic strength as one more unknown."""
    free = [x[k] for k in plane.free]
    for _ in range(PATIENCE):
        if water.ideal or _nearness(water, plane, free, strength) < 0.1:
            near = _with_strength(water, plane, free, strength)
            if near is not None:
                return near
        free = _frozen(water, plane, free, strength, mp.mpf("1e-3"))
        found = water.strength(water.molality(plane.whole(free), strength))
        strength = mp.sqrt(strength * min(max(found, strength / 25), strength * 25))
    raise NoAnswer("ionic strength did not settle")


def _nearness(water, plane, free, strength):
    molality = water.molality(plane.whole(free), strength)
    left, size = plane.missing(molality)
    ratios = [abs(a) / b for a, b in zip(left, size, strict=True)]
    return max([*ratios, abs(water.strength(molality) / strength - 1)])


def _frozen(water, plane, free, strength, tolerance):
    """Damped Newton on the convex function, activity coefficients held; to this relative tolerance."""

    def height(trial):
        molality = water.molality(plane.whole(trial), strength)
        return mp.fsum(molality) - dot(plane.free_totals, trial), molality

    low, molality = height(free)
    for _ in range(PATIENCE):
        left, size = plane.missing(molality)
        if all(abs(a) <= tolerance * b for a, b in zip(left, size, strict=True)):
            return free
        step = solve(hessian(plane, molality), left)
        length = max(map(abs, step))
        factor = min(mp.mpf(1), LONGEST_STEP / length) if length else mp.mpf(1)
        slope = dot(left, step)  # of minus the height
        while True:
            trial = [a + factor * b for a, b in zip(free, step, strict=True)]
            high, molality = height(trial)
            if high <= low - factor * slope / 10000:
                break
            factor /= 2
            if factor < water.rounding:
                raise NoAnswer("a descent step did not descend")
        free, low = trial, high
    raise NoAnswer("damped Newton ran out of steps")


def _with_strength(water, plane, free, strength):
    """Newton on ln activities and ionic strength together; None where it does not contract."""
    if water.ideal:
        free = _frozen(water, plane, free, strength, mp.mpf("1e-3"))
    before = mp.inf
    squares = [z * z / 2 for z in water.charge]
    for _ in range(40):
        molality = water.molality(plane.whole(free), strength)
        left, _ = plane.missing(molality)
        found = dot(squares, molality)
        # one-sided difference: its error of 1e-40 costs nothing beside the digits that one Newton step gains
        nudge = strength * mp.mpf(10) ** -40
        slope = [
            (b - a) / nudge
            for a, b in zip(water.ln_gamma(strength), water.ln_gamma(strength + nudge), strict=True)
        ]
        swell = [c * g for c, g in zip(molality, slope, strict=True)]  # -d molality / d strength
        charged = [s * c for s, c in zip(squares, molality, strict=True)]
        matrix = [
            [*row, -column(plane.formation, j, swell)] for j, row in enumerate(hessian(plane, molality))
        ]
        last = [-column(plane.formation, j, charged) for j in range(len(free))]
        matrix.append([*last, 1 + dot(squares, swell)])
        step = solve(matrix, [*left, found - strength])
        relative = max([*map(abs, step[:-1]), abs(step[-1]) / strength])
        if relative < water.tolerance:
            return plane.whole([a + b for a, b in zip(free, step, strict=False)]), strength + step[-1]
        if relative > max(before, mp.mpf(3)) or strength + step[-1] <= 0:
            return None
        before = relative
        free = [a + b for a, b in zip(free, step, strict=False)]
        strength += step[-1]
    return None
