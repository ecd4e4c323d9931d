"""A user's own file of constants: what it adds and replaces, and how a faulty one is refused."""

import re
from dataclasses import replace
from pathlib import Path

import pytest

from gossan.base.errors import InputError
from gossan.constants.find import find_mineral
from gossan.constants.load import load_table

TABLE = load_table()

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


def test_a_users_file_may_say_where_its_constants_are_known(tmp_path):
    text = SITE.replace("forms = false", "valid = [-2, 40]\nforms = false")
    table = load_table(site(tmp_path, text))
    # written through CO2(g), which is known from 0 degC on
    assert table.minerals["site crust"].valid == pytest.approx((273.15, 308.15 + 5.0))
    assert table.minerals["sphalerite"].valid == pytest.approx((288.15, 308.15))  # no enthalpy was given


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
        "enthalpy = {",
        "temperature_fit = {constant = 0.94}\nenthalpy = {",
        25,
        "species.CaF^+.enthalpy",
        "is +17 kJ/mol away from the slope of temperature_fit at 25 degC",
    ),
    (
        '"ZnS(s) + H^+ = Zn^2+ + HS^-"',
        '"SrZnS2(s) + 2 H^+ = Sr^2+ + Zn^2+ + 2 HS^-"',
        6,
        "minerals.sphalerite.reaction",
        'uses Sr^2+, which the table lacks: no component holds Sr: add its ion to the components, like '
        '[components."Sr^2+"]',
    ),
    (
        '"ZnS(s) + H^+ = Zn^2+ + HS^-"',
        '"ZnS(s) + H^+ + CaHCO3^+ = ZnHCO^3+ + HS^- + CaO2"',
        6,
        "minerals.sphalerite.reaction",
        "uses ZnHCO^3+, which the table lacks: did you mean ZnHCO3^+?",
    ),
    (
        "forms = true",
        'valid = "cold"\nforms = true',
        9,
        "minerals.sphalerite.valid",
        "write the range in degC, like [5, 90]",
    ),
    ("forms = true", "valid = [5, 20]\nforms = true", 9, "minerals.sphalerite.valid", "it holds 25 degC"),
    ("forms = true", "valid = [50, 5]\nforms = true", 9, "minerals.sphalerite.valid", "it holds 25 degC"),
    (
        "ion_size = {",
        "valid = [0, 50]\nion_size = {",
        18,
        "components.F^-.half_reaction",
        "a first ion has no constant",
    ),
    (
        '"Ca^2+ + F^- = CaF^+"',
        '"CaF^+ + H2O = CaF^+ + H^+ + OH^-"',
        22,
        "species.CaF^+.reaction",
        "does not have one CaF^+ on its right",
    ),
    (
        "ion_size = {",
        'half_reaction = "F2 + 2 e^- = F^-"\nion_size = {',
        19,
        "components.F^-.half_reaction",
        "is not balanced",
    ),
    (
        "ion_size = {",
        'log10_k = {value = 1.0, sd = 1.0, source = "site2026"}\nion_size = {',
        18,
        "components.F^-.half_reaction",
        "a first ion has no constant",
    ),
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
    with pytest.raises(
        InputError, match=r"MgHCO3\^\+\.reaction goes round in a circle: CaHCO3"
    ):
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


def test_one_fault_is_told_once_though_others_hang_on_it(tmp_path):
    text = """
    [species."HCO3^-"]
    reaction = "H^+ + CO3^2- = HCO3^2-"
    log10_k = {value = 10.0, sd = 0.1, source = "judgement"}
    """
    with pytest.raises(InputError) as refused:
        load_table(site(tmp_path, text))
    assert len(refused.value.faults) == 1
    assert refused.value.faults[0].line == 3


def test_the_example_of_the_page_is_read(tmp_path):
    page = (Path(__file__).parents[2] / "docs" / "adding-constants.md").read_text(encoding="utf-8")
    example = next(block for block in re.findall(r"```toml\n(.*?)```", page, re.S) if "[sources]" in block)
    assert find_mineral(load_table(site(tmp_path, example)), "crust").reaction.water == 10.0
    with pytest.raises(InputError) as refused:
        load_table(site(tmp_path, example.replace("10 H2O", "9 H2O")))
    assert str(refused.value).removeprefix(f"{tmp_path}/") in page
