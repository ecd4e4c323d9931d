"""Columns of one tracer that sorbs linearly and decays everywhere, against exact solutions at eight digits.

R C_t = D C_xx - v C_x - R lambda C. Sources of the solutions: van Genuchten & Alves (1982) USDA Tech. Bull.
1661 (no end, held concentration and held flux; finite column, zero gradient at its end; a pulse); Danckwerts
(1953) Chem. Eng. Sci. 2, 1-13 (steady state); Lapidus & Amundson (1952) J. Phys. Chem. 56, 984-988
(flux-averaged breakthrough). Tabulated numbers computed from these forms with 38 digits, each by two routes.
The breakthrough and removal tables have six decimals, and so many are compared.

The cases are stated as a user would: porosity, kd, half-life. The accuracies demanded hold at the stated
cells and Courant numbers.
"""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import case_of
from tests.support.tracer_columns import Profiles, Solute, profiles, tracer_column

import gossan

HALFWAY = (0.1, 0.3, 0.5, 0.7, 0.9)


def largest_error(found: Profiles, points: list[tuple[float, float, float]], length: float) -> float:
    """Over points (x m, t d, C), those at the end read from what leaves."""
    return max(
        abs((found.at(x, days) if x < length else found.outlet(days)) - value) for x, days, value in points
    )


@pytest.mark.parametrize(
    ("inlet", "courant", "values", "demand"),
    [
        ("concentration", 0.1, (0.7527258410832715, 0.4171695176897544, 0.1703585080153494,
                                0.02496874009104424, 0.0007483326196568197), 2.8e-4),
        ("flux", 0.5, (0.7121330349458022, 0.3906870577899186, 0.1497303503445458, 0.01953564250534724,
                       0.0005153067509160508), 1.1e-4),
    ],
)  # fmt: skip
def test_a_front_that_is_held_back_and_decays(inlet, courant, values, demand):
    """R = 3, 0.05 1/d, no end."""
    found = profiles([Solute(rate=0.05, retardation=3.0)], velocity=0.5, dispersivity=0.2, length=20.0,
                     cells=200, days=30.0, inlet=inlet, courant=courant)  # fmt: skip
    points = [(x, 30.0, value) for x, value in zip((1.0, 3.0, 5.0, 7.0, 9.0), values, strict=True)]
    assert largest_error(found, points, 20.0) <= demand


@pytest.mark.parametrize(
    ("inlet", "courant", "profile", "outlet", "demand"),
    [
        ("flux", 0.5, (0.9078999867811136, 0.7517089921118167, 0.5150569230128943, 0.249551714560215,
                       0.07618388435498896),
         (0.145239200148734, 0.3507296598235725, 0.5333217105311675), 1.4e-4),
        ("concentration", 0.1, (0.9402614441788794, 0.8000200231288898, 0.5828608195213733,
                                0.3084064671685345, 0.1040220170209192),
         (0.1840068851328228, 0.3961961839644378, 0.5560755427051091), 3.4e-4),
    ],
)  # fmt: skip
def test_a_finite_column(inlet, courant, profile, outlet, demand):
    """R = 2, 0.3 1/d, zero gradient at 1 m."""
    found = profiles([Solute(rate=0.3, retardation=2.0)], velocity=1.0, dispersivity=0.05, length=1.0,
                     cells=100, days=3.0, every=0.1, inlet=inlet, courant=courant)  # fmt: skip
    points = [(x, 1.2, value) for x, value in zip(HALFWAY, profile, strict=True)]
    points += [(1.0, days, value) for days, value in zip((1.5, 2.0, 3.0), outlet, strict=True)]
    assert largest_error(found, points, 1.0) <= demand


def test_a_pulse():
    """3 d of feed, then water without; R = 2, 0.1 1/d, held concentration."""
    found = profiles([Solute(rate=0.1, retardation=2.0)], velocity=0.5, dispersivity=0.2, length=12.0,
                     cells=200, days=12.0, inlet="concentration", courant=0.1, pulse=3.0)  # fmt: skip
    values = (0.002538806353372566, 0.01220595780112711, 0.06748824396021696, 0.1074091682801751,
              0.06111152835716086)  # fmt: skip
    points = [(x, 12.0, value) for x, value in zip((0.5, 1.0, 2.0, 3.0, 4.0), values, strict=True)]
    assert largest_error(found, points, 12.0) <= 2.5e-4


