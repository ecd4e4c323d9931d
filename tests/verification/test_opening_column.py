"""Columns under a held head whose pores open, or close, behind a sharp front, against their exact equation.

At x_f the porosity goes from p_0 ahead to p_1 behind, conductivity from K_0 to K_1, and m mol per m3 of bulk
react, which frees w m3 of water per mol. The front moves at s, water flows at q_1 behind and q_2 ahead of it:

    water      q_1 - q_2 + s m w = s (p_1 - p_0)         what enters and is freed fills the new pores
    solute     q_1 c_1 - q_2 c_2 = s (p_1 c_1 - p_0 c_2 - m n)     n mol of it in a mol that dissolves
    head       h = q_1 x_f / K_1 + q_2 (L - x_f) / K_0

Hence q_2 = r q_1 and s = g q_1 with constants r and g, and dx_f/dt = g h / (x_f/K_1 + r (L - x_f)/K_0), which
is integrated here to 1e-11. Salts are invented: soluble enough to be gone in some pore volumes, so large that
everything shows. In the program the front takes up one cell, which is an error of the first order in the
cell: two grids show that it is, and what they extrapolate to.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import solve_ivp
from tests.support.columns import Walk, column, walk
from tests.support.salts import Salt, water, write_salts

from gossan.constants.water import density

WATER = 0.018015 / density(298.15)  # m3 per mol
HEAD, LENGTH, CLEAN = 0.5, 1.0, 1e-4  # m, m, m/s
COARSE, FINE = 20, 40


def power(porosity: float, initial: float) -> float:
    return (porosity / initial) ** 3


def kozeny_carman(porosity: float, initial: float) -> float:
    return (porosity / initial) ** 3 * ((1.0 - initial) / (1.0 - porosity)) ** 2


LAWS = {'clogging = {law = "power", exponent = 3.0}': power, "": kozeny_carman}


@dataclass(frozen=True)
class Front:
    """A front: porosities and conductivity (law), s / q_1 = g and q_2 / q_1 = r."""

    ahead: float
    behind: float
    law: str
    g: float
    r: float

    def rate(self, x: float) -> float:
        """dx_f/dt, m/s."""
        opened = CLEAN * LAWS[self.law](self.behind, self.ahead)
        return self.g * HEAD / (x / opened + self.r * (LENGTH - x) / CLEAN)

    def at(self, times: np.ndarray) -> np.ndarray:
        """Where it is, m."""
        found = solve_ivp(
            lambda _, x: [self.rate(x[0])], (0.0, times[-1]), [0.0], "DOP853", times, rtol=1e-11, atol=1e-13
        )
        assert found.success
        return found.y[0]


def dissolving(volume: float, crystal: int, content: float, full: float, inflow: float, law: str) -> Front:
    """A salt that is gone behind the front: content m3 per m3 of bulk; full, inflow mol m-3 of water."""
    ahead, behind = 0.3, 0.3 + content
    m = content / volume
    swelling = volume - crystal * WATER
    g = (full - inflow) / (m * (1.0 + swelling * full) + ahead * full - behind * inflow)
    return Front(ahead, behind, law, g, 1.0 - g * m * swelling)


# volume of a mol, molecules of crystal water, mol m-3 that enter of 1000 that saturate, law
DISSOLVING = {
    "leaves room for water": (1e-4, 2, 0.0, 'clogging = {law = "power", exponent = 3.0}'),
    "frees more water than its room, into salty water": (1e-4, 8, 200.0, ""),
}


def opening(folder: Path, cells: int, volume: float, crystal: int, inflow: float, law: str) -> Walk:
    chemistry = write_salts(folder, Salt("large salt", "Na", 1000.0**2, 1e6 * volume, crystal))
    return walk(
        column(
            water("feed", Na=inflow, Cl=inflow) + water("pore", Na=1000.0, Cl=1000.0),
            minerals='"large salt" = "20 vol%"', porosity=0.3, cells=cells,
            layer=f'conductivity = "{CLEAN} m/s"\n{law}', flow=f'head_drop = "{HEAD} m"', duration="7 h",
            chemistry=chemistry, run='ports_every = "1 h"\nprofiles_every = "7 h"',
        ),
        folder,
    )  # fmt: skip


def passed(run: Walk, gate: int) -> np.ndarray:
    """(record,) m of water through the inlet (0) or the outlet (1), the start left out."""
    return np.array([state.water_passed[gate].sum() for state in run.records[1:]])


def hours(run: Walk) -> np.ndarray:
    return np.array([state.time for state in run.records[1:]])


def assert_as_exact(coarse: Walk, fine: Walk, exact: Front, gone: str, m: float) -> None:
    """Inflow, outflow and front of both grids, and what they extrapolate to."""
    front = exact.at(hours(fine))
    assert 0.3 < front[-1] < 0.9, "the test itself: the front must have come far, and not out"
    for gate, share in ((0, 1.0), (1, exact.r)):
        expected = share * front / exact.g
        rough, better = passed(coarse, gate) / expected - 1.0, passed(fine, gate) / expected - 1.0
        assert np.abs(rough).max() < 1.0 / COARSE  # one cell
        # what is left is of first order; where in its cell the front stands is worth a thousandth
        assert 2.0 * better[1:] - rough[1:] == pytest.approx(0.0, abs=2e-3)
        assert better[-1] == pytest.approx(0.5 * rough[-1], rel=0.1)
    for run in (coarse, fine):
        found = np.array([1.0 - run.inventory(gone, state) / m for state in run.records[1:]])
        assert found == pytest.approx(front, abs=0.6 / len(run.problem.grid.width))


@pytest.mark.parametrize("name", DISSOLVING)
def test_a_bed_opens_as_its_salt_dissolves(tmp_path, name):
    volume, crystal, inflow, law = DISSOLVING[name]
    exact = dissolving(volume, crystal, 0.2, 1000.0, inflow, law)
    runs = [opening(tmp_path, cells, volume, crystal, inflow, law) for cells in (COARSE, FINE)]
    assert_as_exact(*runs, exact, "large salt", 0.2 / volume)


def closing(folder: Path, cells: int) -> Walk:
    chemistry = write_salts(
        folder, Salt("small salt", "Na", 1.0, 50.0), Salt("large salt", "K", 1e-6, 120.0, 1)
    )
    return walk(
        column(
            water("feed", K=500.0, NO3=500.0) + water("pore", Na=1.0, Cl=1.0),
            minerals='"small salt" = "10 vol%"', porosity=0.4, cells=cells,
            layer=f'conductivity = "{CLEAN} m/s"', flow=f'head_drop = "{HEAD} m"', duration="40 h",
            chemistry=chemistry, run='ports_every = "4 h"\nprofiles_every = "40 h"',
        ),
        folder,
    )  # fmt: skip


def test_a_bed_closes_as_a_larger_salt_takes_the_place_of_a_smaller(tmp_path):
    """2000 mol per m3, mol for mol: the large salt takes 0.24 of the bulk where the small one took 0.10."""
    m, c, ahead, behind = 2000.0, 500.0, 0.4, 0.26
    g = c / (m + behind * c)
    exact = Front(ahead, behind, "", g, 1.0 - g * (behind - ahead) - g * m * WATER)
    runs = [closing(tmp_path, cells) for cells in (COARSE, FINE)]
    assert_as_exact(*runs, exact, "small salt", m)
