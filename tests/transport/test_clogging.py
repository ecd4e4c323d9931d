"""Conductivity after porosity, layer by layer."""

import numpy as np
import pytest

from gossan.transport.clogging import (
    Clogging,
    bodies_and_throats,
    conductivity_left,
    kozeny_carman,
    power,
    threshold,
)


def test_each_layer_follows_its_own_law():
    laws = [Clogging(), Clogging("power", 5.0), Clogging("threshold", 2.0, 0.1), Clogging("none")]
    layer = np.array([0, 1, 2, 2, 3])
    porosity, initial = np.array([0.3, 0.3, 0.3, 0.05, 0.01]), np.full(5, 0.4)
    left = conductivity_left(laws, layer, porosity, initial)
    expected = [(0.75) ** 3 * (0.6 / 0.7) ** 2, 0.75**5, (0.2 / 0.3) ** 2, 0.0, 1.0]
    assert left == pytest.approx(expected, rel=1e-14)


@pytest.mark.parametrize(
    "law",
    [kozeny_carman, lambda p, p0: power(p, p0, 4.0), lambda p, p0: threshold(p, p0, 3.0, 0.1),
     lambda p, p0: bodies_and_throats(p, p0, 0.1, 0.7), lambda p, p0: bodies_and_throats(p, p0, 0.0, 0.7)],
)  # fmt: skip
def test_laws_start_at_one_and_rise_with_porosity(law):
    porosity = np.linspace(0.0, 0.6, 61)
    left = law(porosity, np.full(61, 0.38))
    assert left[38] == pytest.approx(1.0, rel=1e-14)
    assert (np.diff(left) >= 0.0).all()
    assert left[0] == 0.0


def test_tubes_in_series_are_resistances():
    """Poiseuille by hand: resistance goes with length / area^2, throats on 0.3 of the way, bodies on 0.7.

    Both lose the same area; that of the bodies is what makes the throats full at the critical porosity.
    """
    initial, critical, bodies = 0.4, 0.25, 0.7
    wider = critical / initial / (bodies * (1.0 - critical / initial))
    for porosity in (0.26, 0.3, 0.37, 0.4, 0.45):
        throat = (porosity - critical) / (initial - critical)

        def resistance(throat):
            return 0.3 / throat**2 + bodies / (throat + wider) ** 2

        found = bodies_and_throats(np.array([porosity]), np.array([initial]), critical, bodies)
        assert found[0] == pytest.approx(resistance(1.0) / resistance(throat), rel=1e-12)


def test_what_is_left_in_any_case():
    laws = [Clogging("threshold", 3.0, 0.1, residual=1e-3), Clogging(residual=0.02),
            Clogging("none", residual=0.5)]  # fmt: skip
    porosity, initial = np.array([0.05, 0.39, 0.01, 0.01]), np.full(4, 0.4)
    left = conductivity_left(laws, np.array([0, 0, 1, 2]), porosity, initial)
    assert left == pytest.approx([1e-3, (0.29 / 0.3) ** 3, 0.02, 1.0], rel=1e-14)
    assert [law.closes_at for law in laws] == [0.0, 0.0, 0.0]
    assert Clogging("threshold", 3.0, 0.1).closes_at == 0.1


def test_unknown_law_is_refused():
    with pytest.raises(ValueError, match="cubic"):
        conductivity_left([Clogging("cubic")], np.zeros(1, int), np.array([0.3]), np.array([0.3]))
