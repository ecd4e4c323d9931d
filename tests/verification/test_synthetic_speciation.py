"""A synthetic system of twelve species, published to try solvers: its waters, and its tracer in a column.

Components X1 to X4 in the water, S and its species CS1 and CS2 on the solid, ideal activities, constants over
47 decades; C5 = X2^4 X3^3 X4 with a constant of 1e35 takes all there is wherever X3 meets X4. Real ions stand
for the components in a user's file of constants: H^+ for X2 (C1 = X2^-1 is OH^-, with another constant of
water), Na^+, K^+ and NO3^- for X3, X4 and S; X1, which takes part in nothing, is a tracer.

The program holds no species fixed to the solid yet: the equilibria are those of a closed vessel, in which S
is a component like any other, and the reactive column of the benchmark waits. What its tracer does is here.

The initial values of medium A to four digits are recalled of the source; all further digits are a Newton
iteration to 30 digits on its table, apart from this program.

Citations
  carrayrou2010 Carrayrou, Kern & Knabner (2010), Comput. Geosci. 14, 385-392: the table of the
                easy case in one dimension, from memory
"""

from __future__ import annotations

from pathlib import Path

import mpmath as mp
import numpy as np
import pytest
from tests.support.agreement import Check, Within
from tests.support.columns import walk

from gossan.chemistry.equilibrium import Equilibrium, equilibrate
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table

# Published name, name here, exponents of X2, X3, X4 and S, log10 K
TABLE = (
    ("C1", "OH^-", (-1, 0, 0, 0), -12),
    ("C2", "NaH^2+", (1, 1, 0, 0), 0),
    ("C3", "KOH", (-1, 0, 1, 0), 0),
    ("C4", "NaK3(OH)4", (-4, 1, 3, 0), -1),
    ("C5", "H4Na3K^8+", (4, 3, 1, 0), 35),
    ("CS1", "H3NaNO3^3+", (3, 1, 0, 1), 6),
    ("CS2", "K(OH)3(NO3)2^4-", (-3, 0, 1, 2), -1),
)
STAND_INS = ("H^+", "Na^+", "K^+", "NO3^-")  # for X2, X3, X4 and S
MEDIUM_A, MEDIUM_B = (-2.0, 0.0, 2.0, 1.0), (-2.0, 0.0, 2.0, 10.0)
FEED = (0.3, 0.3, 0.0, 0.0)
PRINTED = 1e-8  # eight digits and more
ROUND_OFF = 1e-9
PUBLISHED = {  # totals, then mol per kg of water of X2, X4, S, C1, C3, CS2 or X2, X3, C2
    "medium A": (MEDIUM_A, {"H^+": 0.2597184133, "K^+": 0.3495378686, "NO3^-": 0.3907437181,
                            "OH^-": 3.850323846e-12, "KOH": 1.345833990, "K(OH)3(NO3)2^4-": 0.3046281409}),
    "medium B": (MEDIUM_B, {"H^+": 1.511550201, "K^+": 0.5756110039, "NO3^-": 7.912838795,
                            "KOH": 0.3808083937, "K(OH)3(NO3)2^4-": 1.043580602}),
    "inflow": (FEED, {"H^+": 0.241619848713, "Na^+": 0.241619848709, "NaH^2+": 0.058380151}),
}  # fmt: skip
RECALLED = {"H^+": 0.2597, "K^+": 0.3495, "KOH": 1.346, "K(OH)3(NO3)2^4-": 0.3046}  # of medium A
PRINTED = 1e-8  # eight digits and more


def count(number: int, name: str) -> str:
    """A term of a reaction."""
    return name if number == 1 else f"{number} {name}"


def entry(name: str, powers: tuple[int, ...], log10_k: int) -> str:
    """A species as a user would state it: less X2 than nothing is water that has lost its hydrogen."""
    used = [count(n, ion) for n, ion in zip(powers, STAND_INS, strict=True) if n > 0]
    freed = [name]
    if powers[0] < 0:
        used.append(count(-powers[0], "H2O"))
        freed.append(count(-powers[0], "H^+"))
    return f"""
[species."{name}"]
reaction = "{" + ".join(used)} = {" + ".join(freed)}"
log10_k = {{value = {float(log10_k)!r}, sd = 0.1, source = "carrayrou2010"}}
"""


def speciated(*waters: tuple[float, ...]) -> Equilibrium:
    """The equilibrium of totals of X2, X3, X4 and S, each a cell."""
    source = '[sources]\ncarrayrou2010 = "Carrayrou, Kern & Knabner (2010), Comput. Geosci. 14, 385-392"\n'
    text = source + "".join(entry(*row[1:]) for row in TABLE)
    system = build_system(load_table(Path("site.toml"), text), STAND_INS, activity="ideal")
    assert system.species == (*STAND_INS, *(row[1] for row in TABLE))
    return equilibrate(system, np.array(waters).T)


