"""Send random waters through the program's equilibrium and judge every answer.

    python tools/battery.py --waters 20000 --seed 20261201 --hard 50

Each answer is put back into the equations in plain numpy; of the hardest ones the ln activities are settled
at 60 digits. Leaves with 1 where a water fails.
"""

from __future__ import annotations

import argparse
import sys
import time
from dataclasses import dataclass
from pathlib import Path

import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from tests.oracles.activity_laws import LnGamma, davies, extended_debye_hueckel
from tests.oracles.newton60 import NoAnswer, settle
from tests.support.battery import battery, random_bounds, scaled, stirred, wide_battery
from tests.support.small_systems import (
    MINE_COMPLEXES,
    MINE_COMPONENTS,
    MINE_MINERALS,
    WIDE_COMPONENTS,
    PlainSystem,
)

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import Solver
from gossan.chemistry.system import System, build_system
from gossan.constants.load import load_table

A_LOG10, B_PER_M = 0.5085, 3.281e9  # at 25 degC, Freeze & Cherry (1979)
BLOCK = 500  # waters in one call; a failed block is asked again water by water
# relative mass balance that counts as met; the sum of all terms' sizes is 1. A component that is a billionth
# of the totals beside it shows their rounding in its own balance
WITHIN = 1e-9
LN_SLACK = 1e-6  # of ln saturation: the sign of a mineral's condition
STRENGTH_SLACK = 1e-7  # relative, of the ionic strength
ABSENT, PRESENT, FULL = 0, 1, 2


@dataclass(frozen=True)
class Answers:
    """What the program found, one water a column; NaN where it gave up."""

    ln_activity: np.ndarray  # (component, water)
    solid: np.ndarray  # (mineral, water) mol per kg of water
    presence: np.ndarray  # (mineral, water)
    ionic_strength: np.ndarray  # (water,) mol/kg
    steps: np.ndarray  # (water,)


def main() -> int:
    """Run the battery that the command line asks for."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--waters", type=int, default=2000)
    parser.add_argument("--seed", type=int, default=20261201)
    parser.add_argument("--hard", type=int, default=0, metavar="K", help="settle the K hardest at 60 digits")
    parser.add_argument("--activity", default="davies", choices=("davies", "debye-hueckel", "ideal"))
    parser.add_argument("--change", default="none", choices=("none", "scaled", "stirred"))
    parser.add_argument("--wide", action="store_true", help="22 components, the default minerals")
    parser.add_argument("--bounded", action="store_true", help="minerals may only dissolve, random amounts")
    asked = parser.parse_args()

    system = wide_system(asked.activity) if asked.wide else mine_system(asked.activity)
    plain = as_plain(system)
    names = WIDE_COMPONENTS if asked.wide else MINE_COMPONENTS
    place = [system.components.index(name) for name in names]  # the program orders components its own way
    totals = np.zeros((asked.waters, len(names)))
    totals[:, place] = (
        wide_battery(asked.seed, asked.waters, names, plain.dissolution[:, place])
        if asked.wide
        else battery(asked.seed, asked.waters)
    )
    if asked.change != "none":
        totals = {"scaled": scaled, "stirred": stirred}[asked.change](totals, asked.seed)

    upper = np.full((asked.waters, len(system.minerals)), np.inf)
    if asked.bounded:
        upper = random_bounds(totals, len(system.minerals), asked.seed)
    solve(system, totals[:1], upper[:1])  # compiles, or loads what was compiled
    started = time.perf_counter()
    answers = solve(system, totals, upper)
    seconds = time.perf_counter() - started
    print(f"{len(plain.components)} components, {len(plain.species)} species, {len(plain.minerals)} minerals")
    found = np.isfinite(answers.ionic_strength)
    print(f"{found.sum()} of {len(totals)} waters converged, {1e6 * seconds / len(totals):.0f} us each")
    law = LAWS[asked.activity](plain)
    good = report_conditions(plain, law, totals, upper, answers, found)
    chosen = hardest(plain, law, totals, answers, found)[: asked.hard]
    report_hardest(plain, law, totals, upper, answers, chosen)
    return 0 if good and found.all() else 1


def mine_system(activity: str) -> System:
    """The battery's own: 11 components, 45 species, 8 minerals."""
    table = load_table()
    others = [name for name in table.species if name not in MINE_COMPLEXES]
    return build_system(table, MINE_COMPONENTS, MINE_MINERALS, activity=activity, excluded=others)


