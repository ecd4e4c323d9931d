"""A run into a file: what is recorded when, and that it goes on to the same bits however it was stopped."""

from __future__ import annotations

import os
import shutil
import signal
import threading
from pathlib import Path

import h5py
import numpy as np
import pytest
from tests.support.columns import case_of, column
from tests.support.killing import in_a_child
from tests.support.salts import Salt, water, write_salts
from tests.support.small_cases import GYPSUM

import gossan
from gossan import recording
from gossan.base.errors import SolveError
from gossan.case.build import build
from gossan.case.model import Case
from gossan.chemistry.equilibrium import Solver
from gossan.store.checkpoint import decode

WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "5 mmol/L", Ca = "0.5 mmol/L"}
[waters.feed.tracers]
bromide = "1 mmol/L"
[waters.acid]
pH = 4.0
balance_on = "Cl"
analysis = {Ca = "20 mmol/L"}
[waters.pore]
balance_on = "SO4"
analysis = {Na = "1 mmol/L"}
saturated_with = {gypsum = 0.0, calcite = 0.0}
"""
FEEDS = '{from = "0 d", water = "feed"}, {from = "FIRST", water = "acid"}, {from = "SECOND", water = "feed"}'


def feeds(first: str, second: str) -> str:
    return FEEDS.replace("FIRST", first).replace("SECOND", second)


HELD_FLUX = column(
    WATERS, minerals='gypsum = "1 g/kg", calcite = "0.2 g/kg"', cells=8, length="20 cm",
    dispersivity="1 cm", flow='darcy_flux = "8 cm/d"', feed=feeds("1 PV", "1.7 PV"), duration="3 d",
    layer='conductivity = "1 m/d"', run='profiles_every = "0.5 d"\nports_every = "0.13 d"',
    more='[[ports]]\nname = "middle"\nat = "10 cm"',
)  # fmt: skip
HELD_HEAD = column(
    WATERS, minerals='gypsum = "10 g/kg"', cells=8, length="20 cm", dispersivity="10 cm",
    flow='head_drop = "2 cm"\ninlet = "concentration"', feed=feeds("6 h", "10 h"), duration="3 PV",
    layer='conductivity = "1 m/d"',
    run='profiles_every = "0.5 PV"\nports_every = "0.13 PV"\ncoupling = "lie"',
)  # fmt: skip
RETAINED = column(
    WATERS + '[tracers.bromide]\nhalf_life = "1 d"\n[tracers.krypton]\nparent = "bromide"\n',
    minerals='gypsum = "1 g/kg", calcite = "0.2 g/kg"', cells=8, length="20 cm", dispersivity="1 cm",
    flow='darcy_flux = "8 cm/d"', feed=feeds("1 PV", "1.7 PV"), duration="3 d",
    run='profiles_every = "0.5 d"\nports_every = "0.13 d"',
)  # fmt: skip
RETAINED = RETAINED.replace("minerals = {", """
sorption.bromide = {law = "freundlich", coefficient = "0.2 mmol/kg", exponent = 0.6}
sorption.Ca = {law = "langmuir", capacity = "1 mmol/kg", affinity = "0.5 L/mmol"}
immobile = {fraction = 0.3, transfer = "1e-6 1/s"}
minerals = {""")
TEXTS = {
    "held flux, two-stage, days": HELD_FLUX, "held head, lie, pore volumes": HELD_HEAD,
    "isotherms, decay, immobile water": RETAINED,
}  # fmt: skip


@pytest.fixture(params=TEXTS, scope="module")
def text(request):
    return TEXTS[request.param]


@pytest.fixture(scope="module")
def never_stopped(text, tmp_path_factory):
    path = tmp_path_factory.mktemp("whole") / "run.h5"
    assert recording.run_case(case_of(text), path).status == "finished"
    return path


def after(step: int, number: signal.Signals):
    """Progress that sends its own process a signal after so many steps."""
    count = 0

    def progress(share, state):
        nonlocal count
        count += 1
        if count == step:
            os.kill(os.getpid(), number)

    return progress


def assert_same_bits(path: Path, other: Path) -> None:
    """All that two files hold, wall-clock figures apart, and what they would go on from."""
    one, two = gossan.open_result(path), gossan.open_result(other)
    assert one.attributes.keys() == two.attributes.keys()
    for name in one.attributes.keys() - {"started", "wall_clock_seconds"}:
        assert one.attributes[name] == two.attributes[name], name
    for group in one.axes.groups:
        ours, theirs = one._groups[group], two._groups[group]
        for name in set(ours) - ({"seconds"} if group == "steps" else set()):
            assert ours[name].values.tobytes() == theirs[name].values.tobytes(), (group, name)
    assert kept(path) == kept(other)


def kept(path: Path) -> dict:
    """The checkpoint within a file, its arrays as bytes."""
    with h5py.File(path, "r", locking=False) as file:
        parts = decode(file["checkpoint/state"][:].tobytes()).parts
    return {part: in_bytes(values) for part, values in parts.items()}


def in_bytes(value):
    if isinstance(value, dict):
        return {name: in_bytes(each) for name, each in value.items()}
    return value.tobytes() if isinstance(value, np.ndarray) else value


@pytest.mark.parametrize("step", [1, 5, 23, 24, 60])
def test_an_interrupted_run_goes_on_to_the_same_bits(text, never_stopped, tmp_path, step):
    path = tmp_path / "run.h5"
    ending = recording.run_case(case_of(text), path, progress=after(step, signal.SIGINT))
    assert (ending.status, ending.reason) == ("stopped", "interrupted")
    stopped = gossan.open_result(path)
    assert stopped.status == "stopped"
    assert stopped.steps.count == step
    assert stopped.profiles.time.values[-1] == stopped.steps.time.values[-1], "the last state is to be seen"
    assert recording.resume(path).status == "finished"
    assert_same_bits(path, never_stopped)


def test_a_run_stopped_again_and_again_goes_on_to_the_same_bits(text, never_stopped, tmp_path):
    path = tmp_path / "run.h5"
    recording.run_case(case_of(text), path, progress=after(3, signal.SIGINT))
    while recording.resume(path, progress=after(17, signal.SIGINT)).status == "stopped":
        pass
    assert_same_bits(path, never_stopped)


@pytest.mark.parametrize("steps", [(40,), (2, 1, 30)])
def test_a_killed_run_goes_on_to_the_same_bits(text, never_stopped, tmp_path, monkeypatch, steps):
    """Killed in its course, once with a checkpoint after every step and then with the first one alone."""
    path = tmp_path / "run.h5"
    for number, step in enumerate(steps):
        monkeypatch.setattr(recording, "CHECKPOINT_EVERY", 0.0 if number == 0 else 1e9)

        def work(_, step=step, number=number):
            kill = after(step, signal.SIGKILL)
            if number == 0:
                recording.run_case(case_of(text), path, progress=kill)
            else:
                recording.resume(path, progress=kill)

        _, end = in_a_child(work)
        assert end == -signal.SIGKILL
        assert gossan.open_result(path).status == "running"
    assert recording.resume(path).status == "finished"
    assert_same_bits(path, never_stopped)


def test_frames_ports_and_the_ledger_land_on_their_marks(never_stopped, text):
    result = gossan.open_result(never_stopped)
    outlet, middle = (result.ports.get(name) for name in ("outlet", "middle"))
    clock = result.ledger.time.values / 86400.0 if text is HELD_FLUX else outlet.pore_volumes.values
    marks = np.append(0.13 * np.arange(24), 3.0)
    assert clock == pytest.approx(marks, rel=1e-12, abs=1e-12)
    assert np.array_equal(outlet.time.values, result.ledger.time.values)
    if middle:
        assert np.array_equal(outlet.time.values, middle.time.values)
    frames = np.interp(result.profiles.time.values, result.ledger.time.values, clock)
    assert frames[[0, -1]] == pytest.approx([0.0, 3.0])
    assert result.profiles.count == 7
    assert np.isin(result.profiles.time.values[1:], result.steps.time.values).all(), "instants, not averages"


def test_what_entered_is_what_each_feed_brought(tmp_path):
    """The feed switches at 1 and 1.7 pore volumes, to the drop."""
    path = tmp_path / "run.h5"
    result = gossan.run(case_of(HELD_FLUX), path)
    problem = build(case_of(HELD_FLUX))
    water = result.ports["outlet"].pore_volumes.values * problem.pore_volume
    switches = np.array([1.0, 1.7]) * problem.pore_volume
    shares = np.diff(np.minimum(water[:, None], [0.0, *switches, np.inf]), axis=1)
    entered = shares @ problem.feeds.inflow[:, 0]
    assert result.ledger.entered.values == pytest.approx(entered, rel=1e-11, abs=1e-15)
    assert np.abs(result.ledger.error.values).max() < 1e-12


def test_the_first_frame_is_at_equilibrium_with_its_minerals_and_what_is_absent_has_no_index(tmp_path):
    text = HELD_FLUX.replace("[chemistry]", '[chemistry]\nalso = ["dolomite", "sphalerite"]')
    assert "dolomite" in text
    result = gossan.run(case_of(text), tmp_path / "run.h5")
    index, solid = result.profiles.saturation, result.profiles.solid
    assert "sphalerite" not in index.coords["mineral"], "nothing here can ever make it"
    for mineral in ("gypsum", "calcite"):
        assert index.sel(mineral=mineral).values[0] == pytest.approx(0.0, abs=1e-9)
    for values, amount in zip(index.values, solid.values, strict=True):
        assert np.nanmax(values) <= 1e-9
        assert amount.min() >= 0.0
        assert np.abs(np.where(amount > 0.0, values, 0.0)).max() <= 1e-9


# what a run that cannot end says, and leaves


def alone() -> bool:
    """Whether this is the column itself, and not what carries its errors."""
    return threading.current_thread() is threading.main_thread()


def failing(monkeypatch, calls: int, cell: int) -> None:
    """From so many solves of the march on, let chemistry find no equilibrium in a cell."""
    honest, count = Solver.settled, 0

    def settled(self, *arguments, **options):
        nonlocal count
        count += "skip" in options and alone()  # only the march skips what has not changed
        if count > calls and alone():
            raise SolveError("no luck", cell=cell)
        return honest(self, *arguments, **options)

    monkeypatch.setattr(Solver, "settled", settled)


def test_numerics_that_give_up_say_where_and_when_and_keep_the_last_good_state(
    text, never_stopped, tmp_path, monkeypatch
):
    path = tmp_path / "run.h5"
    with monkeypatch.context() as broken:
        failing(broken, 30, 5)
        with pytest.raises(SolveError) as caught:
            gossan.run(case_of(text), path)
    error = caught.value
    assert (error.cell, error.layer, error.reason) == (5, "bed", "no luck")
    assert error.x == pytest.approx(0.1375)  # the sixth of 8 cells on 20 cm
    assert str(path) in str(error)
    result = gossan.open_result(path)
    assert result.status == "failed"
    assert "no luck" in result.reason
    assert error.time == result.steps.time.values[-1] == result.profiles.time.values[-1] > 0.0
    assert recording.resume(path).status == "finished"
    assert_same_bits(path, never_stopped)


def test_a_solve_that_fails_once_only_costs_a_shorter_step(tmp_path, monkeypatch):
    honest, count = Solver.settled, 0

    def settled(self, *arguments, **options):
        nonlocal count
        count += alone()
        if count == 40 and alone():
            raise SolveError("no luck", cell=0)
        return honest(self, *arguments, **options)

    monkeypatch.setattr(Solver, "settled", settled)
    result = gossan.run(case_of(HELD_FLUX), tmp_path / "run.h5")
    assert result.status == "finished"
    assert np.abs(result.ledger.error.values).max() < 1e-12


def closing(folder: Path, flow: str) -> Case:
    """A salt that needs more room than there is takes the place of a smaller one."""
    chemistry = write_salts(folder, Salt("small", "Na", 1.0, 50.0), Salt("large", "K", 1e-6, 400.0))
    text = column(
        water("feed", K=500.0, NO3=500.0) + water("pore", Na=1.0, Cl=1.0), minerals='small = "10 vol%"',
        cells=5, length="20 cm", flow=flow, layer='conductivity = "1 m/d"', chemistry=chemistry,
        duration="50 d", run='ports_every = "1 d"',
    )  # fmt: skip
    return case_of(text, folder)


def test_a_column_that_closes_stops_and_says_so(tmp_path):
    result = gossan.run(closing(tmp_path, 'darcy_flux = "8 cm/d"'), tmp_path / "run.h5")
    assert (result.status, result.reason) == ("finished", "clogged")
    assert 0.0 < result.profiles.time.values[-1] < 50 * 86400.0
    porosity, conductivity = result.profiles.porosity.values, result.profiles.conductivity.values
    assert porosity[-1].min() == porosity[-1, 0] < 2e-3
    assert conductivity[-1, 0] < 1e-6 * conductivity[0, 0]
    assert np.abs(result.ledger.error.values).max() < 1e-12
    assert np.abs(result.ledger.water_error.values).max() < 1e-12

    before = shutil.copy(tmp_path / "run.h5", tmp_path / "before.h5")
    assert recording.resume(tmp_path / "run.h5").reason == "clogged", "and it stays so"
    assert_same_bits(tmp_path / "run.h5", before)


def test_a_held_head_lets_the_flow_die_before_the_pores_close(tmp_path):
    """Each pore volume takes a share of the pores, and flow falls with their cube: it never ends."""
    result = gossan.run(closing(tmp_path, 'head_drop = "5 cm"'), tmp_path / "run.h5")
    assert result.status == "finished"
    flux = result.ports["outlet"].darcy_flux.values
    assert 0.0 < flux[-1] < 1e-2 * flux[0]
    assert result.profiles.porosity.values[-1].min() > 1e-3
    assert np.abs(result.ledger.water_error.values).max() < 1e-12


@pytest.mark.parametrize(("coupling", "rounds"), [("lie", 1.0), ("two-stage", 2.0), ("strang", 1.0)])
def test_steps_say_how_often_chemistry_was_solved(coupling, rounds, tmp_path):
    result = gossan.run(case_of(GYPSUM.replace("[run]\n", f'[run]\ncoupling = "{coupling}"\n')),
                        tmp_path / "run.h5")  # fmt: skip
    assert (result.steps.iterations.values == rounds).all()


def test_an_iterated_step_says_how_many_rounds_it_took(tmp_path):
    result = gossan.run(case_of(GYPSUM.replace("[run]\n", '[run]\ncoupling = "iterated"\n')),
                        tmp_path / "run.h5")  # fmt: skip
    assert result.steps.iterations.values.max() > 3.0
