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


def test_check_warns_of_cells_longer_than_twice_the_dispersivity(case_file, capsys):
    """20 cm in 8 cells of 2.5 cm, dispersivity 1 cm: 10 cells would do."""
    (warning,) = as_json(capsys, "check", str(case_file))["column_warnings"]
    assert "layer sand: cells of 0.025 m are longer than twice the dispersivity, 0.01 m" in warning
    assert "10 cells" in warning
    case_file.write_text(GYPSUM.replace("cells = 8", "cells = 10"))
    assert as_json(capsys, "check", str(case_file))["column_warnings"] == []


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
        "pH", "pe", "Eh_V", "temperature_K", "ionic_strength", "water_activity",
        "charge_error_percent", "dissolved", "valences", "oxygen_saturation_percent", "species",
        "saturation", "gases", "warnings",
    }  # fmt: skip
    assert mine["pe"] is mine["Eh_V"] is mine["oxygen_saturation_percent"] is None
    assert mine["valences"] == mine["dissolved"]
    assert mine["pH"] == pytest.approx(5.4, abs=1e-9)
    assert mine["temperature_K"] == pytest.approx(285.15)
    # 24 mg/L over 65.38 g/mol, in water of 0.9995 kg/L
    assert mine["dissolved"]["Zn^2+"] == pytest.approx(24e-3 / 65.38 / 0.9995, rel=2e-4)
    held = sum(each["molality"] for name, each in mine["species"].items() if name in ("Zn^2+", "ZnSO4"))
    assert 0.9 < held / mine["dissolved"]["Zn^2+"] <= 1.0
    assert any("below detection" in warning for warning in mine["warnings"])
    assert mine["saturation"]["gypsum"] < 0.0


def test_assay_certifies_if_asked(waters_file, capsys):
    found = as_json(capsys, "assay", str(waters_file), "--certificate")["waters"]["mine"]["certificate"]
    assert set(found) == {"balance", "ionic_strength", "ln_activity"}
    assert 0.0 <= max(found["balance"].values()) < 1e-12
    assert 0.0 < max(found["ln_activity"].values()) < 1e-12
    assert main(["assay", str(waters_file), "mine", "--certificate"]) == 0
    printed = capsys.readouterr().out
    for word in ("Certificate", "mass balances", "ln activities", "32 digits"):
        assert word in printed
    assert main(["assay", str(waters_file), "mine"]) == 0
    assert "Certificate" not in capsys.readouterr().out


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


def test_a_constant_is_shown_at_the_temperature_asked_for(capsys):
    assert main(["constants", "mackinawite", "--temperature", "12 degC"]) == 0
    printed = capsys.readouterr().out
    for word in ("12 degC", "0 to 50 degC", "from memory", "Published values not chosen", "FeS(s) + H^+"):
        assert word in printed
    found = as_json(capsys, "constants", "mackinawite", "--temperature", "12 degC")[0]
    # -3.5 with -30 kJ/mol, van 't Hoff: 30000 / (8.314462618 ln 10) (1/285.15 - 1/298.15) = 0.2396
    assert found["log10_k_at_K"]["285.15"] == pytest.approx(-3.5 + 0.2396, abs=1e-4)
    assert found["valid_K"] == pytest.approx([273.15, 323.15])


def test_a_held_component_names_its_couple(capsys):
    assert main(["constants", "Fe^3+"]) == 0
    assert "Fe(II)/Fe(III)" in capsys.readouterr().out
    assert as_json(capsys, "constants", "Fe^3+")[0]["couple"] == "Fe(II)/Fe(III)"


def test_interactions_of_ions_are_shown(capsys):
    assert as_json(capsys, "constants", "Cl^-/Na^+")[0]["value_kg_mol"] == 0.03
    assert main(["constants", "Na^+"]) == 0
    assert "Na^+/SO4^2-" in capsys.readouterr().out
    assert main(["constants", "Na^+/Mg^2+"]) == 2
    assert "of Na^+ it has Na^+/Cl^-" in capsys.readouterr().err


