"""Oxygen consumed by pyrite, carried by water or by diffusion alone, against exact fronts.

FeS2 + 15/4 O2 + 7/2 H2O = Fe(OH)3 + 2 SO4^2- + 4 H^+, at equilibrium, which here is as good as at once: what
is left of the oxygen ahead of the front is 1e-58 mol m-3. Oxygen is a solute of its own and pyrite is stated
in terms of it, in a user's file of constants, so that every formula takes 15/4 whatever the pH. Iron stays
as ferrihydrite.

Citations
  lichtner1988  Lichtner (1988), Geochim. Cosmochim. Acta 52, 143-165 (from memory); the speed follows from a
                balance of oxygen
  carslaw1959   Carslaw & Jaeger (1959), Conduction of Heat in Solids, chapter XI (Neumann's solution)
"""

from __future__ import annotations

from math import sqrt
from pathlib import Path

import pytest
from tests.support.columns import Walk, column, walk

DAY = 86400.0
PYRITE, OXYGEN, POROSITY = 50.0, 0.25, 0.3  # mol m-3 of bulk, mol m-3 of water (8 mg/L), 1
CONSTANTS = """
[sources]
invented = "Invented for a test"
[minerals.pyrite]
reaction = "FeS2(s) + 3.75 O2 + 0.5 H2O = Fe^3+ + 2 SO4^2- + H^+"
log10_k = {value = 210.0, sd = 1.0, source = "invented"}
molar_volume = {value = 1e-6, source = "invented"}
forms = false
[minerals.ferrihydrite]
reaction = "Fe(OH)3(s) + 3 H^+ = Fe^3+ + 3 H2O"
log10_k = {value = 3.5, sd = 0.4, source = "invented"}
molar_volume = {value = 1e-6, source = "invented"}
forms = true
"""
LIE = 'coupling = "lie"'  # half the work; a front that balances alone drive stands where it stands under any


def oxidised(folder: Path, **bed: object) -> Walk:
    """A bed of pyrite that water with oxygen enters."""
    (folder / "site.toml").write_text(CONSTANTS, encoding="utf-8")
    waters = """
[waters.feed]
dissolved_oxygen = "0.25 mmol/L"
[waters.pore]
analysis = {Na = "0.2 mmol/L", SO4 = "0.1 mmol/L"}
"""
    return walk(
        column(
            waters, porosity=POROSITY, minerals='pyrite = "0.05 mol/L", ferrihydrite = "1e-6 mol/L"',
            chemistry='constants = "site.toml"\nactivity = "ideal"\nminerals = ["pyrite", "ferrihydrite"]',
            **bed,
        ),
        folder,
    )  # fmt: skip


def fronts(run: Walk) -> list[tuple[float, float]]:
    """Time, s, and how far pyrite is gone, m, at every record but the first."""
    length = run.problem.grid.length
    return [(state.time, length - run.inventory("pyrite", state) / PYRITE) for state in run.records[1:]]


def test_water_carries_oxygen_into_pyrite(tmp_path):
    """v / (1 + 15/4 M0 / (porosity c0)) = 0.0400 mm/d, 25,010 days a metre (lichtner1988).

    Dispersion puts the front ahead by 8 um once, which no cell can tell. In a cell that it is crossing the
    water is not yet filled with oxygen: 1 part in 2500 of the way through that cell.
    """
    run = oxidised(
        tmp_path, cells=3, length="6 cm", dispersivity="2 cm", flow='darcy_flux = "0.03 m/d"',
        duration="560 d", run='ports_every = "140 d"\nprofiles_every = "560 d"\nmax_courant = 1.0\n' + LIE,
    )  # fmt: skip
    for time, front in fronts(run):
        assert front / (time / DAY) == pytest.approx(3.998400639744102e-05, rel=0.001)
    assert run.dissolved("O2")[1] < 1e-50
    assert run.dissolved("SO4^2-")[2] == pytest.approx(2.0 * OXYGEN / 3.75, rel=0.001)
    gone = 0.06 * PYRITE - run.inventory("pyrite")
    assert 0.95 * gone < run.inventory("ferrihydrite") < gone  # its acid carries some iron on


def test_oxygen_diffuses_into_pyrite(tmp_path):
    """2 lambda sqrt(D t) with lambda 0.014141: a shrinking core's law, 1.6 cm in ten years (carslaw1959).

    The law knows no length, and so cells of 0.5 mm in weeks say what those of 1 cm do in decades. A front in
    the midst of a cell is off by a share of the cell; at its end it must be right. Water seeps, at a Peclet
    number of 0.003 a cell, which moves the front by a thousandth: only beside flow is diffusion explicit, and
    an implicit step of still water carries oxygen through pyrite before the pyrite can take it.
    """
    cell, diffusion, root = 0.5e-3, 1e-9, 0.01414119295922523
    once = (cell / (2.0 * root)) ** 2 / diffusion  # s to the end of the first cell
    seepage = 0.003 * diffusion / cell * POROSITY
    run = oxidised(
        tmp_path, cells=3, length=f"{3 * cell!r} m", diffusion="1e-9 m2/s", layer="tortuosity = 1.0",
        flow=f'darcy_flux = "{seepage!r} m/s"\ninlet = "concentration"', duration=f"{4 * once!r} s",
        run=f'ports_every = "{once!r} s"\nprofiles_every = "{4 * once!r} s"\nmax_courant = 1e-3\n' + LIE,
    )  # fmt: skip
    found = fronts(run)
    for time, front in (found[0], found[3]):
        assert front == pytest.approx(2.0 * root * sqrt(diffusion * time), rel=0.002)
    for time, front in found:
        assert front == pytest.approx(2.0 * root * sqrt(diffusion * time), abs=cell / 8.0)
