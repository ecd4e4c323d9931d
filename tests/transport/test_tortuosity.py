"""Laws of tortuosity: theories agree where spheres are few; measured laws where they were measured."""

import numpy as np
import pytest

from gossan.transport.tortuosity import (
    LAWS,
    LAWS_OF_TWO,
    Tortuosity,
    archie,
    boudreau,
    bruggeman,
    iversen_joergensen,
    maxwell,
    millington_quirk,
    weissberg,
    winding,
)


@pytest.mark.parametrize("law", [maxwell, weissberg, bruggeman])
def test_theories_of_spheres_lose_half_of_the_solid_where_it_is_little(law):
    """Maxwell's limit: 1 - s/2 for a share s of spheres; the next term is that of s^2, at most 3/8 of it."""
    solid = np.array([1e-3, 1e-2])
    assert law(1.0 - solid) == pytest.approx(1.0 - solid / 2, abs=0.4 * solid.max() ** 2)


def test_of_the_theories_of_spheres_the_denser_packings_leave_less():
    """Maxwell's bound is the highest (Hashin & Shtrikman), Weissberg's below it, Bruggeman's below that."""
    porosity = np.linspace(0.2, 0.9, 15)
    assert (maxwell(porosity) > weissberg(porosity)).all()
    assert (weissberg(porosity) > bruggeman(porosity)).all()


def test_sea_beds_are_described_alike_by_both_of_their_laws():
    """Boudreau fitted muds of porosity 0.4 to 0.9, those of Iversen & Joergensen (m = 3) among them."""
    porosity = np.linspace(0.6, 0.9, 7)
    assert boudreau(porosity) == pytest.approx(iversen_joergensen(porosity, 3.0), rel=0.16)


@pytest.mark.parametrize(
    ("law", "at_0_4"),
    [  # worked by hand from each formula
        (millington_quirk, 0.7368062997),  # cube root
        (lambda n: archie(n, 2.0), 0.4),
        (lambda n: archie(n, 1.3), 0.7596577929),  # exp(0.3 ln 0.4)
        (bruggeman, 0.6324555320),
        (boudreau, 0.3530348598),  # 1 / (1 + 2 * 0.9162907319)
        (weissberg, 0.6858026801),  # 1 / (1 + 0.9162907319 / 2)
        (maxwell, 0.7692307692),  # 2 / 2.6
        (lambda n: iversen_joergensen(n, 2.0), 0.4545454545),  # 1 / 2.2
    ],
)
def test_values_at_a_porosity_of_two_fifths(law, at_0_4):
    assert float(law(np.array(0.4))) == pytest.approx(at_0_4, rel=1e-9)


def test_free_water_is_not_slowed_and_less_room_slows_more():
    porosity = np.linspace(0.05, 1.0, 20)
    for law in [*LAWS.values(), *(lambda n, of=of: of(n, 2.0) for of in LAWS_OF_TWO.values())]:
        factor = law(porosity)
        assert factor[-1] == pytest.approx(1.0)
        assert (np.diff(factor) > 0.0).all()
        assert (factor > 0.0).all()


def test_each_layer_follows_its_own_law_and_its_pores():
    laws = (Tortuosity(), Tortuosity("number", factor=0.7), Tortuosity("archie", exponent=2.0))
    layer, porosity = np.array([0, 1, 1, 2]), np.array([0.343, 0.3, 0.2, 0.25])
    assert winding(laws, layer, porosity) == pytest.approx([0.7, 0.7, 0.7, 0.25])
    assert winding(laws[:1], layer * 0, porosity) == pytest.approx(np.cbrt(porosity))
    with pytest.raises(KeyError):
        winding((Tortuosity("crooked"),), layer * 0, porosity)