def wide_system(activity: str) -> System:
    """Everything the first batch of constants holds, with the default list of minerals."""
    return build_system(load_table(), WIDE_COMPONENTS, activity=activity)


def solve(system: System, totals: np.ndarray, upper: np.ndarray) -> Answers:
    """Ask the program, from nothing but the amounts.

    totals  (water, component) in the system's order, upper (water, mineral): mol per kg of water
    """
    shape = (len(system.components), len(system.minerals), len(totals))
    answers = Answers(
        ln_activity=np.full((shape[0], shape[2]), np.nan),
        solid=np.full((shape[1], shape[2]), np.nan),
        presence=np.zeros((shape[1], shape[2]), dtype=np.int8),
        ionic_strength=np.full(shape[2], np.nan),
        steps=np.zeros(shape[2], dtype=int),
    )
    solver = Solver(system)
    for start in range(0, len(totals), BLOCK):
        _solve_block(solver, totals, upper, np.arange(start, min(start + BLOCK, len(totals))), answers)
    return answers


def _solve_block(
    solver: Solver, totals: np.ndarray, upper: np.ndarray, waters: np.ndarray, answers: Answers
) -> None:
    amount, bound = np.ascontiguousarray(totals[waters].T), np.ascontiguousarray(upper[waters].T)
    try:
        found = solver.cold(np.ones(len(waters)), amount, np.zeros_like(bound), bound)
    except SolveError as error:
        if len(waters) == 1:
            print(f"water {waters[0]}: {error.reason}")
            return
        for water in waters:
            _solve_block(solver, totals, upper, np.array([water]), answers)
        return
    answers.ln_activity[:, waters] = found.ln_activity
    answers.solid[:, waters] = found.solid
    answers.presence[:, waters] = found.presence
    answers.ionic_strength[waters] = found.ionic_strength
    answers.steps[waters] = found.steps


def as_plain(system: System) -> PlainSystem:
    """The program's matrices as the oracles read them."""
    return PlainSystem(
        components=system.components,
        species=system.species,
        minerals=system.minerals,
        formation=np.asarray(system.stoichiometry, dtype=float),
        ln_k=np.asarray(system.matrices.ln_k, dtype=float)[: len(system.species)],  # padded beyond
        charge=np.asarray(system.species_charge, dtype=float),
        ion_size=_ion_sizes(system.species),
        dissolution=np.asarray(system.mineral_stoichiometry, dtype=float),
        mineral_ln_k=np.asarray(system.matrices.solid_ln_k, dtype=float),
    )


def _ion_sizes(names: tuple[str, ...]) -> np.ndarray:
    table = load_table()
    records = [table.components.get(name) or table.species[name] for name in names]
    return np.array([record.ion_size.value if record.ion_size else np.nan for record in records])


LAWS = {
    "ideal": lambda plain: lambda _: [0.0] * len(plain.species),
    "davies": lambda plain: davies(plain.charge, A_LOG10),
    "debye-hueckel": lambda plain: extended_debye_hueckel(plain.charge, plain.ion_size, A_LOG10, B_PER_M),
}


def molalities(plain: PlainSystem, law: LnGamma, answers: Answers) -> np.ndarray:
    """(species, water) mol per kg of water, from ln activities and ionic strength alone."""
    logs = np.array([law(strength) for strength in answers.ionic_strength.tolist()], dtype=float).T
    return np.exp(plain.ln_k[:, None] + plain.formation @ answers.ln_activity - logs)


