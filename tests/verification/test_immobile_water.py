"""Flowing and immobile water side by side, against exact solutions at eight digits.

th_m R_m Cm_t + th_im R_im Cim_t = th_m (D Cm_xx - v Cm_x), th_im R_im Cim_t = alpha (Cm - Cim), held flux, no
end: van Genuchten & Wierenga (1976) Soil Sci. Soc. Am. J. 40, 473-480. The numbers by two inversions of its
Laplace transform and, at 1 m, by quadrature, all with 20 digits. Held within 2.6e-4 at 5 cm and Courant 1/2.
"""

from __future__ import annotations

import pytest
from tests.support.tracer_columns import GRAIN_DENSITY, Profiles, Solute, profiles

PLACES = (0.25, 0.5, 1.0, 1.5, 2.0, 3.0)


def column(days: float, immobile: str, solute: Solute) -> Profiles:
    """0.3 flowing and 0.1 immobile of the bulk, 1 m/d in the flowing pores."""
    return profiles([solute], velocity=0.75, dispersivity=0.1, length=12.0, cells=240, days=days,
                    porosity=0.4, immobile=f"[layers.immobile]\nfraction = 0.25\n{immobile}\n")  # fmt: skip


def hold(found: Profiles, days: float, flowing: tuple[float, ...], immobile: tuple[float, ...]) -> None:
    for x, here, beside in zip(PLACES, flowing, immobile, strict=True):
        assert found.at(x, days) == pytest.approx(here, abs=2.6e-4)
        assert found.at(x, days, still=True) == pytest.approx(beside, abs=2.6e-4)


def test_a_tracer():
    hold(column(2.0, 'transfer = "0.2 1/d"', Solute()), 2.0,
         (0.977162999415323, 0.9406615199650434, 0.79248731363908, 0.5478458539204016, 0.2833958387521878,
          0.022611230308253),
         (0.9141565366437863, 0.835337306542494, 0.604929491383714, 0.3402546298105626, 0.1380684178599286,
          0.006590886854702573))  # fmt: skip


def test_a_tracer_that_sorbs_differently_beside_each():
    """R_m = 2, R_im = 3: the immobile water reaches 0.4 of the solid."""
    kd = 0.5 / (GRAIN_DENSITY * 0.6)
    law = f'law = "linear"\nkd = "{kd!r} m3/kg"'
    hold(column(4.0, 'transfer = "0.05 1/d"\nsolids = 0.4', Solute(isotherm=law)), 4.0,
         (0.9635567748592452, 0.9311762713080065, 0.8334222748491864, 0.6532654919565624, 0.3933241965132502,
          0.04045327564451601),
         (0.4043023449482518, 0.3444664935053394, 0.22627820403232, 0.122168637045258, 0.04956727256313085,
          0.002483766111520757))  # fmt: skip
