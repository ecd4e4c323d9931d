"""What is carried beside a column, against the same column in steps that are much finer."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
import pytest
from tests.support.columns import column, started
from tests.support.salts import Salt, water, write_salts
from tests.support.small_cases import GYPSUM

from gossan.case.build import first_pace
from gossan.chemistry.equilibrium import Solver
from gossan.coupling import march as marching
from gossan.coupling.march import Solvers, Stride, march
from gossan.coupling.problem import Problem
from gossan.coupling.shadow import Shadow, apart, followed, shadow_of
from gossan.observing import ports_of
from gossan.views.crossing import SURE

FINER = 8  # sixteen moves the true error by some per cent more
AT_MOST = 10.0  # times the true error, what may be stated
BENT = 'sorption.x = {law = "freundlich", coefficient = "0.3 mmol/kg", at = "1 mmol/L", exponent = 0.6}'
NOTHING = 1e-6  # of the most a port showed: errors below are not argued about


def replacement(folder: Path) -> str:
    """One salt takes the place of another."""
    salts = write_salts(folder, Salt("one", "Na", 1.0), Salt("other", "K", 0.04))
    return column(
        water("feed", K=2.0, NO3=2.0) + water("pore", Na=1.0, Cl=1.0), minerals='one = "0.0006 mol/L"',
        porosity=0.3, cells=12, length="0.3 m", dispersivity="2 cm", flow='darcy_flux = "0.3 m/d"',
        chemistry=salts, duration="1 d",
    )  # fmt: skip


def dissolution(folder: Path) -> str:
    """A salt dissolves into water that has some of its ions."""
    return column(
        water("feed", Na=0.5, K=1.5, Cl=2.0) + water("pore", Na=1.386000936329383, K=1.5,
                                                     Cl=2.886000936329383),
        minerals='salt = "0.001 mol/L"', porosity=0.35, cells=8, length="0.12 m", dispersivity="2 cm",
        flow='darcy_flux = "0.07 m/d"', chemistry=write_salts(folder, Salt("salt", "Na", 4.0)),
        duration="4 d",
    )  # fmt: skip


def gypsum(_: Path) -> str:
    """Gypsum is washed out, and leaves room."""
    return GYPSUM.replace('ports_every = "0.1 PV"\n', "").replace('duration = "4 PV"', 'duration = "10 PV"')


def bent(_: Path) -> str:
    """A pulse of a tracer that sorbs by a bent isotherm."""
    return column(
        '[waters.feed.tracers]\nx = "1 mmol/L"\n[waters.pore]\n[tracers.x]\n', cells=20,
        layer=BENT,
        dispersivity="4 cm", flow='darcy_flux = "0.2 m/d"', duration="8 d",
        feed='{from = "0 d", water = "feed"}, {from = "1.5 d", water = "pore"}',
    )  # fmt: skip


def decaying(_: Path) -> str:
    """A tracer decays in flowing and in immobile water."""
    return column(
        '[waters.feed.tracers]\nx = "1 mmol/L"\n[waters.pore]\n[tracers.x]\nhalf_life = "1 d"\n',
        cells=15,
        layer='immobile = {fraction = 0.3, transfer = "0.5 1/d"}', dispersivity="4 cm",
        flow='darcy_flux = "0.2 m/d"', duration="4 d",
    )  # fmt: skip


def oxygen(_: Path) -> str:
    """Oxygen enters a bed of iron and zinc sulfide: acid, sulfate, iron hydroxide, zinc set free."""
    return column(
        """
