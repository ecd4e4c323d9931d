"""Half the cells: what is halved, and whether the difference covers the error of the cells."""

from __future__ import annotations

from tests.support.small_cases import GYPSUM

from gossan.case.read import case_from_text
from gossan.recording import run
from gossan.study.grid import crossed_in_half_the_cells, with_half_the_cells


def cells(case) -> list[int]:
    return [layer.mesh[0] for layer in case.layers]


def test_cells_are_halved_however_they_were_given():
    assert cells(with_half_the_cells(case_from_text(GYPSUM))) == [4]
    odd = case_from_text(GYPSUM.replace("cells = 8", "cells = 7"))
    assert cells(with_half_the_cells(odd)) == [4]
    by_length = case_from_text(GYPSUM.replace("cells = 8", 'cell = "2 cm"'))
    assert cells(with_half_the_cells(by_length)) == [5]
    growing = case_from_text(GYPSUM.replace("cells = 8", 'cell = {first = "5 mm", last = "2 cm"}'))
    assert abs(cells(growing)[0] / 2 - cells(with_half_the_cells(growing))[0]) <= 1
    assert with_half_the_cells(odd).run.errors == "none"
    assert cells(odd) == [7], "the case itself stays as it is"


def test_the_difference_covers_what_more_cells_change(tmp_path):
    """A tracer and a front of gypsum in 12 cells, against 48."""
    def case(number: int):
        return case_from_text(GYPSUM.replace("cells = 8", f"cells = {number}"))

    coarse = crossed_in_half_the_cells(case(12))["outlet"]
    here, finer = (run(case(n), tmp_path / f"{n}.h5").crossings["outlet"] for n in (12, 48))
    assert set(here) >= {"bromide"}
    for quantity in here:
        difference = abs(coarse[quantity] - here[quantity][0])
        assert abs(here[quantity][0] - finer[quantity][0]) < difference, quantity