@pytest.mark.parametrize(
    ("inlet", "values"),
    [
        ("flux", (0.7627173398707442, 0.5287182048298704, 0.3665094432732603, 0.254083017294872,
                  0.1775055693195722)),
        ("concentration", (0.8325883333942554, 0.5771530106672345, 0.4000846324011114, 0.2773590488308179,
                           0.1937664956627662)),
    ],
)  # fmt: skip
def test_the_steady_state_of_decay(inlet, values):
    """2 1/d over a day's travel; also where dispersion is implicit, which at this Courant number it is."""
    found = profiles([Solute(rate=2.0)], velocity=1.0, dispersivity=0.05, length=1.0, cells=100, days=6.0,
                     inlet=inlet)
    points = [(x, 6.0, value) for x, value in zip(HALFWAY, values, strict=True)]
    assert largest_error(found, points, 1.0) <= 6.9e-5


TIMES = (0.5, 0.7, 0.8, 0.9, 1.0, 1.1, 1.2, 1.5, 2.0)  # pore volumes over R
BREAKTHROUGH = {
    10: (0.080067, 0.272290, 0.383376, 0.489679, 0.585289, 0.667700, 0.736625, 0.874525, 0.966220),
    40: (0.001063, 0.066400, 0.185221, 0.358054, 0.544065, 0.705284, 0.824338, 0.974214, 0.999498),
    100: (0.000000, 0.006725, 0.064916, 0.249262, 0.528070, 0.772247, 0.913797, 0.998480, 1.000000),
    400: (0.000000, 0.000000, 0.000877, 0.072650, 0.514087, 0.916904, 0.995589, 1.000000, 1.000000),
}


@pytest.mark.parametrize("peclet", BREAKTHROUGH)
def test_breakthrough_at_a_port_of_what_is_held_back_and_what_is_not(peclet, tmp_path):
    """Both R in one run, flux-averaged 1 m into a column so long that its end is not felt."""
    length = 4.0 if peclet == 10 else 2.0
    cells = int(length * (400 if peclet == 400 else 200))
    text = tracer_column(
        [Solute("free"), Solute("held", retardation=3.0)], velocity=1.0, dispersivity=1.0 / peclet,
        length=length, cells=cells, days=6.0, every=0.1, more='[[ports]]\nname = "here"\nat = "1 m"',
    )  # fmt: skip
    port = gossan.run(case_of(text), tmp_path / "column.h5").ports["here"]
    days, names = port.time.values / 86400.0, list(port.dissolved.coords["component"])
    for name, retardation in (("free", 1.0), ("held", 3.0)):
        found = port.dissolved.values[:, names.index(name)]
        for time, value in zip(TIMES, BREAKTHROUGH[peclet], strict=True):
            (record,) = np.flatnonzero(np.abs(days - time * retardation) < 1e-6)
            assert found[record] == pytest.approx(value, abs=2e-4), (name, time)


REMOVAL = (0.5, 1.0, 2.0, 3.0, 4.605, 6.908)  # k tau
REMAINS = {
    10: (0.619215, 0.397267, 0.177334, 0.0858801, 0.030302, 0.00816985),
    40: (0.61015, 0.376535, 0.147935, 0.0603371, 0.015311, 0.00242156),
    100: (0.608019, 0.371468, 0.140592, 0.0541591, 0.0121277, 0.00151721),
    400: (0.606908, 0.368793, 0.136679, 0.0509003, 0.0105324, 0.00112168),
}


@pytest.mark.parametrize("peclet", REMAINS)
def test_first_order_removal_at_steady_state(peclet):
    """Six half-lives in one run of 200 cells, zero-gradient outlet."""
    solutes = [Solute(f"k{i}", rate=rate) for i, rate in enumerate(REMOVAL)]
    found = profiles(solutes, velocity=1.0, dispersivity=1.0 / peclet, length=1.0, cells=200, days=4.0)
    for i, value in enumerate(REMAINS[peclet]):
        # the last cell stands for the outlet; the gradient between them ends in none
        assert found.outlet(4.0, f"k{i}") == pytest.approx(value, rel=6e-4), REMOVAL[i]
