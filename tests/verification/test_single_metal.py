"""One metal and one sulfide: breakthrough at R = 1 + S/C pore volumes, over the range of mine waters.

S is the sulfide of the sand per litre of its water, 4 kg/L of dry sand (1.6 kg/L, porosity 0.40) times its
acid-volatile sulfide, C the metal of the feed. What mackinawite leaves dissolved ahead of the front goes out
with the iron: with s of it, R = 1 + S/(C + s), a small correction wherever C is not small itself. s is
measured at the outlet here, where tests of two metals have it from an assay. By the rules of the trade zinc
of 10 mg/L comes at 2.3, 14 and 27 pore volumes where the sand has 0.05, 0.5 and 1 umol/g, copper of 5 mg/L at
3.5 and 26; the strongest tailings water, 3000 mg/L of zinc, in less than two through the richest sand met,
7.59 umol/g. `BY_THE_TRADE` has the rule's values, with a porosity of its own where it takes one.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from tests.support.columns import Walk, column, walk

# In moles, a front of any shape says when it comes: a thousandth of that is what mixing leaves at the start.
WITHIN = 0.003
CELLS = 30


@dataclass(frozen=True)
class Metal:
    """A metal and the sulfide that holds it; g/mol, IUPAC (2021)."""

    name: str
    sulfide: str
    molar_mass: float


ZINC = Metal("Zn", "sphalerite", 65.38)
COPPER = Metal("Cu", "covellite", 63.546)
CADMIUM = Metal("Cd", "greenockite", 112.41)
LEAD = Metal("Pb", "galena", 207.2)
# metal, mg/L, pH (strong water is acid), sulfide of the sand in umol/g, pore volumes by the trade or None
CASES = [
    (ZINC, 10.0, 6.5, 0.05, 2.3),
    (ZINC, 10.0, 6.5, 0.5, 14.0),
    (ZINC, 3000.0, 5.0, 7.59, 1.66),
    (COPPER, 5.0, 6.0, 0.05, 3.5),
    (COPPER, 200.0, 4.0, 2.0, None),
    (CADMIUM, 20.0, 6.5, 0.5, None),
    (LEAD, 30.0, 5.5, 0.5, None),
]
# metal, mg/L, sulfide of the sand in umol/g, porosity, pore volumes to the middle of the front
BY_THE_TRADE = [
    (ZINC, 10.0, 0.05, 0.4, 2.308),
    (ZINC, 10.0, 0.5, 0.4, 14.076),
    (ZINC, 10.0, 1.0, 0.4, 27.152),
    (ZINC, 10.0, 5.0, 0.4, 131.760),
    (COPPER, 5.0, 0.5, 0.4, 26.418),
    (COPPER, 5.0, 5.0, 0.4, 255.184),
    (ZINC, 3000.0, 7.59, 0.35, 1.756),
]


@pytest.mark.parametrize(("metal", "mg_per_litre", "sulfide", "porosity", "pore_volumes"), BY_THE_TRADE)
def test_the_rule_of_the_trade(metal, mg_per_litre, sulfide, porosity, pore_volumes):
    """By the moles that are missing at the outlet: few cells will do. What stays dissolved makes it less."""
    c, held = mg_per_litre / metal.molar_mass, 1.6 / porosity * sulfide
    assert 1.0 + held / c == pytest.approx(pore_volumes, abs=1e-3), "the rule itself"
    pH = 5.0 if mg_per_litre > 100.0 else 6.5
    cells = CELLS if pore_volumes < 20.0 else 5  # what mixing leaves at the start is of the first pore volume
    run = sulfide_column(metal, mg_per_litre, pH, sulfide, porosity, cells, 1.1 * pore_volumes + 1.5)
    ion, at = f"{metal.name}^2+", run.pore_volumes
    by_mass = at[-1] - run.left(ion)[-1] / (c * run.problem.pore_volume)
    waiting = (at > 1.0 + 0.4 * (pore_volumes - 1.0)) & (at < 1.0 + 0.5 * (pore_volumes - 1.0))
    s = run.outflow("HS^-")[waiting].mean()
    assert by_mass == pytest.approx(1.0 + held / (c + s), rel=WITHIN)
    assert by_mass == pytest.approx(pore_volumes, rel=WITHIN + s / c)
    assert s < 0.03 * c, "the rule leaves out little"
    assert run.outflow(ion)[-1] == pytest.approx(c, rel=1e-3), "the front has left"


@pytest.mark.parametrize(("metal", "mg_per_litre", "pH", "sulfide", "by_the_trade"), CASES)
def test_a_metal_breaks_through_when_the_sulfide_is_spent(metal, mg_per_litre, pH, sulfide, by_the_trade):
    c, s = mg_per_litre / metal.molar_mass, 4.0 * sulfide
    rough = 1.0 + s / c
    run = sulfide_column(metal, mg_per_litre, pH, sulfide, 0.4, CELLS, 1.3 * rough + 0.5)
    ion, at = f"{metal.name}^2+", run.pore_volumes
    left = run.outflow(ion)
    waiting = (at > 1.0 + 0.5 * (rough - 1.0)) & (at < 1.0 + 0.6 * (rough - 1.0))
    expected = 1.0 + s / (c + run.outflow("HS^-")[waiting].mean())

    by_mass = at[-1] - run.left(ion)[-1] / (c * run.problem.pore_volume)
    assert by_mass == pytest.approx(expected, rel=WITHIN)
    half = 0.5 * (at[1:] + at[:-1])[np.argmax(left[1:] >= 0.5 * c)]
    assert half == pytest.approx(expected, abs=0.5 * expected / CELLS + rough / 100)  # half a cell, a record
    assert left[-1] == pytest.approx(c, rel=1e-6)
    if by_the_trade:
        assert by_mass == pytest.approx(by_the_trade, abs=0.15), "their digits, and no s"


def sulfide_column(
    metal: Metal, mg_per_litre: float, pH: float, sulfide: float, porosity: float, cells: int, duration: float
) -> Walk:
    """Water of one metal through sand of 1.6 kg/L with mackinawite; duration in pore volumes."""
    return walk(
        column(
            f"""
[waters.feed]
pH = {pH}
balance_on = "Cl"
analysis = {{{metal.name} = "{mg_per_litre} mg/L"}}
[waters.pore]
balance_on = "Cl"
analysis = {{Na = "1 mmol/L"}}
saturated_with = {{mackinawite = 0.0}}
""",
            minerals=f'mackinawite = "{sulfide} umol/g"',
            forms=f'["mackinawite", "{metal.sulfide}"]',
            duration=f"{duration} PV",
            cells=cells,
            porosity=porosity,
            grain_density=f"{1600 / (1.0 - porosity)!r} kg/m3",
            dispersivity="1 cm",
            run=f'ports_every = "{duration / 130} PV"',
        )
    )
