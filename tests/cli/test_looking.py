"""`check`, `assay`, `constants`: commands that look and write nothing."""

from __future__ import annotations

import json

import pytest
from tests.support.small_cases import GYPSUM

from gossan.cli.main import main


def as_json(capsys, *arguments: str):
    assert main([*arguments, "--json"]) == 0
    return json.loads(capsys.readouterr().out)


def test_check_says_what_would_run_and_writes_nothing(case_file, tmp_path, capsys):
    before = sorted(tmp_path.iterdir())
    assert main(["check", str(case_file)]) == 0
    printed = capsys.readouterr()
    for word in ("sand", "80 L per m2", "4.8 h", "4 pore volumes", "gypsum", "outlet at 0.2 m"):
        assert word in printed.out
    assert "in order" in printed.err
    assert sorted(tmp_path.iterdir()) == before


def test_check_counts_as_arithmetic_does(case_file, capsys):
    found = as_json(capsys, "check", str(case_file))
    assert found["cells"] == 8
    assert found["pore_volume_m"] == pytest.approx(0.2 * 0.4)
    assert found["residence_s"] == pytest.approx(0.2 * 86400.0)
    assert found["pore_volumes"] == pytest.approx(4.0)
    assert found["steps"] >= 4 * 8 / 0.5
    assert "gypsum" in found["may_form"]


def test_check_tells_what_may_only_dissolve(case_file, capsys):
    case_file.write_text(GYPSUM + '[chemistry]\nminerals = ["portlandite"]\n')
    assert as_json(capsys, "check", str(case_file))["may_dissolve"] == ["gypsum"]


def test_check_lists_every_fault_with_its_line(case_file, capsys):
    case_file.write_text(GYPSUM.replace("porosity = 0.4", "porosity = 40").replace("20 cm", "20 cmm"))
    assert main(["check", str(case_file)]) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert ":11:" in printed.err
    assert ":13:" in printed.err


def test_check_of_waters_alone_is_in_order(waters_file, capsys):
    assert main(["check", str(waters_file)]) == 0
    assert "below detection" in capsys.readouterr().err


def test_check_refuses_half_a_column(case_file, capsys):
    case_file.write_text(GYPSUM.partition("[run]")[0])
    assert main(["check", str(case_file)]) == 2
    assert "run is missing" in capsys.readouterr().err


def test_schema_is_a_json_schema(capsys):
    assert main(["check", "--schema"]) == 0
    schema = json.loads(capsys.readouterr().out)
    assert schema["type"] == "object"
    assert "layers" in schema["properties"]


def test_assay_json_is_what_the_contract_says(waters_file, capsys):
    found = as_json(capsys, "assay", str(waters_file))["waters"]
    assert list(found) == ["mine", "gate"]
    mine = found["mine"]
    assert set(mine) == {
        "pH", "pe", "temperature_K", "ionic_strength", "charge_error_percent", "dissolved", "species",
        "saturation", "gases", "warnings",
    }  # fmt: skip
    assert mine["pe"] is None
    assert mine["pH"] == pytest.approx(5.4, abs=1e-9)
    assert mine["temperature_K"] == pytest.approx(285.15)
    # 24 mg/L over 65.38 g/mol, in water of 0.9995 kg/L
    assert mine["dissolved"]["Zn^2+"] == pytest.approx(24e-3 / 65.38 / 0.9995, rel=2e-4)
    held = sum(each["molality"] for name, each in mine["species"].items() if name in ("Zn^2+", "ZnSO4"))
    assert 0.9 < held / mine["dissolved"]["Zn^2+"] <= 1.0
    assert any("below detection" in warning for warning in mine["warnings"])
    assert mine["saturation"]["gypsum"] < 0.0


def test_assay_warns_of_hydrogen_sulfide_and_counts_gases_in_bar(waters_file, capsys):
    gate = as_json(capsys, "assay", str(waters_file), "gate")["waters"]["gate"]
    molality = gate["species"]["H2S"]["molality"]
    # Henry's constant at 12 degC, mol/kg/atm: handbooks' Bunsen coefficients give 0.145, 2 % above at 25 degC
    assert gate["gases"]["H2S"] == pytest.approx(molality / 0.142 * 1.01325, rel=0.02)
    assert any("NIOSH" in warning for warning in gate["warnings"])


def test_assay_prints_shares_that_add_up(waters_file, capsys):
    from gossan.views.assay import assay

    parts = assay(waters_file)["mine"].parts(0.0)
    for component in ("Ca^2+", "Zn^2+", "SO4^2-"):
        shares = [part.share for part in parts if part.component == component]
        assert sum(shares) == pytest.approx(1.0, abs=1e-9)
    assert main(["assay", str(waters_file), "mine"]) == 0
    printed = capsys.readouterr().out
    for word in ("Water mine", "charge error", "Saturation indices", "gypsum", "may form", "mg/L"):
        assert word in printed
    assert "Water gate" not in printed


@pytest.mark.parametrize(("arguments", "said"), [
    (["lab.csv"], "part of the contract but has not landed yet"),
    (["nowhere.toml"], "cannot be read"),
])  # fmt: skip
def test_assay_refuses(arguments, said, capsys):
    assert main(["assay", *arguments]) == 2
    assert said in capsys.readouterr().err


def test_assay_suggests_a_water(waters_file, capsys):
    assert main(["assay", str(waters_file), "mind"]) == 2
    assert 'did you mean "mine"?' in capsys.readouterr().err


def test_traces_are_printed_as_traces():
    from gossan.views.scales import AMOUNT, dissolved_text

    assert dissolved_text(0.99e-9, AMOUNT) == "<1e-12 mol/L"  # 1e-12 mol/L is 1e-9 mol/m3
    assert dissolved_text(1.01e-9, AMOUNT) == "1.01e-09"
    assert dissolved_text(-0.5, AMOUNT) == "-0.5"


def test_constants_lists_all_with_status(capsys):
    assert main(["constants"]) == 0
    printed = capsys.readouterr().out
    for word in ("component", "species", "mineral", "gas", "from memory", "seen", "sphalerite", "CO2"):
        assert word in printed


def test_a_constant_comes_with_error_source_and_temperatures(capsys):
    assert main(["constants", "calcite"]) == 0
    printed = capsys.readouterr().out
    for word in ("±", "Plummer", "5 degC", "35 degC", "cm3/mol", "CaCO3(s) = "):
        assert word in printed
    found = as_json(capsys, "constants", "calcite")[0]
    # solubility product of calcite at 25 degC, Plummer & Busenberg (1982): -8.480
    assert found["log10_k_at_K"]["298.15"] == pytest.approx(-8.48, abs=0.005)


def test_a_constant_is_found_by_another_name(capsys):
    assert as_json(capsys, "constants", "Zinc oxide")[0]["name"] == "zincite"


def test_an_unknown_constant_gets_a_suggestion(capsys):
    assert main(["constants", "calcit"]) == 2
    assert "did you mean calcite?" in capsys.readouterr().err
