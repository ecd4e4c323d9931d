"""The table: what it holds, what it reduces to, and how it refuses a faulty file."""

import re
import subprocess
import sys
from math import log10

import pytest

from gossan.base.notation import charge_of, molar_mass, parse_formula, split_ion
from gossan.constants.find import UnknownName, find, find_interaction, find_mineral, find_pair
from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at

TABLE = load_table()


def test_the_whole_table_is_there():
    counts = [len(group) for group in (TABLE.components, TABLE.species, TABLE.minerals, TABLE.gases)]
    assert counts == [34, 177, 87, 7]
    assert {"CO2", "O2", "H2S", "H2", "CH4", "N2", "NH3"} == set(TABLE.gases)
    assert load_table() is TABLE


def test_what_a_record_is_made_of_holds_its_elements_and_charge():
    """Checks the reduction, not the printed reaction: elements and charge of the sum against the name."""
    records = [(s.name, s.reaction) for s in TABLE.species.values()]
    records += [(c.name, c.half_reaction) for c in TABLE.components.values() if c.half_reaction]
    records += [(m.formula, m.reaction) for m in TABLE.minerals.values()]
    records += [(g.name, g.reaction) for g in TABLE.gases.values()]
    for name, reaction in records:
        made = {**reaction.components, "H2O": reaction.water, "e^-": reaction.electrons}
        elements: dict[str, float] = {}
        for part, times in made.items():
            for element, count in parse_formula(part).items():
                elements[element] = elements.get(element, 0.0) + times * count
        left = {element: count for element, count in elements.items() if abs(count) > 1e-12}
        assert left == pytest.approx(parse_formula(name)), name
        assert sum(times * charge_of(part) for part, times in made.items()) == pytest.approx(charge_of(name))


def test_reactions_end_in_components():
    for record in (*TABLE.species.values(), *TABLE.minerals.values(), *TABLE.gases.values()):
        assert set(record.reaction.components) <= set(TABLE.components), record.name
    first = {c.name for c in TABLE.components.values() if c.half_reaction is None}
    for held in TABLE.components.values():
        if held.half_reaction:
            assert set(held.half_reaction.components) <= first, held.name
    assert "HS^-" not in first
    assert "SO4^2-" in first


def test_chains_are_added_up():
    # 1.106 of CaHCO3+ from HCO3-, 10.329 of HCO3- itself (both Plummer & Busenberg 1982)
    pair = TABLE.species["CaHCO3^+"]
    assert pair.reaction.components == {"Ca^2+": 1.0, "H^+": 1.0, "CO3^2-": 1.0}
    assert pair.log10_k.value == pytest.approx(1.106 + 10.329)
    assert pair.published.value == 1.106
    assert TABLE.gases["CO2"].log10_k.value == pytest.approx(-1.468 - 16.681)
    assert TABLE.gases["CO2"].reaction.water == -1.0
    for celsius in (0.0, 12.0, 50.0):
        t = 273.15 + celsius
        calcium_step = 1209.12 + 0.31294 * t - 34765.05 / t - 478.782 * log10(t)
        assert log10_k_at(pair, t) == pytest.approx(calcium_step + log10_k_at(TABLE.species["HCO3^-"], t))


def test_polysulfides_go_through_sulfur_and_need_electrons():
    # HS- + 3 S(s) = S4^2- + H+ (-9.70) with 3 x (HS- = S(s) + H+ + 2 e-, +2.145)
    tetra = TABLE.species["S4^2-"]
    assert tetra.reaction.components == {"HS^-": 4.0, "H^+": -4.0}
    assert tetra.reaction.electrons == -6.0
    assert tetra.log10_k.value == pytest.approx(-9.70 + 3 * 2.145)


def test_what_needs_coupled_redox_is_marked():
    marked = {m.name for m in TABLE.minerals.values() if m.reaction.electrons}
    assert marked == {
        "pyrite",
        "sulfur",
        "pyrolusite",
        "manganite",
        "copper metal",
        "iron metal",
        "zinc metal",
    }
    assert {s.name for s in TABLE.species.values() if s.reaction.electrons} == {
        f"S{n}^2-" for n in range(2, 7)
    }


def test_hydrates_know_their_water_and_mass():
    assert TABLE.minerals["gypsum"].reaction.water == 2.0
    assert TABLE.minerals["gypsum"].molar_mass == molar_mass("CaSO4·2H2O")
    assert TABLE.minerals["epsomite"].reaction.water == 7.0
    assert TABLE.minerals["zincite"].reaction.water == 1.0