def test_a_file_of_ones_own_is_shown_and_checked(tmp_path, capsys):
    path = tmp_path / "site.toml"
    path.write_text("""
[species."ZnNO3^+"]
reaction = "Zn^2+ + NO3^- = ZnNO3^+"
log10_k = {value = 0.4, sd = 0.2, source = "judgement"}
""")
    assert as_json(capsys, "constants", "ZnNO3^+", "--constants", str(path))[0]["log10_k"] == 0.4
    path.write_text(path.read_text().replace("Zn^2+ + NO3^-", "Zn^2+ + Cl^-"))
    assert main(["constants", "ZnNO3^+", "--constants", str(path)]) == 2
    assert ":3: species.ZnNO3^+.reaction is not balanced" in capsys.readouterr().err


def test_doubts_are_told_in_words(capsys):
    """Sources by their authors, not by keys of the table; what an enthalpy is known to."""
    assert main(["constants", "HSO4-"]) == 0
    printed = " ".join(capsys.readouterr().out.split())
    assert "enthalpy 16.1 ± 3.2 kJ/mol" in printed
    assert "22.4 kJ/mol from the formation enthalpies of Cox, Wagman & Medvedev (1989)" in printed
    assert main(["constants", "NO2-"]) == 0
    printed = capsys.readouterr().out
    assert "the redox table of Stumm & Morgan (1996) and" in printed
    assert "stumm1996" not in printed


def test_solubility_of_the_solids_of_a_metal(capsys):
    asked = ["constants", "Zn", "--solubility", "--sulfide", "0.033 g/L", "--with", "SO4=10 mmol/L"]
    assert main(asked) == 0
    printed = capsys.readouterr().out
    for word in ("pH 7, 25 degC", "sphalerite", "least soluble", "ideal", "for want of", "pe or Eh"):
        assert word in printed
    assert "covellite" not in printed
    found = as_json(capsys, *asked)
    assert found["activity"] == "ideal"
    assert found["given_mol_kg"]["HS^-"] == pytest.approx(1.0e-3, rel=5e-3)  # over 33.07 g/mol and 0.997 kg/L
    zinc = {each["mineral"]: each for each in found["solids"]}
    # -6.4 by verification/test_sulfidic_floor.py
    assert zinc["fresh zinc sulfide"]["dissolved_mol_kg"] == pytest.approx(10**-6.4, rel=0.15)
    assert zinc["fresh zinc sulfide"]["low_mol_kg"] < zinc["fresh zinc sulfide"]["dissolved_mol_kg"]
    assert [name for name, each in zinc.items() if each["least_soluble"]] == ["sphalerite"]
    assert zinc["smithsonite"]["dissolved_mol_kg"] is None


def test_solubility_of_all_solids_in_the_cold_warns_of_constants(capsys):
    assert main(["constants", "--solubility", "--pH", "9", "--temperature", "5 degC"]) == 0
    printed = capsys.readouterr()
    assert "at 5 degC" in printed.err
    assert "used outside the temperatures" in printed.err
    for word in ("pH 9, 5 degC", "zincite", "HS^-, pe or Eh", "<1e-12"):
        assert word in printed.out


def test_solubility_at_a_pe(capsys):
    """pe and Eh are the same water, and with either no solid waits for electrons."""
    asked = ["constants", "Fe", "--solubility", "--sulfide", "1e-4 mol/L"]
    at_pe = as_json(capsys, *asked, "--pe", "-3")
    at_potential = as_json(capsys, *asked, "--Eh", "-177.48 mV")  # 3 times 59.16 mV
    assert at_pe["pe"] == -3.0
    assert at_potential["pe"] == pytest.approx(-3.0, abs=1e-3)
    assert at_pe["Eh_V"] == pytest.approx(-0.17748, abs=1e-5)
    iron = {each["mineral"]: each for each in at_pe["solids"]}
    assert {"pyrite", "hematite", "magnetite", "mackinawite"} <= set(iron)
    assert {each["metal"] for each in at_pe["solids"]} == {"Fe^2+"}
    assert [name for name, each in iron.items() if each["least_soluble"]] == ["pyrite"]
    for each in at_potential["solids"]:
        assert not each["needs_electrons"]
    assert as_json(capsys, *asked)["pe"] is None
    assert main([*asked, "--pe", "-3"]) == 0
    assert "pH 7, pe -3 (Eh -177 mV), 25 degC" in capsys.readouterr().out
    assert main([*asked, "--pe", "-8"]) == 0
    assert "hydrogen would have" in capsys.readouterr().err


