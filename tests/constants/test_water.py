"""Pure water: interpolation between the tabulated parameters, ranges."""

import itertools
import tomllib
from importlib.resources import files

import pytest

from gossan.constants.water import debye_huckel, density


def test_tabulated_values_come_back():
    table = tomllib.loads((files("gossan.constants") / "debye_huckel.toml").read_text(encoding="utf-8"))
    for celsius, a, b in zip(table["temperature"], table["A"], table["B"], strict=True):
        found = debye_huckel(273.15 + celsius)
        assert found == pytest.approx((a, 1e10 * b), rel=1e-9)
    assert debye_huckel(273.15)[0] == 0.4883


def test_between_the_values_the_curve_is_smooth_and_rising():
    values = [debye_huckel(273.15 + 0.25 * i) for i in range(241)]
    for name in (0, 1):
        steps = [after[name] - before[name] for before, after in itertools.pairwise(values)]
        assert min(steps) > 0.0
        # the table rounds to 1e-4 over 5 degC steps of 4e-4 to 11e-4: no jump between neighbours is larger
        # than that rounding makes it
        assert max(abs(b - a) for a, b in itertools.pairwise(steps)) < 0.2 * max(steps)


@pytest.mark.parametrize("celsius", [-0.5, 60.5])
def test_outside_of_the_table_is_refused(celsius):
    with pytest.raises(ValueError, match="outside the 0 to 60 degC"):
        debye_huckel(273.15 + celsius)


def test_ice_and_superheated_water_are_refused():
    for celsius in (-1.0, 151.0):
        with pytest.raises(ValueError, match="outside the 0 to 150 degC"):
            density(273.15 + celsius)
