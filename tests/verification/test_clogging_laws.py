"""What conductivity a clogging bed keeps, by each law, against numbers worked out from their sources.

The laws are recalled, so the numbers say that the formulas are those of their sources as recalled, not that
beds follow them: cemented sands follow powers of 3 to 8 and more (Bernabe et al.).

Citations
  kc           Kozeny (1927); Carman (1937), Trans. Inst. Chem. Eng. 15, 150-166
  hommel2018   Hommel, Coltman & Class (2018), Transp. Porous Med. 124, 589-629
  bernabe2003  Bernabe, Mok & Evans (2003), Pure Appl. Geophys. 160, 937-960
  verma1988    Verma & Pruess (1988), J. Geophys. Res. 93, 1159-1173
"""

import numpy as np
import pytest
from tests.support.agreement import Check, Within

from gossan.transport.clogging import Clogging, conductivity_left

ROUNDED = "worked out by hand from the formula, to three figures"
HALF_OPEN = "throats half open: (0.9 - 0.8) / (1 - 0.8)"


def left(law: Clogging, porosity: float, initial: float) -> float:
    return float(conductivity_left([law], np.zeros(1, int), np.array([porosity]), np.array([initial]))[0])


TUBES = Clogging("threshold", critical_porosity=0.8 * 0.4, pore_bodies=0.8)

CHECKS = [
    Check("Kozeny-Carman, porosity 0.40 to 0.30", lambda: left(Clogging(), 0.30, 0.40),
          Within(0.31, share=0.01), "kc", False, ROUNDED),
    Check("Third power, 0.40 to 0.30", lambda: left(Clogging("power", 3.0), 0.30, 0.40),
          Within(0.422, share=0.01), "hommel2018", False, ROUNDED),
    Check("Eighth power, of cement, 0.40 to 0.30", lambda: left(Clogging("power", 8.0), 0.30, 0.40),
          Within(0.100, share=0.01), "bernabe2003", False, ROUNDED),
    Check("Critical porosity 0.8 of the first, a = 2, at 0.9 of the first",
          lambda: left(Clogging("threshold", 2.0, 0.8 * 0.4), 0.9 * 0.4, 0.4),
          Within(0.25, share=1e-3), "verma1988", False, HALF_OPEN),
    Check("Bodies and throats, closing at 0.8 of the first, 0.8 of the way bodies, at 0.9 of the first",
          lambda: left(TUBES, 0.9 * 0.4, 0.4), Within(0.269, share=0.01), "verma1988", False, ROUNDED),
    Check("Bodies and throats, clean", lambda: left(TUBES, 0.4, 0.4), Within(1.0, share=1e-4),
          "verma1988", False, "the definition"),
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_values(check):
    check.judge()


@pytest.mark.parametrize(
    ("porosity", "kozeny", "tubes"),
    [(0.30, 0.5429880406973285, 0.7232798897584959), (0.25, 0.2737285390346615, 0.4883621810522867),
     (0.20, 0.1231778425655977, 0.2948115866983626), (0.15, 0.04603185812139982, 0.1417987010255035),
     (0.10, 0.01216571284598495, 0.03024795361298442)],
)
def test_table_worked_out_with_38_digits(porosity, kozeny, tubes):
    """From 0.35, Kozeny-Carman; bodies and throats closing at a fifth of that, 0.8 of the way bodies."""
    narrow = Clogging("threshold", critical_porosity=0.2 * 0.35, pore_bodies=0.8)
    assert left(Clogging(), porosity, 0.35) == pytest.approx(kozeny, rel=1e-13)
    assert left(narrow, porosity, 0.35) == pytest.approx(tubes, rel=1e-13)
