"""A bed that clogs evenly, against closed forms.

Under held flux the pores lose 1e-3 a day and the loss of head grows as K0/K. Under held head the load that
clogs comes with the flux, phi' = -b K/K0, so a cubic law never closes:
phi = phi0 (1 + 2 b t/phi0)^(-1/2); under Kozeny-Carman the time to reach phi is the integral of K0/K, with
F(s) = -1/(2 s^2) + 2/s + ln s:  t = phi0^3/(1 - phi0)^2 (F(phi0) - F(phi))/b; under bodies and throats (Verma
& Pruess 1988, closing at a fifth of phi0, 0.8 of the way bodies) it is a quadrature of the same kind.
The formulas are derived from the laws; the laws, Kozeny (1927) and Carman (1937) among them, from memory.
Tabulated numbers computed with 38 digits.
"""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from gossan.transport.clogging import Clogging, conductivity_left
from gossan.transport.flow import flow_of_flux, flow_of_head

INITIAL, RATE = 0.35, 1e-3  # 1; 1/d
CELLS = 10
WIDTH, STILL, ONE_LAYER = np.full(CELLS, 0.1), np.zeros(CELLS + 1), np.zeros(CELLS, dtype=int)
CLEAN = 1e-4  # m/s


def conductivity(porosity, clogging):
    """Of every cell, all alike."""
    start = np.full(CELLS, INITIAL)
    return CLEAN * conductivity_left([clogging], ONE_LAYER, np.full(CELLS, porosity), start)


@pytest.mark.parametrize(
    ("days", "by_kozeny_carman", "by_cube"),
    [(87.5, 3.051501205347359, 2.37037037037037), (175.0, 12.88757396449704, 8.0),
     (262.5, 126.1301775147929, 64.0), (315.0, 2204.082840236686, 1000.0)],
)
def test_head_loss_under_held_flux(days, by_kozeny_carman, by_cube):
    _, clean = flow_of_flux(1e-6, np.full(CELLS, CLEAN), WIDTH, STILL)
    for clogging, ratio in ((Clogging(), by_kozeny_carman), (Clogging("power", 3.0), by_cube)):
        _, head = flow_of_flux(1e-6, conductivity(INITIAL - RATE * days, clogging), WIDTH, STILL)
        assert head[0] / clean[0] == pytest.approx(ratio, rel=1e-12)


def share_of_flux(porosity, clogging):
    """The flux under held head, over that of the clean bed."""
    flux, _ = flow_of_head(1.0, conductivity(porosity, clogging), WIDTH, STILL)
    return flux[0] / CLEAN


def closing(clogging, days):
    """The porosity after so many days, by stepping phi' = -b q/q0."""
    run = solve_ivp(lambda t, p: [-RATE * share_of_flux(p[0], clogging)], (0.0, days[-1]), [INITIAL],
                    t_eval=days, rtol=1e-9, atol=1e-12)
    return run.y[0]


def test_cube_under_held_head_never_closes():
    table = np.array([(50.0, 0.3086709862908689, 0.6859355250908198),
                      (100.0, 0.279203412326113, 0.50764256786566),
                      (200.0, 0.2390955178723906, 0.3187940238298542),
                      (500.0, 0.1782112770260604, 0.1320083533526374),
                      (1000.0, 0.135072872372893, 0.05747781803101828),
                      (5000.0, 0.06436234984285989, 0.006218584525880182)])
    law = Clogging("power", 3.0)
    assert closing(law, table[:, 0]) == pytest.approx(table[:, 1], rel=1e-7)
    for _, porosity, share in table:
        assert share_of_flux(porosity, law) == pytest.approx(share, rel=1e-12)


# days to a porosity, and the share of the flux that is left there
KOZENY_CARMAN = [(68.56880830462677, 0.3, 0.5429880406973285), (199.8254370299042, 0.25, 0.2737285390346615),
                 (476.168111024216, 0.2, 0.1231778425655977), (1153.701791420621, 0.15, 0.04603185812139982),
                 (3337.188668104707, 0.1, 0.01216571284598495)]  # fmt: skip
TUBES = [(58.77574770433708, 0.3, 0.7232798897584959), (142.8534974960926, 0.25, 0.4883621810522867),
         (274.4081621567793, 0.2, 0.2948115866983626), (517.4316132647343, 0.15, 0.1417987010255035),
         (1248.928908575993, 0.1, 0.03024795361298442)]  # fmt: skip


@pytest.mark.parametrize(
    ("law", "table"),
    [(Clogging(), KOZENY_CARMAN),
     (Clogging("threshold", critical_porosity=0.2 * INITIAL, pore_bodies=0.8), TUBES)],
    ids=["Kozeny-Carman", "bodies and throats"],
)  # fmt: skip
def test_other_laws_under_held_head(law, table):
    rows = np.array(table)
    assert closing(law, rows[:, 0]) == pytest.approx(rows[:, 1], rel=1e-7)
    for _, porosity, share in table:
        assert share_of_flux(porosity, law) == pytest.approx(share, rel=1e-12)