def test_a_solid_without_a_number_says_what_it_wants(capsys):
    assert main(["constants", "pyrite", "--solubility"]) == 0
    printed = capsys.readouterr().out
    assert printed.startswith("Without a number at pH 7, 25 degC")
    assert "HS^-, pe or Eh  pyrite" in printed


@pytest.mark.parametrize(("arguments", "said"), [
    (["--pH", "7"], "add --solubility"),
    (["--pe", "2"], "add --solubility"),
    (["--solubility", "--pe", "2", "--Eh", "0.1 V"], "keep one of them"),
    (["--solubility", "--Eh", "310"], 'did you mean "310 mV"?'),
    (["--solubility", "--pe", "30"], "oxygen would have"),
    (["--solubility", "--pH", "17"], "a pH is between -2 and 16"),
    (["--solubility", "--sulfide", "much"], "not an amount in water"),
    (["--solubility", "--sulfide", "1e-4 mol"], "where an amount in water is needed"),
    (["--solubility", "--sulfide", "-1 mg/L"], "not below zero"),
    (["--solubility", "--with", "SO4"], "an ion and its amount"),
    (["--solubility", "--with", "XO4=1 mg/L"], 'names "XO4"'),
    (["--solubility", "--sulfide", "1 mg/L", "--with", "H2S=1 mg/L"], "gives HS^- twice"),
    (["--solubility", "Na"], "for which no solid is named"),
    (["--solubility", "sphalerit"], "did you mean sphalerite?"),
    (["--temperature", "12"], 'did you mean "12 degC"?'),
    (["--temperature", "90 degC"], "between 0 and 50 degC"),
])  # fmt: skip
def test_constants_refuses(arguments, said, capsys):
    assert main(["constants", *arguments]) == 2
    assert said in capsys.readouterr().err


def test_check_and_assay_tell_of_constants_in_one_line(case_file, waters_file, capsys):
    assert main(["assay", str(waters_file), "mine"]) == 0
    told = [line for line in capsys.readouterr().err.splitlines() if "outside the temperatures" in line]
    assert len(told) == 1
    assert "water mine: at 12 degC" in told[0]
    found = as_json(capsys, "assay", str(waters_file), "mine")["waters"]["mine"]
    assert sum("outside the temperatures" in warning for warning in found["warnings"]) == 1
    fine = GYPSUM.replace("cells = 8", "cells = 10")
    case_file.write_text(fine + '[chemistry]\nalso = ["siderite"]\n')
    assert as_json(capsys, "check", str(case_file))["column_warnings"] == []  # 25 degC, and no iron
    cold = GYPSUM.replace("[waters", 'temperature = "5 degC"\n[waters', 1)
    case_file.write_text(cold.replace("{Ca = ", '{Zn = "1 mg/L", Ca = ', 1))
    assert main(["check", str(case_file)]) == 0
    told = [line for line in capsys.readouterr().err.splitlines() if "outside the temperatures" in line]
    assert len(told) == 1
    assert told[0].startswith("warning: at 5 degC")


def test_a_constant_is_found_by_another_name(capsys):
    assert as_json(capsys, "constants", "Zinc oxide")[0]["name"] == "zincite"


def test_an_unknown_constant_gets_a_suggestion(capsys):
    assert main(["constants", "calcit"]) == 2
    assert "did you mean calcite?" in capsys.readouterr().err
