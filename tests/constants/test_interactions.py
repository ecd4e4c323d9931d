"""Interaction coefficients: what the table holds, what a file changes, how a faulty pair is refused."""

import pytest

from gossan.base.errors import InputError
from gossan.base.notation import charge_of
from gossan.constants.load import load_table

TABLE = load_table()


def test_each_pair_stands_once_cation_first_and_in_si():
    assert len(TABLE.interactions) == 85
    for (first, second), interaction in TABLE.interactions.items():
        assert (interaction.first, interaction.second) == (first, second)
        assert (second, first) not in TABLE.interactions
        assert charge_of(first) > 0 > charge_of(second)
        assert interaction.coefficient.sd > 0.0
        assert interaction.coefficient.unit == "kg/mol"
    # the interval of the tables, 0.03 +/- 0.01, is two standard uncertainties
    sodium = TABLE.interactions["Na^+", "Cl^-"]
    assert (sodium.name, sodium.coefficient.value, sodium.coefficient.sd) == ("Na^+/Cl^-", 0.03, 0.005)
    assert TABLE.interactions["Na^+", "Mg(C2O4)2^2-"].coefficient.from_memory is False
    assert sodium.coefficient.from_memory


def test_background_salts_are_understood():
    assert "ClO4^-" not in TABLE.components
    assert TABLE.interactions["Zn^2+", "ClO4^-"].coefficient.value == 0.33


def test_complexes_that_a_coefficient_holds_are_named():
    assert TABLE.interactions["Na^+", "SO4^2-"].holds == ("NaSO4^-",)
    assert TABLE.interactions["Zn^2+", "Cl^-"].holds == ("ZnCl2", "ZnCl3^-")
    assert TABLE.interactions["Cd^2+", "Cl^-"].holds == ()
    for (first, second), interaction in TABLE.interactions.items():
        for name in interaction.holds:
            assert set(TABLE.species[name].reaction.components) - {"H^+"} <= {first, second, "CO3^2-"}


def test_a_users_file_adds_and_replaces_pairs(tmp_path):
    path = tmp_path / "site.toml"
    path.write_text("""
[interactions]
"Na^+/Cl^-" = {value = 0.05, sd = 0.01, source = "judgement", seen = true}
"CO2/Na^+" = {value = 0.1, sd = 0.02, source = "judgement"}
"CaF^+/Cl^-" = {value = 0.1, sd = 0.05, source = "judgement"}
[components."F^-"]
[species."CaF^+"]
reaction = "Ca^2+ + F^- = CaF^+"
log10_k = {value = 0.94, sd = 0.1, source = "judgement"}
""")
    table = load_table(path)
    assert table.interactions["Na^+", "Cl^-"].coefficient.value == 0.05
    assert table.interactions["CO2", "Na^+"].coefficient.value == 0.1
    assert ("CaF^+", "Cl^-") in table.interactions
    assert len(table.interactions) == len(TABLE.interactions) + 2


NUMBER = '{value = 0.1, sd = 0.1, source = "judgement"}'
FAULTY = [
    (f'"Na^+" = {NUMBER}', "is no pair of ions"),
    (f'"Na^+/Cl++" = {NUMBER}', "no readable charge"),
    (f'"Na+/Cl^-" = {NUMBER}', "write Na^+ for 'Na+'"),
    (f'"Na^+/Cll^-" = {NUMBER}', "names Cll^-, which the table lacks: did you mean Cl^-?"),
    (f'"Na^+/K^+" = {NUMBER}', "are ions of one sign"),
    (f'"CO2/O2" = {NUMBER}', "are two neutral species"),
    (f'"Cl^-/Na^+" = {NUMBER}', "write Na^+/Cl^-"),
    (f'"Na^+/CO2" = {NUMBER}', "write CO2/Na^+"),
    ('"Na^+/Cl^-" = 0.1', "is 0.1: write {value"),
    ('"Na^+/Cl^-" = {value = 0.1, source = "judgement"}', "has no sd"),
    ('"Na^+/Cl^-" = {value = 0.1, sd = 0.1}', "has no source"),
    ('"Na^+/Cl^-" = {value = 0.1, sd = 0.1, source = "judgment"}', "did you mean judgement?"),
    ('"Na^+/Cl^-" = {value = 0.1, holds = "NaCl"}', "write a list of complexes"),
    ('"Na^+/Cl^-" = {value = 0.1, holds = ["NaSO4"]}', "holds NaSO4, which the table lacks"),
]


@pytest.mark.parametrize(("line", "says"), FAULTY)
def test_a_faulty_pair_is_refused_with_file_line_and_key(tmp_path, line, says):
    path = tmp_path / "site.toml"
    path.write_text(f"\n[interactions]\n{line}\n", encoding="utf-8")
    with pytest.raises(InputError) as refused:
        load_table(path)
    (fault,) = refused.value.faults
    assert fault.line == 3
    assert fault.key == "interactions." + line.split('"')[1]
    assert says in str(fault)


def test_a_section_of_another_kind_is_refused(tmp_path):
    path = tmp_path / "site.toml"
    path.write_text('interactions = "none"\n')
    with pytest.raises(InputError, match="interactions is no section"):
        load_table(path)
