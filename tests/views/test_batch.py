"""`gossan.equilibrate`: beakers against arithmetic, against the assay, and with couples."""

from __future__ import annotations

import numpy as np
import pytest

import gossan
from gossan.base.errors import InputError
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table

PURE = {"pH": 7.0}
ACID = {
    "pH": 3.4, "balance_on": "SO4",
    "analysis": {"Fe(III)": "20 mg/L", "Zn": "24 mg/L", "Al": "5 mg/L", "SO4": "300 mg/L", "Ca": "60 mg/L"},
}  # fmt: skip
TWO = """
[waters.mine]
pH = 5.9
balance_on = "SO4"
analysis = {Ca = "180 mg/L", SO4 = "500 mg/L", Zn = "24 mg/L"}
[waters.spring]
pH = 7.5
[chemistry]
minerals = ["gypsum"]
"""


def test_gypsum_in_pure_water_dissolves_to_its_solubility():
    """15.2 mmol/kg (Marshall & Slusher 1966); the rest stays."""
    found = gossan.equilibrate(PURE, minerals={"gypsum": "5 g/L"})
    assert found.dissolved["Ca^2+"] == pytest.approx(0.0152, rel=0.06)
    assert found.saturation["gypsum"] == pytest.approx(0.0, abs=1e-9)
    put_in = 5.0 / 172.164 / 0.99705  # mol/kg: molar mass, density of water at 25 degC
    assert found.solid["gypsum"] == pytest.approx(put_in - found.dissolved["Ca^2+"], rel=1e-4)
    assert found.formed["gypsum"] == pytest.approx(-found.dissolved["Ca^2+"], rel=1e-9)
    assert "gypsum: -1" in repr(found)


def test_what_is_too_little_dissolves_whole():
    found = gossan.equilibrate(PURE, minerals={"gypsum": "1 mmol/kg"})
    assert found.solid == {}
    assert found.dissolved["Ca^2+"] == found.dissolved["SO4^2-"] == pytest.approx(1e-3, rel=1e-12)


def test_limestone_takes_metals_from_acid_water_under_soil_air():
    found = gossan.equilibrate(ACID, minerals={"calcite": "1 g/L"}, gases={"CO2": "0.01 atm"})
    assert 7.0 < found.pH < 7.4  # calcite alone: 7.3 (Stumm & Morgan 1996, ch. 7); with more calcium less
    assert found.gases["CO2"] == pytest.approx(0.0101325, rel=1e-9)
    assert {"ferrihydrite", "smithsonite"} <= {name for name, change in found.formed.items() if change > 0.0}
    iron, zinc = (found.before.dissolved[ion] for ion in ("Fe^3+", "Zn^2+"))
    assert found.formed["ferrihydrite"] == pytest.approx(iron, rel=1e-3)
    assert found.formed["smithsonite"] + found.dissolved["Zn^2+"] == pytest.approx(zinc, rel=1e-9)
    carbon = found.given["CO2"] - found.formed["calcite"] - found.formed["smithsonite"]
    assert found.dissolved["CO3^2-"] == pytest.approx(carbon, rel=1e-9)
    assert found.certificate.worst.max() < 1e-12


def test_nothing_put_in_is_the_assay_once_what_is_oversaturated_has_formed():
    alone = gossan.assay(ACID)["water"]
    found = gossan.equilibrate(ACID, chemistry={"minerals": []})
    assert found.pH == pytest.approx(alone.pH, abs=1e-10)
    assert found.formed == {}
    free = gossan.equilibrate(ACID)
    assert free.solid
    assert all(free.saturation[name] == pytest.approx(0.0, abs=1e-9) for name in free.solid)
    assert all(free.saturation[name] < 1e-9 for name in free.forms & set(free.saturation))


def test_pyrite_burns_where_valences_are_coupled():
    """FeS2 + 3.75 O2 + 3.5 H2O = Fe(OH)3 + 2 SO4^2- + 4 H+ under air, as far as air reaches."""
    found = gossan.equilibrate(
        {"pH": 7.0, "dissolved_oxygen": "8 mg/L"}, chemistry={"redox": "coupled"},
        minerals={"pyrite": "0.1 mmol/kg"}, gases={"O2": "0.2 atm"},
    )  # fmt: skip
    assert found.formed["pyrite"] == pytest.approx(-1e-4, rel=1e-9)
    assert found.dissolved["SO4^2-"] == pytest.approx(2e-4, rel=1e-6)
    assert 3.3 < found.pH < 3.8  # 2 mol of acid a mol of FeS2 beyond the iron's own: some 4e-4
    assert found.pe > 10.0


def test_a_water_of_a_case_is_named_and_follows_the_case(tmp_path):
    path = tmp_path / "two.toml"
    path.write_text(TWO)
    cold, warm = (
        gossan.equilibrate(path, "mine", minerals={"gypsum": "10 g/L"}, temperature=celsius)
        for celsius in ("5 degC", "25 degC")
    )
    assert set(warm.formed) == {"gypsum"}
    assert (cold.temperature, warm.temperature) == (278.15, 298.15)
    assert cold.dissolved["Ca^2+"] < warm.dissolved["Ca^2+"]
    case = gossan.load_case(path)
    assert gossan.equilibrate(case, "spring").pH == pytest.approx(7.0, abs=1e-2)  # pure water


def test_a_system_and_arrays_are_taken_as_ever():
    system = build_system(load_table(), ["Na^+", "Cl^-"], [])
    amounts = np.array([0.0, 0.1, 0.1])
    for found in (gossan.equilibrate(system, amounts), gossan.equilibrate(system, dissolved=amounts)):
        assert found.molality()[1, 0] == pytest.approx(0.1, rel=1e-12)


@pytest.mark.parametrize(("more", "said"), [
    ({"minerals": {"calcit": "1 g/L"}}, "no mineral is called 'calcit': did you mean calcite?"),
    ({"minerals": {"calcite": "1 g"}}, "minerals['calcite'] is \"1 g\", a mass"),
    ({"minerals": {"calcite": "1 meq/L"}}, "the mass or the moles"),
    ({"minerals": {"calcite": "-1 g/L"}}, "minerals['calcite']"),
    ({"minerals": {"ZnS": "1 g/L"}}, "name one: sphalerite"),
    ({"gases": {"CO": "1 atm"}}, 'did you mean "CO2"?'),
    ({"gases": {"CO2": "1"}}, 'did you mean "1 atm"?'),
    ({"temperature": "99 degC"}, 'temperature is "99 degC"'),
])  # fmt: skip
def test_what_is_wrong_is_said(more, said):
    with pytest.raises(InputError) as found:
        gossan.equilibrate(PURE, **more)
    assert said in str(found.value)


def test_a_case_with_two_waters_wants_a_name_and_no_settings(tmp_path):
    path = tmp_path / "two.toml"
    path.write_text(TWO)
    with pytest.raises(InputError, match="name one: mine, spring"):
        gossan.equilibrate(path)
    with pytest.raises(InputError, match="no water is called"):
        gossan.equilibrate(path, "mien")
    with pytest.raises(InputError, match="a case has its own chemistry"):
        gossan.equilibrate(path, "mine", chemistry={})
