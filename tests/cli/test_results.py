"""`draw` and `export`: what is made of a result file."""

from __future__ import annotations

import csv
import io

import numpy as np
import pytest

from gossan.cli.main import main
from gossan.store.layout import variable
from gossan.store.read import open_result


def rows_of(capsys, finished, what: str) -> list[dict[str, str]]:
    assert main(["export", str(finished), what]) == 0
    return list(csv.DictReader(io.StringIO(capsys.readouterr().out)))


def test_port_rows_read_back_to_the_same_numbers(finished, capsys):
    rows = rows_of(capsys, finished, "ports")
    port = open_result(finished).ports["outlet"]
    assert len(rows) == port.count
    name = "dissolved SO4^2- (mol m-3)"
    written = np.array([float(row[name]) for row in rows])
    assert np.array_equal(written, port.dissolved.sel(component="SO4^2-").values)
    assert rows[0]["pe"] == ""  # not known
    assert rows[0]["port"] == "outlet"


def test_profile_rows_are_in_long_form(finished, capsys):
    rows = rows_of(capsys, finished, "profiles")
    profiles = open_result(finished).profiles
    assert len(rows) == profiles.count * 8
    head = variable("profiles", "time").header
    assert [float(row[head]) for row in rows[:9]] == [0.0] * 8 + [profiles.time.values[1]]
    assert {row["layer"] for row in rows} == {"sand"}
    gypsum = np.array([float(row["solid gypsum (mol m-3)"]) for row in rows])
    assert np.array_equal(gypsum, profiles.solid.sel(mineral="gypsum").values.ravel())


def test_ledger_rows_close(finished, capsys):
    last = rows_of(capsys, finished, "ledger")[-1]
    entered, left, stored = (float(last[f"{what} Ca^2+ (mol m-2)"]) for what in ("entered", "left", "stored"))
    assert entered - left - stored == pytest.approx(0.0, abs=1e-12 * left)


def test_limit_rows_hold_one_limit_each(finished, capsys):
    rows = rows_of(capsys, finished, "limits")
    assert [row["quantity"] for row in rows] == ["SO4^2-", "bromide", "Zn^2+", "pH"]
    assert [row["unit"] for row in rows] == ["mol m-3", "mol m-3", "mol m-3", "1"]
    assert rows[2]["first exceeded (s)"] == ""


def test_bed_rows_hold_heads_and_what_is_left(finished, capsys):
    rows = rows_of(capsys, finished, "bed")
    head = open_result(finished).profiles.head.values
    assert [float(row["head loss of the column (m)"]) for row in rows] == head[:, 0].tolist()
    assert rows[0]["head loss of sand (m)"] == rows[0]["head loss of the column (m)"]
    assert float(rows[0]["left of the column"]) == 1.0 == float(rows[0]["left by power 8"])


def test_certificate_rows_judge_every_cell_of_the_last_state(finished, capsys):
    rows = rows_of(capsys, finished, "certificate")
    profiles = open_result(finished).profiles
    assert len(rows) == 8
    assert {row["water"] for row in rows} == {"flowing"}
    assert {float(row["time (s)"]) for row in rows} == {float(profiles.time.values[-1])}
    # a hundred roundings
    heads = ("ionic_strength", "minerals present", "minerals absent", "balance SO4^2-", "ln_activity Ca^2+")
    for head in heads:
        assert all(0.0 <= float(row[head]) < 1e-13 for row in rows), head
    assert any(float(row["balance SO4^2-"]) > 0.0 for row in rows)


def test_a_certificate_needs_a_checkpoint(finished, tmp_path, capsys):
    import h5py

    bare = tmp_path / "bare.h5"
    bare.write_bytes(finished.read_bytes())
    with h5py.File(bare, "a") as file:
        del file["checkpoint"]
    assert main(["export", str(bare), "certificate"]) == 2
    assert "no whole checkpoint" in capsys.readouterr().err


def test_export_writes_a_file(finished, tmp_path, capsys):
    out = tmp_path / "ports.csv"
    assert main(["export", str(finished), "ports", "-o", str(out)]) == 0
    assert out.read_text().startswith("port,x (m),time (s)")
    assert capsys.readouterr().out == ""


def test_figures_are_written_in_the_format_asked_for(finished, tmp_path, capsys):
    folder = tmp_path / "figures"
    assert main(["draw", str(finished), "-o", str(folder), "--format", "svg"]) == 0
    names = {path.name for path in folder.iterdir()}
    assert names == {f"gypsum-{name}.svg" for name in
                     ("breakthrough-outlet", "dissolved", "minerals", "pores", "ledger")}  # fmt: skip
    assert len(capsys.readouterr().out.splitlines()) == len(names)


@pytest.mark.parametrize("command", [["draw"], ["export", "ports"]])
@pytest.mark.parametrize(("file", "said"), [
    ("nowhere.h5", "does not exist"), (".", "is a folder"), (__file__, "is not HDF5"),
])  # fmt: skip
def test_what_is_no_result_file_is_refused(command, file, said, capsys):
    assert main([command[0], file, *command[1:]]) == 2
    assert said in capsys.readouterr().err


def test_what_cannot_be_written_is_said(finished, tmp_path, capsys):
    blocked = tmp_path / "file"
    blocked.write_text("")
    assert main(["draw", str(finished), "-o", str(blocked)]) == 2
    assert "cannot be written" in capsys.readouterr().err
    assert main(["export", str(finished), "ports", "-o", str(tmp_path)]) == 2
    assert "cannot be written" in capsys.readouterr().err