def report_conditions(
    plain: PlainSystem,
    law: LnGamma,
    totals: np.ndarray,
    upper: np.ndarray,
    answers: Answers,
    found: np.ndarray,
) -> bool:
    """Print how well every water meets the equations; whether all do."""
    molality = molalities(plain, law, answers)
    saturation = plain.dissolution @ answers.ln_activity - plain.mineral_ln_k[:, None]
    left = plain.formation.T @ molality + plain.dissolution.T @ answers.solid - totals.T
    size = np.abs(plain.formation).T @ molality + np.abs(plain.dissolution).T @ np.abs(answers.solid)
    balance = np.abs(left) / (size + np.abs(totals.T))
    strength = 0.5 * plain.charge**2 @ molality / answers.ionic_strength - 1
    there, most = answers.solid > 0, upper.T
    full = there & (answers.solid >= most)
    wrong = {
        "absent, yet supersaturated (ln)": np.where(~there & (most > 0), saturation, 0),
        "full, yet undersaturated (ln)": np.where(full, -saturation, 0),
        "present, yet not saturated (ln)": np.where(there & ~full, np.abs(saturation), 0),
    }
    checks = {
        "mass balance": (balance.max(axis=0), WITHIN),
        **{name: (value.clip(0).max(axis=0), LN_SLACK) for name, value in wrong.items()},
        "negative amount": (np.maximum(-answers.solid, 0).max(axis=0), 0.0),
        "above its bound": (np.maximum(answers.solid - most, 0).max(axis=0), 0.0),
        "ionic strength": (np.abs(strength), STRENGTH_SLACK),
    }
    good = True
    for name, (value, limit) in checks.items():
        broken = found & (value > limit)
        worst = int(np.nanargmax(np.where(found, value, -1)))
        good = good and not broken.any()
        print(f"{name}: {broken.sum()} above {limit:g}, worst {value[worst]:.1e} in water {worst}")
    steps = answers.steps[found]
    middle, late = np.quantile(steps, [0.5, 0.99])
    print(f"Newton steps: median {middle:.0f}, 99 % {late:.0f}, most {steps.max()}")
    present = enumerate(np.bincount(there[:, found].sum(axis=0)))
    print("minerals present: " + ", ".join(f"{count} waters have {k}" for k, count in present if count))
    ph = -answers.ln_activity[0, found] / np.log(10)
    print("pH: " + ", ".join(f"{q:g} % {np.quantile(ph, q / 100):.2f}" for q in (0, 1, 10, 50, 90, 99, 100)))
    return bool(good)


def hardest(
    plain: PlainSystem, law: LnGamma, totals: np.ndarray, answers: Answers, found: np.ndarray
) -> np.ndarray:
    """Waters by falling ratio of the largest total to what is dissolved of the scarcest component."""
    dissolved = np.abs(plain.formation).T @ molalities(plain, law, answers)
    ratio = np.where(found, np.abs(totals).max(axis=1) / dissolved.min(axis=0), 0)
    return np.argsort(-ratio, kind="stable")[: found.sum()]


def report_hardest(
    plain: PlainSystem,
    law: LnGamma,
    totals: np.ndarray,
    upper: np.ndarray,
    answers: Answers,
    waters: np.ndarray,
) -> None:
    """Print how far these answers are from 60 digits."""
    errors, amounts = [], []
    for water in waters.tolist():
        try:
            exact = settle(
                plain,
                totals[water],
                answers.ln_activity[:, water],
                answers.solid[:, water],
                answers.presence[:, water],
                upper[water],
                ln_gamma=law,
            )
        except NoAnswer as failure:
            print(f"water {water}: the oracle gave up: {failure}")
            continue
        if exact.changes:
            print(f"water {water}: wrong minerals: {'; '.join(exact.changes)}")
        errors.append((exact.error, water))
        amounts.append((exact.amount_error, water))
    if errors:
        (error, water), (amount, other) = max(errors), max(amounts)
        middle = np.median([e for e, _ in errors])
        print(f"{len(errors)} hardest at 60 digits: ln activity off by {error:.1e} in water {water},")
        print(f"  median {middle:.1e}; amounts off by {amount:.1e} of the largest total in water {other}")


if __name__ == "__main__":
    sys.exit(main())