def test_constants_are_in_si_and_say_where_they_come_from():
    calcite = TABLE.minerals["calcite"]
    assert calcite.molar_volume.value == pytest.approx(36.93e-6)
    assert calcite.enthalpy.value == pytest.approx(-9610.0)
    assert TABLE.components["Zn^2+"].diffusion.value == pytest.approx(0.72e-9)
    assert TABLE.components["Zn^2+"].ion_size.value == pytest.approx(6e-10)
    assert not calcite.log10_k.from_memory
    assert TABLE.minerals["sphalerite"].log10_k.from_memory
    for record in (*TABLE.species.values(), *TABLE.minerals.values(), *TABLE.gases.values()):
        assert record.log10_k.sd > 0.0
        assert record.log10_k.source in TABLE.sources
    assert all(s.ion_size for s in TABLE.species.values() if s.charge)
    densities = [m.molar_mass / m.molar_volume.value for m in TABLE.minerals.values()]
    assert min(densities) > 1000  # kg/m3; a slip in a volume or a formula would leave the range of solids
    assert max(densities) < 12000


def test_where_published_values_disagree_the_reason_of_the_choice_stands_there():
    """An alternative within two standard uncertainties needs none."""
    records = [(held, held.half_log10_k) for held in TABLE.components.values() if held.half_log10_k]
    for group in (TABLE.species, TABLE.minerals, TABLE.gases):
        records += [(record, record.published or record.log10_k) for record in group.values()]
    for record, chosen in records:
        for other in record.alternatives:
            if abs(other.value - chosen.value) > 2.0 * chosen.sd:
                assert record.note or other.note, f"{record.name}: {chosen.value} and not {other.value}"


def test_each_constant_knows_the_temperatures_it_is_known_for():
    """degC: of an equation what its source says, 0 to 50 with an enthalpy, 25 give or take 10 without."""
    ranges = {
        "calcite": (0, 90), "gypsum": (0, 60), "vivianite": (5, 90), "siderite": (25, 250),
        "sphalerite": (0, 50), "hopeite": (15, 35),
    }  # fmt: skip
    for name, (low, high) in ranges.items():
        assert TABLE.minerals[name].valid == pytest.approx((low + 273.15, high + 273.15)), name
    assert TABLE.gases["CO2"].valid == pytest.approx((273.15, 523.15))
    assert TABLE.components["Cu^+"].half_valid == pytest.approx((273.15, 323.15))
    assert TABLE.components["Zn^2+"].half_valid is None
    # a pair is known where both it and the bicarbonate it is written with are: 0 to 90 and 0 to 250
    assert TABLE.species["CaHCO3^+"].valid == pytest.approx((273.15, 363.15))
    # no enthalpy of its own, whatever is known of bicarbonate
    assert TABLE.species["ZnHCO3^+"].valid == pytest.approx((288.15, 308.15))
    for record in (*TABLE.species.values(), *TABLE.minerals.values(), *TABLE.gases.values()):
        assert record.valid[0] <= 298.15 <= record.valid[1]


def test_ripe_solids_and_clusters_do_not_form_by_default():
    slow = ("dolomite", "magnesite", "millerite", "chalcopyrite", "pyrite", "goethite", "hematite", "quartz",
            "sphalerite", "wurtzite", "covellite", "lead hydroxide")  # fmt: skip
    assert not any(TABLE.minerals[name].forms for name in slow)
    fresh = ("fresh zinc sulfide", "fresh copper sulfide", "mackinawite", "ferrihydrite", "gypsum", "calcite")
    assert all(TABLE.minerals[name].forms for name in fresh)
    assert {name for name, species in TABLE.species.items() if not species.default} == {"S^2-", "Zn(OH)HS"}


def test_every_source_of_the_program_is_used():
    used = set()
    groups = (TABLE.components, TABLE.species, TABLE.minerals, TABLE.gases, TABLE.interactions)
    for group in groups:
        used |= set(re.findall(r"source='([^']*)'", repr(list(group.values()))))
    assert set(TABLE.sources) - used == {"freeze1979"} - used  # that one is cited in debye_huckel.toml


