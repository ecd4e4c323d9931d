"""`gossan run`: what it prints and leaves, its exit codes, stopping and going on."""

from __future__ import annotations

import json
import signal
import time
from pathlib import Path

import numpy as np
import pytest
from tests.support.small_cases import GYPSUM

from gossan.base.errors import SolveError
from gossan.cli.main import main
from gossan.coupling.march import Clogged
from gossan.store.read import open_result

ROUND_OFF = 1e-12  # what the ledger is held to


def run_json(capsys, *arguments: str) -> tuple[int, dict]:
    code = main(["run", *arguments, "--json"])
    return code, json.loads(capsys.readouterr().out)


def test_json_is_what_the_contract_says(case_file, capsys):
    out = case_file.with_suffix(".h5")
    code, found = run_json(capsys, str(case_file), "-o", str(out))
    assert code == 0
    assert set(found) == {
        "status", "reason", "ports", "conductivity", "head_loss", "capacity", "warnings", "ledger_error",
        "splitting_error", "steps", "seconds", "file",
    }  # fmt: skip
    assert (found["status"], found["reason"], found["file"]) == ("finished", None, str(out))
    outlet = found["ports"]["outlet"]
    for entry in outlet.values():
        assert set(entry) == {"limit", "first_exceeded_s", "error_s", "grid_error_s", "last", "peak"}
    # 500 mg/L of sulfate, 96.06 g/mol
    assert outlet["SO4^2-"]["limit"] == pytest.approx(500 / 96.06, rel=1e-4)
    assert outlet["SO4^2-"]["first_exceeded_s"] == 0.0
    assert outlet["pH"]["limit"] == [2.0, 12.0]
    assert outlet["pH"]["first_exceeded_s"] is None
    assert outlet["Ca^2+"]["limit"] is None
    assert set(outlet["Zn^2+"].values()) - {outlet["Zn^2+"]["limit"]} == {None}
    assert found["conductivity"]["least_fraction"] == pytest.approx(1.0)
    assert found["conductivity"]["half_at_s"] is None
    assert found["warnings"] == []
    assert found["ledger_error"] < ROUND_OFF
    assert found["steps"] > 60  # 4 pore volumes of 8 cells at half a cell a step


def test_half_a_tracer_step_arrives_with_the_first_pore_volume(finished):
    """Half the feed's concentration passes at 1 PV, less what dispersion leads by."""
    from gossan.views.summary import summary_of

    verdict = next(v for v in summary_of(open_result(finished)).verdicts if v.quantity == "bromide")
    # leads by alpha/L of a pore volume at the most (the advection-dispersion equation's median)
    assert 1.0 - 0.05 < verdict.pore_volumes <= 1.0
    assert 0.0 < verdict.error < 0.05 * 0.1 * 0.2 * 86400.0  # far below 0.1 PV, the interval of the records


def test_a_grid_check_gives_every_answer_the_error_of_its_cells(case_file, capsys):
    path = case_file.with_suffix(".h5")
    assert main(["run", str(case_file), "-o", str(path), "--grid-check", "--json"]) == 0
    ports = json.loads(capsys.readouterr().out)["ports"]
    bromide = ports["outlet"]["bromide"]
    assert 0.0 < bromide["error_s"] < bromide["grid_error_s"] < 0.1 * bromide["first_exceeded_s"]
    assert ports["outlet"]["SO4^2-"]["grid_error_s"] is None  # exceeded from the start
    assert main(["run", "--resume", str(path), "--grid-check"]) == 2
    assert main(["run", str(case_file), "-o", str(path), "--grid-check"]) == 2  # the file exists
    assert main(["run", str(case_file), "-o", str(path), "--grid-check", "--overwrite"]) == 0
    assert ", cells ± " in capsys.readouterr().out


def test_threads_must_be_a_number_of_them(case_file, capsys):
    assert main(["run", str(case_file), "--threads", "0"]) == 2
    assert "--threads: 0 is no number of threads: give 1 or more" in capsys.readouterr().err


def test_tables_go_to_standard_output_and_the_caution_to_standard_error(case_file, capsys):
    assert main(["run", str(case_file), "-o", str(case_file.with_suffix(".h5"))]) == 0
    printed = capsys.readouterr()
    words = ("Port outlet", "not in this run", "not in this case", "head loss", "gypsum", "charge", "steps")
    for word in words:
        assert word in printed.out
    assert "confined spaces" in printed.err
    assert "\x1b" not in printed.out


def test_a_run_beyond_the_range_of_its_activity_law_says_so(case_file, capsys):
    brine = '{Na = "0.8 mol/L", Cl = "0.79 mol/L"}'
    case_file.write_text(GYPSUM.replace('{Ca = "20 mg/L", SO4 = "48 mg/L"}', brine))
    out = str(case_file.with_suffix(".h5"))
    assert main(["run", str(case_file), "-o", out, "--json"]) == 0
    printed = capsys.readouterr()
    (warning,) = json.loads(printed.out)["warnings"]
    assert "the davies law is meant for waters up to 0.5" in warning
    assert f"warning: {warning}" in printed.err


def test_the_result_goes_into_the_current_folder_by_default(case_file, tmp_path, monkeypatch):
    elsewhere = tmp_path / "elsewhere"
    elsewhere.mkdir()
    monkeypatch.chdir(elsewhere)
    assert main(["run", str(case_file), "--quiet"]) == 0
    assert (elsewhere / "gypsum.h5").exists()


