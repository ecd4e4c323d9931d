"""Constants used outside the temperatures they are known for are told in one line."""

import pytest

from gossan.chemistry.system import build_system
from gossan.chemistry.validity import beyond_validity, validity_note
from gossan.constants.load import load_table

TABLE = load_table()
CARBONATE = build_system(TABLE, ["Ca^2+", "CO3^2-", "Fe^2+"], ["calcite", "siderite"])


@pytest.mark.parametrize(("celsius", "names"), [
    # siderite's equation begins at 25 degC; FeHCO3^+, FeCO3 and hydroxides of iron have no enthalpy: 15 to 35
    (25.0, ()),
    (15.0, ("siderite",)),
    (10.0, ("siderite", "FeHCO3^+", "FeCO3", "Fe(OH)2", "Fe(OH)3^-")),
    (40.0, ("FeHCO3^+", "FeCO3", "Fe(OH)2", "Fe(OH)3^-")),
])  # fmt: skip
def test_what_is_beyond_its_range(celsius, names):
    assert beyond_validity(TABLE, CARBONATE, 273.15 + celsius) == names


def test_only_what_the_system_holds_counts():
    calcium = build_system(TABLE, ["Ca^2+", "CO3^2-"], ["calcite", "siderite"])
    assert beyond_validity(TABLE, calcium, 273.15 + 5.0) == ()


def test_the_note_counts_and_names_the_first():
    note = validity_note(TABLE, CARBONATE, 283.15)
    assert note.startswith("at 10 degC 5 constants are used outside")
    assert "(siderite, FeHCO3^+, FeCO3 ...)" in note
    assert validity_note(TABLE, CARBONATE, 288.15).startswith("at 15 degC one constant is used")
    assert validity_note(TABLE, CARBONATE, 298.15) == ""


def test_couples_count_where_they_are_coupled(tmp_path):
    """A half reaction without an enthalpy is known from 15 to 35 degC, and used only where it is coupled."""
    path = tmp_path / "site.toml"
    path.write_text("""
[components."Mn^3+"]
half_reaction = "Mn^2+ = Mn^3+ + e^-"
log10_k = {value = -25.5, sd = 0.1, source = "judgement"}
""")
    table = load_table(path)
    held = build_system(table, ["Mn^2+", "Mn^3+"], [])
    coupled = build_system(table, ["Mn^2+", "Mn^3+"], [], coupled=["Mn^3+"])
    assert "Mn^3+" not in beyond_validity(table, held, 273.15 + 10.0)
    assert "Mn^3+" in beyond_validity(table, coupled, 273.15 + 10.0)
    assert "Mn^3+" not in beyond_validity(table, coupled, 273.15 + 20.0)