@pytest.mark.parametrize(
    ("said", "meant"),
    [
        ("sphalerite", "sphalerite"),
        ("Sphalerite ", "sphalerite"),
        ("wulfingite", "wülfingite"),
        ("nickel hydroxide", "theophrastite"),
        ("copper hydroxide", "spertiniite"),
        ("Ferrous  hydroxide", "iron(II) hydroxide"),
        ("iron hydroxide", "iron(II) hydroxide"),
        ("magnesium hydroxide", "brucite"),
        ("manganese hydroxide", "pyrochroite"),
        ("magnesium oxalate", "glushinskite"),
        ("ZnO", "zincite"),
        ("ZnO(s)", "zincite"),
        ("CaSO4·2H2O", "gypsum"),
        ("CaSO4(H2O)2", "gypsum"),
        ("amorphous aluminum hydroxide", "amorphous aluminium hydroxide"),
        ("zero-valent iron", "iron metal"),
    ],
)
def test_minerals_are_found_by_what_people_call_them(said, meant):
    assert find_mineral(TABLE, said).name == meant


def test_an_unknown_mineral_gets_suggestions_and_a_shared_formula_the_choice():
    with pytest.raises(UnknownName, match=r"no mineral is called 'sfalerite': did you mean sphalerite\?"):
        find_mineral(TABLE, "sfalerite")
    with pytest.raises(
        UnknownName, match="formula of 3 minerals: name one: sphalerite, wurtzite, fresh zinc"
    ):
        find_mineral(TABLE, "ZnS")
    with pytest.raises(UnknownName, match="no mineral is called"):
        find_mineral(TABLE, "Zn^2+")


def test_interactions_are_found_either_way_round():
    assert find_interaction(TABLE, "Na⁺/Cl⁻").name == find_interaction(TABLE, "Cl^-/Na^+").name == "Na^+/Cl^-"
    with pytest.raises(UnknownName, match=r"of Pb\^2\+ and HS\^-: of Pb\^2\+ it has Pb"):
        find_interaction(TABLE, "Pb^2+/HS^-")
    with pytest.raises(UnknownName, match=r"of a and b and c$"):
        find_interaction(TABLE, "a/b/c")


def test_find_gives_all_that_bears_a_name():
    assert [type(e).__name__ for e in find(TABLE, "CO2")] == ["Species", "Gas"]
    assert [e.name for e in find(TABLE, "CaCO3")] == ["CaCO3", "calcite", "aragonite", "vaterite"]
    assert [e.name for e in find(TABLE, "Zn²⁺")] == ["Zn^2+"]
    with pytest.raises(UnknownName, match=r"the table has no 'ZnHCO4\+': did you mean ZnHCO3\^\+"):
        find(TABLE, "ZnHCO4+")


def test_loading_brings_no_slow_library_along():
    code = "import sys; from gossan.constants.load import load_table; load_table(); print(*sys.modules)"
    modules = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    assert not {"numpy", "numba", "scipy", "pint", "pydantic"} & set(modules.split())


def test_names_are_in_plain_form():
    for name in (*TABLE.components, *TABLE.species):
        assert split_ion(name)[1] == charge_of(name)
        assert name.isascii()


@pytest.mark.parametrize(("said", "meant"), [
    ("zinc", "Zn^2+"), ("Zn", "Zn^2+"), ("Zn2+", "Zn^2+"), ("Zn+2", "Zn^2+"), ("SO42-", "SO4^2-"),
    ("SO4", "SO4^2-"), ("sulfate", "SO4^2-"), ("S(-II)", "HS^-"), ("Fe(III)", "Fe^3+"), ("Fe+3", "Fe^3+"),
    ("Cu(I)", "Cu^+"),
    ("H2S(g)", "H2S"), ("HSO4-", "HSO4^-"), ("ZnOH+", "ZnOH^+"), ("S", "sulfur"),
])  # fmt: skip
def test_what_people_type_is_found(said, meant):
    assert find(TABLE, said)[0].name == meant


def test_a_gas_of_its_own_name_is_the_gas_alone():
    assert [type(entry).__name__ for entry in find(TABLE, "CO2(g)")] == ["Gas"]


def test_couples_are_found_where_no_ions_interact():
    for said in ("Fe(II)/Fe(III)", "Fe2+/Fe3+", "Fe^3+/Fe^2+"):
        assert find_pair(TABLE, said).name == "Fe^3+"
    assert find_pair(TABLE, "sulfate/sulfide").name == "HS^-"
    assert find_pair(TABLE, "Zn2+/SO42-").name == find_pair(TABLE, "sulfate/zinc").name == "Zn^2+/SO4^2-"
    with pytest.raises(UnknownName, match="no interaction coefficient of a and b"):
        find_pair(TABLE, "a/b")