[waters.feed]
pH = 6.5
dissolved_oxygen = "8 mg/L"
balance_on = "Cl"
analysis = {Na = "1 mmol/L", Cl = "1 mmol/L", CO2 = "20 mg/L"}
[waters.pore]
pH = 7.0
balance_on = "Cl"
analysis = {Na = "1 mmol/L", Cl = "1 mmol/L"}
""",
        minerals='mackinawite = "0.02 mmol/L", "fresh zinc sulfide" = "0.01 mmol/L"', cells=6, length="12 cm",
        dispersivity="2 cm", flow='darcy_flux = "0.1 m/d"', duration="2 d",
        chemistry='coupled = ["Fe(II)/Fe(III)", "S(-II)/S(VI)", "O(0)/O(-II)"]\n'
        'minerals = ["mackinawite", "fresh zinc sulfide", "ferrihydrite"]',
    )  # fmt: skip


def still(folder: Path) -> str:
    """A salt dissolves by diffusion alone, in implicit steps."""
    return column(
        water("feed") + water("pore", Na=1.0, Cl=1.0), minerals='salt = "0.0009 mol/L"', porosity=0.3,
        cells=10, length="0.05 m", diffusion="1e-9 m2/s", layer="tortuosity = 1.0", duration="20 d",
        flow='darcy_flux = "0 m/d"\ninlet = "concentration"',
        chemistry=write_salts(folder, Salt("salt", "Na", 1.0)),
        run='accuracy = 0.01\nports_every = "10 d"\nprofiles_every = "20 d"',
    )  # fmt: skip


@dataclass(frozen=True, eq=False)
class Course:
    """What an outlet showed at every record, and what stood in the column."""

    problem: Problem
    shown: np.ndarray  # (record, solute) mol m-3
    told: np.ndarray  # (record, solute) mol m-3: the same in the shadow
    last: Stride
    shadow: Shadow


def course(problem: Problem, monkeypatch: pytest.MonkeyPatch, finer: int = 1) -> Course:
    """March to the end, in steps finer than the step control would take."""
    longest = marching.longest_step

    def shorter(*arguments):
        step, implicit = longest(*arguments)
        return step / finer, implicit

    shadow, solvers = shadow_of(problem, problem.initial), Solvers(Solver(problem.system))
    accuracy = problem.accuracy / finer**2
    shown, told = [], []
    with monkeypatch.context() as patched:
        patched.setattr(marching, "longest_step", shorter)
        for stride in march(replace(problem, accuracy=accuracy), problem.initial, first_pace(problem)):
            if finer == 1:
                shadow = followed(shadow, stride, solvers)
            if stride.record_due:
                shown.append(ports_of(problem, stride.state)[0]["dissolved"])
                told.append(ports_of(problem, shadow.state)[0]["dissolved"])
    return Course(problem, np.array(shown), np.array(told), stride, shadow)


@pytest.mark.parametrize(("family", "coupling"), [
    (replacement, "two-stage"), (dissolution, "two-stage"), (gypsum, "two-stage"), (bent, "two-stage"),
    (oxygen, "two-stage"), (decaying, "two-stage"), (replacement, "lie"), (gypsum, "lie"),
    (bent, "strang"), (decaying, "strang"), (gypsum, "iterated"),
])  # fmt: skip
def test_what_is_stated_covers_the_error_and_not_ten_times_as_much(family, coupling, tmp_path, monkeypatch):
    """The largest error of every solute at the outlet."""
    text = family(tmp_path).replace("[run]\n", f'[run]\ncoupling = "{coupling}"\n')
    problem, _ = started(text, tmp_path)
    coarse, fine = course(problem, monkeypatch), course(problem, monkeypatch, FINER)
    true = np.abs(coarse.shown - fine.shown).max(axis=0)
    stated = SURE * np.abs(coarse.shown - coarse.told).max(axis=0)
    most = np.abs(fine.shown).max(axis=0)
    worth = (true > NOTHING * most) & (most > NOTHING * most.max())
    assert worth.any()
    assert coarse.shadow.lost == -1.0
    assert (stated[worth] >= true[worth]).all(), (stated / true)[worth]
    assert (stated[worth] <= AT_MOST * true[worth]).all(), (stated / true)[worth]
    # and it has the right sign: the shadow is the nearer one, as far as there is an error worth its sign
    worth &= (true > 3e-5 * most) & (family is not oxygen)
    left = np.sqrt(np.mean((coarse.told - fine.shown) ** 2, axis=0))
    wrong = np.sqrt(np.mean((coarse.shown - fine.shown) ** 2, axis=0))
    assert (left[worth] < 0.9 * wrong[worth]).all(), left[worth] / wrong[worth]


@pytest.mark.parametrize("coupling", ["two-stage", "lie"])
def test_it_holds_where_nothing_flows(coupling, tmp_path, monkeypatch):
    """What has gone out of the column, in steps hundreds of times longer than explicit ones could be."""
    text = still(tmp_path).replace("[run]\n", f'[run]\ncoupling = "{coupling}"\n')
    problem, _ = started(text, tmp_path)
    coarse, fine = course(problem, monkeypatch), course(problem, monkeypatch, FINER)
    left = [float(problem.stored(state)[problem.solutes.index("Cl^-")])
            for state in (coarse.last.state, coarse.shadow.state, fine.last.state)]  # fmt: skip
    true, stated = abs(left[0] - left[2]), SURE * abs(left[0] - left[1])
    assert true <= stated <= AT_MOST * true


def test_no_error_where_there_is_none(tmp_path, monkeypatch):
    """The same water in and out: nothing is apart but rounding."""
    problem, _ = started(
        column(water("feed", Na=1.0, Cl=1.0) + water("pore", Na=1.0, Cl=1.0), chemistry="minerals = []"),
        tmp_path,
    )
    found = course(problem, monkeypatch)
    inflow = found.last.turn.inflow
    assert apart(problem, found.last.state, found.shadow.state, inflow).max() < 1e-12


def test_a_shadow_that_fails_begins_anew_and_says_so(tmp_path, monkeypatch):
    problem, _ = started(replacement(tmp_path), tmp_path)
    stride = next(march(problem, problem.initial, first_pace(problem)))
    broken = replace(problem.initial, dissolved=np.full_like(problem.initial.dissolved, np.nan))
    shadow = replace(shadow_of(problem, broken), turned=False)
    found = followed(shadow, stride, Solvers(Solver(problem.system)))
    assert found.state is stride.state
    assert found.lost == stride.state.time
    assert "was lost at" in found.told()
    assert shadow_of(problem, problem.initial).told() == ""
