"""A chemical system holds what its components can make, in balance, and nothing else."""

import dataclasses

import numpy as np
import pytest
from tests.support.small_systems import WIDE_COMPONENTS

from gossan.base.notation import molar_mass
from gossan.chemistry.activity import DAVIES
from gossan.chemistry.system import LN10, build_system
from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at

TABLE = load_table()
MINE = ("Ca^2+", "Fe^2+", "Zn^2+", "SO4^2-", "HS^-", "CO3^2-")


def formation(system):
    """(species, component), whatever form the kernels keep it in."""
    return np.asarray(system.stoichiometry)


@pytest.fixture(scope="module")
def wide():
    return build_system(TABLE, WIDE_COMPONENTS, TABLE.minerals)


def test_hydrogen_comes_first_then_the_table_s_order():
    one = build_system(TABLE, MINE)
    other = build_system(TABLE, reversed(MINE))
    assert one.components == other.components
    assert one.components[0] == "H^+"
    assert set(one.components) == {"H^+", *MINE}
    assert one.species[: len(one.components)] == one.components


def test_components_form_from_themselves(wide):
    count = len(wide.components)
    assert np.array_equal(formation(wide)[:count], np.eye(count))


def test_every_reaction_keeps_the_charge(wide):
    assert np.array_equal(formation(wide) @ wide.component_charge, wide.species_charge)
    assert np.abs(wide.mineral_charge()).max() == 0.0
    assert np.abs(wide.gas_stoichiometry @ wide.component_charge).max() == 0.0


def test_every_mineral_weighs_what_it_dissolves_to(wide):
    """The mass of components and water, the IUPAC weights of both; electrons and protons as atoms."""
    weights = np.array([molar_mass(name.partition("^")[0]) for name in wide.components])
    made = wide.mineral_stoichiometry @ weights + wide.mineral_water * molar_mass("H2O")
    assert wide.mineral_mass == pytest.approx(made, rel=1e-9)


def test_molar_volumes_are_those_of_solids(wide):
    density = wide.mineral_mass / wide.molar_volume
    assert density.min() > 1400.0  # kg/m3; epsomite has 1680
    assert density.max() < 10000.0  # litharge has 9350


def test_only_what_the_components_make_is_there():
    system = build_system(TABLE, ["Ca^2+", "SO4^2-"], TABLE.minerals)
    assert set(system.minerals) == {"gypsum", "anhydrite", "portlandite"}
    assert "CaSO4" in system.species
    assert not any("C" in name.replace("Ca", "") for name in system.species)


def test_nothing_that_takes_electrons_is_there():
    """With redox held, sulfur, pyrite and metals would need electrons that no component gives."""
    system = build_system(TABLE, [*MINE, "Cu^2+", "Fe^3+"], TABLE.minerals)
    assert not {"sulfur", "pyrite", "copper metal", "iron metal", "zinc metal"} & set(system.minerals)
    assert "magnetite" in system.minerals  # its Fe(II) and Fe(III) are both components


def test_the_default_list_is_what_forms():
    system = build_system(TABLE, MINE)
    assert {"fresh zinc sulfide", "mackinawite", "calcite", "gypsum"} <= set(system.minerals)
    assert not {"sphalerite", "dolomite", "goethite", "quartz", "millerite"} & set(system.minerals)
    assert system.may_form.all()


def test_a_mineral_at_hand_may_only_dissolve_unless_it_is_listed():
    system = build_system(TABLE, MINE, ["calcite"], dissolving=["sphalerite", "calcite"])
    assert dict(zip(system.minerals, system.may_form.tolist(), strict=True)) == {
        "calcite": True,
        "sphalerite": False,
    }


def test_what_is_excluded_is_left_out():
    system = build_system(TABLE, MINE, excluded=["CaSO4", "gypsum"])
    assert "CaSO4" not in system.species
    assert "gypsum" not in system.minerals
    assert "ZnSO4" in system.species


def test_species_off_by_default_stay_off():
    off = {name for name, entry in TABLE.species.items() if not entry.default}
    assert {"S^2-", "Zn(OH)HS"} <= off
    assert not off & set(build_system(TABLE, WIDE_COMPONENTS).species)


@pytest.mark.parametrize("celsius", [0.0, 12.0, 25.0, 50.0])
def test_constants_are_those_of_the_temperature(celsius):
    kelvin = 273.15 + celsius
    system = build_system(TABLE, MINE, ["calcite"], temperature=kelvin)
    ln_k = dict(zip(system.species, system.matrices.ln_k[: len(system.species)], strict=True))
    assert ln_k["HCO3^-"] == pytest.approx(log10_k_at(TABLE.species["HCO3^-"], kelvin) * LN10, rel=1e-14)
    assert ln_k["Ca^2+"] == 0.0
    calcite = log10_k_at(TABLE.minerals["calcite"], kelvin)
    assert system.matrices.solid_ln_k[0] == pytest.approx(calcite * LN10, rel=1e-14)


def test_a_system_does_not_change():
    system = build_system(TABLE, MINE)
    assert system.activity.name == DAVIES
    with pytest.raises(dataclasses.FrozenInstanceError):
        system.temperature = 300.0


def test_an_unknown_law_is_an_error():
    with pytest.raises(KeyError):
        build_system(TABLE, MINE, activity="daves")