def molality(totals: tuple[float, ...], species: str) -> float:
    """mol per kg of water of one species."""
    found = speciated(totals)
    return float(found.molality()[found.system.species.index(species), 0])


def check(water: str, species: str, value: float, share: float, why: str, more: str = "") -> Check:
    """A comparison of one species of one water."""
    names = dict(zip(STAND_INS, ("X2", "X3", "X4", "S"), strict=True)) | {row[1]: row[0] for row in TABLE}
    name = f"{names[species]} of {'the inflow' if water == 'inflow' else water}{more}"
    totals = PUBLISHED[water][0]
    return Check(
        name, lambda: molality(totals, species), Within(value, share=share), "carrayrou2010", False, why
    )


CHECKS = [
    *(
        check("medium A", name, value, 2e-4, "four printed digits", ", as recalled")
        for name, value in RECALLED.items()
    ),
    *(
        check(water, name, value, PRINTED, "solved apart to eight digits and more")
        for water, (_, held) in PUBLISHED.items()
        for name, value in held.items()
    ),
]


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_agrees(check):
    check.judge()


def test_waters_that_mix_on_the_solid():
    """Where the inflow meets either medium C5 takes all; a Newton iteration to 30 digits says how much.

    It begins at the program's answer and moves nothing: all totals and constants hold to round-off.
    """
    shares = (0.001, 0.1, 0.5, 0.9, 0.999)
    waters = [
        tuple(share * fed + (1 - share) * held for fed, held in zip(FEED, medium, strict=True))
        for medium in (MEDIUM_A, MEDIUM_B)
        for share in shares
    ]
    found = speciated(*waters)
    powers = np.vstack([np.eye(4, dtype=int), [row[2] for row in TABLE]])
    log10_k = [0] * 4 + [row[3] for row in TABLE]
    with mp.workdps(30):
        for i, totals in enumerate(waters):
            start = [mp.mpf(float(value)) for value in found.ln_activity[:, i]]

            def missing(*ln: mp.mpf, totals: tuple[float, ...] = totals) -> list[mp.mpf]:
                held = [
                    mp.mpf(10) ** k * mp.exp(mp.fdot(map(int, row), ln))
                    for row, k in zip(powers, log10_k, strict=True)
                ]
                return [
                    mp.fdot(map(int, powers[:, j]), held) - mp.mpf(totals[j]) for j in range(len(STAND_INS))
                ]

            exact = mp.findroot(missing, start, tol=mp.mpf(10) ** -50)
            off = max(abs(float(a - b)) for a, b in zip(exact, start, strict=True))
            assert off < ROUND_OFF, (totals, off)
    in_c5 = 3 * found.molality()[found.system.species.index("H4Na3K^8+")] / np.array(waters)[:, 1]
    assert in_c5.max() > 0.999  # of all X3


LAYER = """
[[layers]]
name = "{name}"
length = "{length} m"
cells = {cells}
porosity = {porosity}
dispersivity = "{dispersivity} m"
diffusion = "0 m2/s"
water = "pore"
"""


def test_the_tracer_of_the_column():
    """X1 needs 2.0/0.022 + 0.1/0.011 = 100 units of time (hours here) to cross media A, B and A."""
    a, b = {"porosity": 0.25, "dispersivity": 0.01}, {"porosity": 0.5, "dispersivity": 0.06}
    text = '[waters.feed.tracers]\nX1 = "0.3 mol/m3"\n[waters.pore]\n'
    for name, length, cells, medium in (("A", 1.0, 25, a), ("B", 0.1, 2, b), ("A again", 1.0, 25, a)):
        text += LAYER.format(name=name, length=length, cells=cells, **medium)
    text += (
        '[flow]\ndarcy_flux = "5.5e-3 m/h"\nfeed = [{from = "0 h", water = "feed"}]\n'
        '[run]\nduration = "200 h"\nports_every = "2 h"\nprofiles_every = "40 h"\n'
    )
    run = walk(text)
    left = run.left("X1") / (5.5e-3 * 0.3)  # hours of inflow
    assert 200.0 - left[-1] == pytest.approx(100.0, rel=1e-6)  # the mean of all times of arrival
    early = run.dissolved("X1", run.frames[1]) / 0.3  # after 40 h the front has met no other layer
    middle = np.interp(-0.5, -early, run.problem.grid.centres)
    assert middle == pytest.approx(0.022 * 40, abs=0.02)  # half a cell
    outlet = run.outflow("X1") / 0.3
    half = 2 + 2 * int(np.argmax(outlet[1:] > 0.5))
    assert half == pytest.approx(100.0, abs=2.0)  # dispersion makes the curve lean by a dispersivity or two
