"""The table: what it holds, what it reduces to, and how it refuses a faulty file."""

import re
from dataclasses import replace
from math import log10

import pytest

from gossan.base.errors import InputError
from gossan.base.notation import charge_of, molar_mass, parse_formula, split_ion
from gossan.constants.find import UnknownName, find, find_mineral
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


def test_every_source_of_the_program_is_used():
    used = {"judgement"}
    for group in (TABLE.components, TABLE.species, TABLE.minerals, TABLE.gases):
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


def test_find_gives_all_that_bears_a_name():
    assert [type(e).__name__ for e in find(TABLE, "CO2")] == ["Species", "Gas"]
    assert [e.name for e in find(TABLE, "CaCO3")] == ["CaCO3", "calcite", "aragonite", "vaterite"]
    assert [e.name for e in find(TABLE, "Zn²⁺")] == ["Zn^2+"]
    with pytest.raises(UnknownName, match=r"the table has no 'ZnHCO4\+': did you mean ZnHCO3\^\+"):
        find(TABLE, "ZnHCO4+")


SITE = """
[sources]
site2026 = "Our laboratory (2026), report 12"

[minerals.sphalerite]
reaction = "ZnS(s) + H^+ = Zn^2+ + HS^-"
log10_k = {value = -10.9, sd = 0.2, source = "site2026", seen = true}
molar_volume = {value = 23.8, source = "site2026"}
forms = true

[minerals."site crust"]
reaction = "ZnCO3·H2O(s) + 2 H^+ = Zn^2+ + CO2(g) + 2 H2O"
log10_k = {value = 7.0, sd = 0.3, source = "site2026", seen = true}
molar_volume = {value = 45.0, source = "density"}
forms = false
also_called = ["crust"]

[components."F^-"]
ion_size = {value = 3.5, source = "kielland1937"}

[species."CaF^+"]
reaction = "Ca^2+ + F^- = CaF^+"
log10_k = {value = 0.94, sd = 0.1, source = "site2026"}
enthalpy = {value = 17.0, source = "site2026"}
"""


def site(tmp_path, text):
    path = tmp_path / "site.toml"
    path.write_text(text, encoding="utf-8")
    return path


def test_a_users_file_adds_and_replaces(tmp_path):
    table = load_table(site(tmp_path, SITE))
    assert table.minerals["sphalerite"].log10_k.value == -10.9
    assert table.minerals["sphalerite"].forms
    assert table.minerals["sphalerite"].enthalpy is None  # the whole entry is replaced
    crust = find_mineral(table, "crust")
    assert crust.reaction.components == {"Zn^2+": 1.0, "CO3^2-": 1.0}
    assert crust.reaction.water == 1.0
    assert crust.log10_k.value == pytest.approx(7.0 + TABLE.gases["CO2"].log10_k.value)
    assert table.species["CaF^+"].log10_k.from_memory  # nobody said that it was seen
    assert table.components["F^-"].charge == -1
    assert len(TABLE.components) == 34  # the program's own table is untouched
    assert TABLE.minerals["sphalerite"].log10_k.value == -11.45


def test_replacing_a_link_moves_what_hangs_on_it(tmp_path):
    text = """
    [species."HCO3^-"]
    reaction = "H^+ + CO3^2- = HCO3^-"
    log10_k = {value = 10.0, sd = 0.1, source = "judgement"}
    """
    table = load_table(site(tmp_path, text))
    assert table.species["CaHCO3^+"].log10_k.value == pytest.approx(11.106)
    assert replace(table.species["CO2"]) == TABLE.species["CO2"]


