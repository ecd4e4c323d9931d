"""`iterated` with pores that change: water and pores agree within the step, not within the next one."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import assert_books_closed, started
from tests.support.small_cases import GYPSUM

from gossan.case.build import first_pace
from gossan.coupling.ledger import Books
from gossan.coupling.march import march
from gossan.coupling.pores import pore_space
from gossan.coupling.splitting import AT_REST

HEAD = GYPSUM.replace('darcy_flux = "0.4 m/d"', 'head_drop = "8 mm"').replace('"0.1 wt%"', '"8 wt%"')


def apart(text: str, steps: int) -> float:
    """The largest share by which water and pores of a cell differ after any of the first steps."""
    problem, state = started(text)
    books, most = Books(problem), 0.0
    for number, stride in enumerate(march(problem, state, first_pace(problem))):
        assert_books_closed(books, stride.state)
        pores = pore_space(problem, stride.state.solid)
        most = max(most, float(np.max(np.abs(stride.state.water - pores) / pores)))
        if number == steps:
            break
    assert (pores > problem.flowing_porosity + 1e-6).any(), "nothing has dissolved"
    return most


@pytest.mark.parametrize("text", [GYPSUM.replace('"0.1 wt%"', '"8 wt%"'), HEAD], ids=["flux", "head"])
def test_water_and_pores_agree_within_the_step(text):
    iterated = apart(text.replace("[run]\n", '[run]\ncoupling = "iterated"\n'), 60)
    two_stage = apart(text, 60)
    assert iterated < 10.0 * AT_REST
    assert iterated < 0.1 * two_stage