def test_an_existing_file_is_kept_without_overwrite(case_file, capsys):
    out = case_file.with_suffix(".h5")
    out.write_text("precious")
    assert main(["run", str(case_file), "-o", str(out), "--quiet"]) == 2
    assert "--overwrite" in capsys.readouterr().err
    assert out.read_text() == "precious"
    assert main(["run", str(case_file), "-o", str(out), "--quiet", "--overwrite"]) == 0


def test_a_limit_exceeded_is_exit_code_1_where_limits_are_enforced(case_file, capsys):
    out = str(case_file.with_suffix(".h5"))
    assert main(["run", str(case_file), "-o", out, "--quiet", "--enforce-limits"]) == 1
    assert "limit exceeded: SO4^2- at outlet" in capsys.readouterr().err
    kept = GYPSUM.replace('"500 mg/L"', '"5 g/L"').replace('"0.5 mmol/L"', '"2 mmol/L"')
    case_file.write_text(kept)
    assert main(["run", str(case_file), "-o", out, "--quiet", "--enforce-limits", "--overwrite"]) == 0


@pytest.mark.parametrize(("arguments", "said"), [
    ([], "no case is named"),
    (["nowhere.toml"], "cannot be read"),
    (["."], "is a folder"),
    (["--resume", "nowhere.h5"], "does not exist"),
    (["--resume", "nowhere.h5", "-o", "other.h5"], "takes its case from the file"),
])  # fmt: skip
def test_bad_input_is_exit_code_2(arguments, said, capsys):
    assert main(["run", *arguments]) == 2
    printed = capsys.readouterr()
    assert said in printed.err
    assert printed.out == ""


def test_a_folder_that_is_not_there_is_bad_input(case_file, capsys):
    assert main(["run", str(case_file), "-o", str(case_file.parent / "no" / "where.h5"), "--quiet"]) == 2
    assert "Traceback" not in capsys.readouterr().err


def test_a_case_of_waters_alone_cannot_run(waters_file, capsys):
    assert main(["run", str(waters_file)]) == 2
    assert "layers" in capsys.readouterr().err


def stopping(error: BaseException, after: int):
    """A march that breaks off."""
    from gossan import recording

    whole = recording.march

    def march(*arguments):
        for number, stride in enumerate(whole(*arguments)):
            if number == after:
                raise error
            yield stride

    return march


def test_a_clogged_column_is_done(case_file, capsys, monkeypatch):
    monkeypatch.setattr("gossan.recording.march", stopping(Clogged(3, 100.0), 20))
    code, found = run_json(capsys, str(case_file), "-o", str(case_file.with_suffix(".h5")))
    assert (code, found["status"], found["reason"]) == (0, "finished", "clogged")


def test_numerics_that_give_up_are_exit_code_4_and_name_the_place(case_file, capsys, monkeypatch):
    error = SolveError("Newton went astray", cell=3, layer="sand", x=0.09, time=7200.0)
    monkeypatch.setattr("gossan.recording.march", stopping(error, 20))
    out = case_file.with_suffix(".h5")
    assert main(["run", str(case_file), "-o", str(out), "--quiet"]) == 4
    said = capsys.readouterr().err
    for word in ("cell 3", "layer sand", "Newton went astray", f"--resume {out}"):
        assert word in said
    monkeypatch.undo()
    assert main(["run", "--resume", str(out), "--quiet"]) == 0
    assert open_result(out).status == "finished"


def test_a_finished_file_needs_no_resuming(finished, capsys):
    before = finished.read_bytes()
    assert main(["run", "--resume", str(finished)]) == 0
    assert "nothing to resume" in capsys.readouterr().err
    assert finished.read_bytes() == before


def test_ctrl_c_stops_cleanly_and_the_run_goes_on_to_the_same_bits(tmp_path, started):
    long = GYPSUM.replace('"4 PV"', '"400 PV"').replace('"0.5 PV"', '"20 PV"').replace('"0.1 PV"', '"5 PV"')
    case, out, whole = tmp_path / "long.toml", tmp_path / "long.h5", tmp_path / "whole.h5"
    case.write_text(long)
    process = started("run", str(case), "-o", str(out), "--quiet")
    assert appears(out, process)
    time.sleep(1.0)  # some steps
    process.send_signal(signal.SIGINT)
    said = process.communicate(timeout=120)[1]
    assert process.returncode == 3, said
    assert f"gossan run --resume {out}" in said
    assert "Traceback" not in said
    stopped = open_result(out)
    assert (stopped.status, stopped.reason) == ("stopped", "interrupted")
    assert main(["run", "--resume", str(out), "--quiet"]) == 0
    assert main(["run", str(case), "-o", str(whole), "--quiet"]) == 0
    resumed, straight = open_result(out), open_result(whole)
    assert_same_end(resumed, straight)


def appears(path: Path, process) -> bool:
    """Wait for a file; a first run may have to compile."""
    until = time.monotonic() + 240.0
    while time.monotonic() < until and process.poll() is None:
        if path.exists():
            return True
        time.sleep(0.02)
    return False


def assert_same_end(one, other) -> None:
    for name in ("dissolved", "solid", "porosity", "pH"):
        assert np.array_equal(one.profiles[name].values[-1], other.profiles[name].values[-1])
    assert np.array_equal(one.ports["outlet"].passed.values[-1], other.ports["outlet"].passed.values[-1])
    assert one.steps.count == other.steps.count
