"""Beds that precipitate closes along the way of the water, and waves of closing and opening pores.

The solute that precipitates is quasi-steady, c = dC exp(-k x / q), and takes V k c of the bulk a second:
n(x, t) = n0 - V k dC exp(-k x/q) t, K = K0 (n/n0)^3. Under a held flux the loss of head is a closed form of
x; under a held head q follows q = H / int dx/K. Derived for this; cf. Herzig, Leclerc & Le Goff (1970), Ind.
Eng. Chem. 62 (5), 8-35 (from memory). Numbers with 38 digits, and 9 where q changes, by two quadratures.
"""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.bed_march import ClosingBed
from tests.support.orders import observed_order

from gossan.base.units import DAY
from gossan.transport.clogging import Clogging
from gossan.transport.grid import Layer, grid_of

DEMAND = 0.005
POROSITY, DECAY = 0.35, 0.5  # 1; 1/d per bulk
VOLUME, EXCESS = 1e-4, 35.0  # m3/mol; mol m-3 above what stays dissolved
FLUX, LENGTH = 0.1, 1.0  # m/d, m
A_DAY = float(DAY)  # s


def bed(clean: float, drive: tuple[str, float], cells: int = 200, growth: float = 1.0) -> ClosingBed:
    """clean m/d; growth: of each cell over the one before."""
    grid = grid_of([Layer("bed", LENGTH, cells, 0.0, 0.0, growth=growth)])

    def rate(flux: float) -> np.ndarray:
        """What the water loses in a cell is what the cell gains: the mean of the exact rate."""
        entering = EXCESS * np.exp(-DECAY / A_DAY * grid.edges / flux)
        return VOLUME * flux * (entering[:-1] - entering[1:]) / grid.width

    porosity = np.full(cells, POROSITY)
    return ClosingBed(grid, porosity, clean / A_DAY, Clogging("power", 3.0), drive, rate)


@pytest.mark.parametrize(("growth", "last"), [(1.0, 150.0), (1.02, 190.0)])
def test_head_loss_under_a_held_flux(growth, last):
    """The inlet closes at 200 d: shortly before, it needs short cells there."""
    column = bed(1.0, ("flux", FLUX / A_DAY), growth=growth)
    table = [(50.0, 0.1200968461195039, 0.2625), (100.0, 0.1636601216433957, 0.175),
             (150.0, 0.3374211387071162, 0.0875), (190.0, 4.529528106474248, 0.0175)]
    for days, loss, at_inlet in table:
        if days > last:
            break
        _, found = column.run_to(days * A_DAY, 10.0 * A_DAY)
        assert found == pytest.approx(loss, rel=DEMAND)
        slope = (column.porosity[1] - column.porosity[0]) / (column.grid.width[0] + column.grid.width[1])
        assert column.porosity[0] - slope * column.grid.width[0] == pytest.approx(at_inlet, rel=DEMAND)


DECLINE = [(20.0, 0.0939492634498), (50.0, 0.0843331491507), (100.0, 0.0652859369988),
           (150.0, 0.0373850020334), (180.0, 0.0130771522079)]  # fmt: skip


@pytest.mark.parametrize(("growth", "last"), [(1.0, 150.0), (1.02, 180.0)])
def test_flux_under_a_held_head(growth, last):
    """As many cells, the last day with short ones where the slower water leaves its load."""
    column = bed(0.1, ("head", 1.0), growth=growth)
    for days, flux in DECLINE:
        if days > last:
            break
        found, _ = column.run_to(days * A_DAY, 1.0 * A_DAY)
        assert found * A_DAY == pytest.approx(flux, rel=DEMAND)


def test_a_held_head_is_of_second_order_in_the_cells():
    """Against the exact flux, time steps being a tenth of what would show."""
    cells, errors = [25, 50, 100], []
    for count in cells:
        column = bed(0.1, ("head", 1.0), count)
        found, _ = column.run_to(100.0 * A_DAY, 0.5 * A_DAY)
        errors.append(abs(found * A_DAY / DECLINE[2][1] - 1.0))
    assert observed_order(cells, errors) == pytest.approx(2.0, abs=0.1)
    assert errors[-1] < 5e-4
