"""Three tracers that decay one into the next and sorb unlike each other, against exact solutions.

R_i C_i,t = D C_i,xx - v C_i,x - R_i lambda_i C_i + R_(i-1) lambda_(i-1) C_(i-1), no end: van Genuchten (1985)
Comput. Geosci. 11, 129-147; Sun, Petersen & Clement (1999) J. Contam. Hydrol. 35, 429-440. The numbers by two
inversions of the Laplace transform and, for equal R, by Sun's closed form, with 19 digits.
"""

from __future__ import annotations

import pytest
from tests.support.tracer_columns import Solute, profiles

RATES = (0.3, 0.15, 0.05)  # 1/d
PLACES = (0.5, 1.0, 2.0, 3.0, 4.0)


@pytest.mark.parametrize(
    ("inlet", "retardations", "demand", "table"),
    [
        ("flux", (2.0, 1.5, 3.0), 2.3e-4,
         ((0.7123586536482713, 0.2624462784975698, 0.02353471653732662),
          (0.5358228515581546, 0.397429532561759, 0.05823286978360408),
          (0.2918795657370401, 0.5033270728435898, 0.1103689308229409),
          (0.1152071544287498, 0.4007208913715712, 0.07374967567413994),
          (0.01881136780094033, 0.1651561196302791, 0.01938741164239655))),
        ("concentration", (1.0, 1.0, 1.0), 1.4e-4,
         ((0.8643726307937823, 0.1287698439722972, 0.006749582001454992),
          (0.7471399535519434, 0.2309008071719636, 0.02143282561815175),
          (0.5582090985147832, 0.3716593299784066, 0.06716733007701228),
          (0.4167817777398949, 0.4485864699333181, 0.1247830298685348),
          (0.3079340885044117, 0.4719742009280631, 0.1794381063453295))),
    ],
)  # fmt: skip
def test_a_chain(inlet, retardations, demand, table):
    """After 6 d: 300 cells of 5 cm at Courant 1/4."""
    solutes = [
        Solute(name, entering, rate=rate, parent=parent, retardation=r)
        for name, entering, rate, parent, r in zip(
            "abc", (1.0, 0.0, 0.0), RATES, ("", "a", "b"), retardations, strict=True
        )
    ]  # fmt: skip
    found = profiles(solutes, velocity=1.0, dispersivity=0.1, length=15.0, cells=300, days=6.0, inlet=inlet,
                     courant=0.25)
    for x, values in zip(PLACES, table, strict=True):
        for name, value in zip("abc", values, strict=True):
            assert found.at(x, 6.0, name) == pytest.approx(value, abs=demand)
