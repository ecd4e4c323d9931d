"""Chemistry in both waters and beside isotherms: against brute force, and against what must hold."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from tests.support.columns import SATURATED, Walk, column, started, walk
from tests.support.salts import Salt, water, write_salts

from gossan.chemistry.equilibrium import mineral_saturation
from gossan.chemistry.isotherm import NO_ATOM, sorbed_at
from gossan.transport.faces import LIMITERS

FRACTION, SHARE, TRANSFER = 0.4, 0.25, 3e-7  # of pores, of solids, s-1
CELLS, DAY = 8, 86400.0


def salt_column(folder, immobile: str, **more) -> str:
    """Salt A B of product 1 mol2 m-6 in a bed that water without it enters."""
    return column(
        water("feed", Na=0.2, K=1.0, Cl=1.2) + water("pore", Na=1.0, K=0.5, Cl=1.5),
        minerals='salt = "1.5 mol/m3"', cells=CELLS, length="0.4 m", porosity=0.4, duration="6 d",
        chemistry=write_salts(folder, Salt("salt", "Na", 1.0)), layer=immobile, **more,
    )  # fmt: skip


def brute_force(flux: float, days: float, steps: int) -> tuple[np.ndarray, ...]:
    """The same cells by many tiny explicit upwind steps, salt settled by its quadratic after each.

    Returns sodium in flowing and immobile water (cell,), salt beside each (cell,) mol m-3 of bulk.
    """
    theta, width = np.array([[0.4 * (1.0 - FRACTION)], [0.4 * FRACTION]]), 0.4 / CELLS
    na, cl = np.full((2, CELLS), 1.0), np.full((2, CELLS), 1.5)
    salt = 1.5 * np.array([[1.0 - SHARE], [SHARE]]) * np.ones(CELLS)
    na, cl, salt = dissolved(na, cl, salt, theta)
    dt = days * DAY / steps
    for _ in range(steps):
        moved = []
        for ion, entering in ((na, 0.2), (cl, 1.2)):
            upstream = np.concatenate([[entering], ion[0, :-1]])
            exchange = TRANSFER * (ion[0] - ion[1])
            change = np.array([flux * (upstream - ion[0]) / width - exchange, exchange])
            moved.append(ion + dt * change / theta)
        na, cl, salt = dissolved(*moved, salt, theta)
    return na[0], na[1], salt[0], salt[1]


def dissolved(na, cl, salt, theta):
    """Salt goes in or out until Na Cl = 1 or there is none: the root of (na + y)(cl + y) = 1."""
    total = na + cl
    more = 0.5 * (-total + np.sqrt(total**2 - 4.0 * (na * cl - 1.0)))
    more = np.minimum(more, salt / theta)
    return na + more, cl + more, salt - theta * more


def test_immobile_water_with_a_mineral_against_brute_force(tmp_path):
    """Both at first order in the cell, so that only errors in time remain, and those of the extrapolation."""
    immobile = f"immobile = {{fraction = {FRACTION}, transfer = \"{TRANSFER} 1/s\", solids = {SHARE}}}"
    problem, _ = started(salt_column(tmp_path, immobile, run='max_courant = 0.02'), tmp_path)
    problem = replace(problem, transport=replace(problem.transport, limiter=LIMITERS["upwind"]))
    run = walk(problem)
    flux = 0.1 / DAY
    coarse, fine = (np.array(brute_force(flux, 6.0, steps)) for steps in (8000, 16000))
    exact = 2.0 * fine - coarse
    state, sodium = run.last, problem.solutes.index("Na^+")
    still = state.still
    found = np.array([state.dissolved[sodium], still.dissolved[sodium], state.solid[0], still.solid[0]])
    assert exact[2].min() == 0.0 < exact[2].max(), "salt is gone upstream"
    assert exact[3].max() > 0.05, "and still there in the dead corners"
    assert found == pytest.approx(exact, abs=1e-5)


def test_waters_apart_and_waters_mixed(tmp_path):
    """No transfer: the immobile water keeps its salt. An endless one: one water."""
    apart = walk(salt_column(tmp_path, f'immobile = {{fraction = {FRACTION}, transfer = "0 1/s"}}'), tmp_path)
    assert apart.last.still.solid == pytest.approx(apart.problem.initial.still.solid, rel=1e-12)
    mixed = walk(salt_column(tmp_path, f'immobile = {{fraction = {FRACTION}, transfer = "1 1/s"}}'), tmp_path)
    plain = walk(salt_column(tmp_path, "", run="max_courant = 0.3"), tmp_path)
    ours = mixed.problem.solid(mixed.last)[0] @ mixed.problem.grid.width
    assert ours == pytest.approx(plain.inventory("salt"), rel=0.02)


METALS = """
[waters.feed]
pH = 5.5
balance_on = "SO4"
analysis = {Zn = "2 mmol/L", Ca = "1 mmol/L", Na = "1 mmol/L", CO3 = "0.5 mmol/L"}
[waters.pore]
pH = 7.5
balance_on = "Cl"
analysis = {Na = "5 mmol/L", CO3 = "3 mmol/L"}
[waters.rinse]
pH = 4.0
balance_on = "Cl"
analysis = {Na = "5 mmol/L"}
"""
TWO = """sorption.Zn = {law = "freundlich", coefficient = "1 mmol/kg", exponent = 0.6}
sorption.Ca = {law = "langmuir", capacity = "1 mmol/kg", affinity = "1 L/mmol"}"""
BESIDE = """sorption.Zn = {law = "langmuir", capacity = "3 mmol/kg", affinity = "3 L/mmol"}
immobile = {fraction = 0.4, transfer = "2e-6 1/s"}"""


def metals(layer: str, coupling: str) -> Walk:
    return walk(
        column(
            METALS, minerals='calcite = "0.02 wt%"', forms='["calcite", "smithsonite", "gypsum"]', cells=8,
            layer=layer, dispersivity="5 cm", duration="8 PV",
            run=f'coupling = "{coupling}"\nports_every = "0.5 PV"',
            feed='{from = "0 d", water = "feed"}, {from = "4 PV", water = "rinse"}',
        )
    )  # fmt: skip


@pytest.mark.parametrize(("layer", "coupling"), [(TWO, "two-stage"), (BESIDE, "two-stage"), (BESIDE, "lie")])
def test_isotherm_and_minerals_agree_at_every_record(layer, coupling):
    """`walk` closes the books of zinc, charge and all else, what is sorbed and immobile counted."""
    run = metals(layer, coupling)
    problem = run.problem
    zinc = problem.solutes.index("Zn^2+")
    assert max(problem.sorbed(state)[list(problem.sorbates).index(zinc)].max() for state in run.records) > 1.0
    smithsonite = problem.system.minerals.index("smithsonite")
    assert max(problem.solid(state)[smithsonite].max() for state in run.records) > 0.1
    for state in run.records:
        for part, laws in ((state, problem.flowing_isotherms), (state.still, problem.still_isotherms)):
            if part is None:
                continue
            there = part.dissolved[problem.sorbates]
            known = there * part.water > NO_ATOM
            right = sorbed_at(laws, there)
            assert part.sorbed[known] == pytest.approx(right[known], rel=2e-11)
            index = mineral_saturation(problem.system, part.ln_activity)
            assert part.solid.min() >= 0.0
            assert np.nanmax(index) <= SATURATED
            assert np.abs(index[part.solid > 0.0]).max(initial=0.0) <= SATURATED
