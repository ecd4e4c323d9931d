"""Conductivity after porosity, layer by layer."""

import numpy as np
import pytest

from gossan.transport.clogging import Clogging, conductivity_left, kozeny_carman, power, threshold


def test_each_layer_follows_its_own_law():
    laws = [Clogging(), Clogging("power", 5.0), Clogging("threshold", 2.0, 0.1), Clogging("none")]
    layer = np.array([0, 1, 2, 2, 3])
    porosity, initial = np.array([0.3, 0.3, 0.3, 0.05, 0.01]), np.full(5, 0.4)
    left = conductivity_left(laws, layer, porosity, initial)
    expected = [(0.75) ** 3 * (0.6 / 0.7) ** 2, 0.75**5, (0.2 / 0.3) ** 2, 0.0, 1.0]
    assert left == pytest.approx(expected, rel=1e-14)


@pytest.mark.parametrize(
    "law", [kozeny_carman, lambda p, p0: power(p, p0, 4.0), lambda p, p0: threshold(p, p0, 3.0, 0.1)]
)
def test_laws_start_at_one_and_rise_with_porosity(law):
    porosity = np.linspace(0.0, 0.6, 61)
    left = law(porosity, np.full(61, 0.38))
    assert left[38] == pytest.approx(1.0, rel=1e-14)
    assert (np.diff(left) >= 0.0).all()
    assert left[0] == 0.0


def test_unknown_law_is_refused():
    with pytest.raises(ValueError, match="cubic"):
        conductivity_left([Clogging("cubic")], np.zeros(1, int), np.array([0.3]), np.array([0.3]))