# old text of SITE, new text, line of the fault, key, what it says
BROKEN = [
    (
        '"ZnS(s) + H^+ = Zn^2+ + HS^-"',
        '"ZnS(s) + H^+ = Zn^+ + HS^-"',
        6,
        "minerals.sphalerite.reaction",
        "is not balanced: from left to right it gains charge -1",
    ),
    (
        '"ZnS(s) + H^+ = Zn^2+ + HS^-"',
        '"ZnS(s) = Zn^2+ + HS^-"',
        6,
        "minerals.sphalerite.reaction",
        "gains H +1, charge +1",
    ),
    (
        '"ZnS(s) + H^+ = Zn^2+ + HS^-"',
        '"ZnS2(s) + H^+ = Zn^2+ + HS^-"',
        6,
        "minerals.sphalerite.reaction",
        "gains S -1",
    ),
    (
        '"Ca^2+ + F^- = CaF^+"',
        '"Ca^2+ + F^- + H2O = CaF^+"',
        22,
        "species.CaF^+.reaction",
        "gains H -2, O -1",
    ),
    (
        '"Ca^2+ + F^- = CaF^+"',
        '"CaF^+ = Ca^2+ + F^-"',
        22,
        "species.CaF^+.reaction",
        "one CaF^+ on its right",
    ),
    ('"Ca^2+ + F^- = CaF^+"', '"Ca++ + F^- = CaF^+"', 22, "species.CaF^+.reaction", "write it like Zn^2+"),
    (
        '"Ca^2+ + F^- = CaF^+"',
        '"CaHF^2+ = CaF^+ + H^+"',
        22,
        "species.CaF^+.reaction",
        "uses CaHF^2+, which the table lacks",
    ),
    (
        '"Ca^2+ + F^- = CaF^+"',
        '"Ca^2+ + CaF^+ + F^- = CaF^+ + CaF^+"',
        22,
        "species.CaF^+.reaction",
        "one CaF^+",
    ),
    (
        'source = "site2026", seen = true}\nmolar',
        'source = "site2025", seen = true}\nmolar',
        7,
        "minerals.sphalerite.log10_k",
        "cites 'site2025', which [sources] lacks: did you mean site2026?",
    ),
    ("sd = 0.2, ", "", 7, "minerals.sphalerite.log10_k", "has no sd: give half of a 95 % interval"),
    ("sd = 0.2", "sd = 0", 7, "minerals.sphalerite.log10_k", "a standard uncertainty is above zero"),
    (
        '{value = 0.94, sd = 0.1, source = "site2026"}',
        "{value = 0.94, sd = 0.1}",
        23,
        "species.CaF^+.log10_k",
        "has no source",
    ),
    (
        '{value = 0.94, sd = 0.1, source = "site2026"}',
        "0.94",
        23,
        "species.CaF^+.log10_k",
        "is 0.94: write {value",
    ),
    ("value = 0.94", 'value = "0.94"', 23, "species.CaF^+.log10_k", "which is no number"),
    ("value = 0.94", "value = nan", 23, "species.CaF^+.log10_k", "which is no number"),
    ("value = 23.8", "value = -23.8", 8, "minerals.sphalerite.molar_volume", "it is above zero"),
    ("forms = true", 'forms = "yes"', 9, "minerals.sphalerite.forms", "write true or false"),
    ("forms = true\n", "", 5, "minerals.sphalerite.forms", "is missing"),
    ("forms = true", "form = true", 9, "minerals.sphalerite.form", "did you mean forms?"),
    ("[minerals.sphalerite]", "[mineral.sphalerite]", 5, "mineral", "did you mean minerals?"),
    (
        'also_called = ["crust"]',
        'also_called = ["ZnO", "Zincite"]',
        16,
        "minerals.site crust.also_called",
        "holds 'Zincite', which means zincite already",
    ),
    (
        'also_called = ["crust"]',
        'also_called = "crust"',
        16,
        "minerals.site crust.also_called",
        "write a list",
    ),
    ('[species."CaF^+"]', '[species."CaF+"]', 21, "species.CaF+", "write CaF^+"),
    ('[species."CaF^+"]', '[species."Ca^2+"]', 21, "species.Ca^2+", "is a component already"),
    (
        "[sources]",
        '[sources]\nplummer1982 = "x"',
        3,
        "sources.plummer1982",
        "is a source of the table already",
    ),
    (
        "enthalpy = {",
        "temperature_fit = {constant = 1.0, linera = 0.1}\nenthalpy = {",
        24,
        "species.CaF^+.temperature_fit",
        "has no power 'linera': did you mean linear?",
    ),
    (
        "enthalpy = {",
        "temperature_fit = {constant = 1.0}\nenthalpy = {",
        24,
        "species.CaF^+.temperature_fit",
        "+0.06 away",
    ),
]


@pytest.mark.parametrize(("old", "new", "line", "key", "says"), BROKEN)
def test_a_faulty_file_is_refused_with_file_line_and_key(tmp_path, old, new, line, key, says):
    assert SITE.count(old) >= 1
    path = site(tmp_path, SITE.replace(old, new, 1))
    if "+0.06" in says:  # 1.0 against 0.94 lies within that entry's sd: make the constant better known
        path.write_text(path.read_text().replace("sd = 0.1,", "sd = 0.01,"))
    with pytest.raises(InputError) as refused:
        load_table(path)
    found = {(fault.line, fault.key): str(fault) for fault in refused.value.faults}
    assert (line, key) in found, str(refused.value)
    assert says in found[line, key]
    assert found[line, key].startswith(f"{path}:{line}: {key} ")


def test_all_faults_come_in_one_message(tmp_path):
    text = SITE.replace("sd = 0.2, ", "").replace("Ca^2+ + F^-", "Ca^2+").replace("value = 45.0", "value = 0")
    with pytest.raises(InputError) as refused:
        load_table(site(tmp_path, text))
    assert len(refused.value.faults) == 3


def test_reactions_that_bite_their_tail_are_refused(tmp_path):
    text = """
    [species."CaHCO3^+"]
    reaction = "MgHCO3^+ + Ca^2+ = CaHCO3^+ + Mg^2+"
    log10_k = {value = 0.1, sd = 0.1, source = "judgement"}
    [species."MgHCO3^+"]
    reaction = "CaHCO3^+ + Mg^2+ = MgHCO3^+ + Ca^2+"
    log10_k = {value = -0.1, sd = 0.1, source = "judgement"}
    """
    with pytest.raises(InputError, match="leads to MgHCO3"):
        load_table(site(tmp_path, text))


@pytest.mark.parametrize(
    ("text", "line", "says"),
    [
        ("[species.CaF^+]\n", 1, "stand in quotes"),
        ("[sources]\na = 'x'\na = 'y'\n", 3, "is not TOML"),
        ("[minerals.x]\n[minerals.x]\n", 2, "is not TOML"),
    ],
)
def test_what_is_no_toml_is_refused_with_its_line(tmp_path, text, line, says):
    with pytest.raises(InputError, match=says) as refused:
        load_table(site(tmp_path, text))
    assert [fault.line for fault in refused.value.faults] == [line]


def test_a_file_that_is_not_there_is_refused(tmp_path):
    with pytest.raises(InputError, match="cannot be read"):
        load_table(tmp_path / "nowhere.toml")
    (tmp_path / "latin.toml").write_bytes(b'note = "gasp\xe9ite"')
    with pytest.raises(InputError, match="UTF-8"):
        load_table(tmp_path / "latin.toml")


def test_names_are_in_plain_form():
    for name in (*TABLE.components, *TABLE.species):
        assert split_ion(name)[1] == charge_of(name)
        assert name.isascii()
