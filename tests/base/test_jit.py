"""The decorator of kernels: its cache knows every source and switch, and nothing in a kernel allocates."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from numba.core.errors import NumbaError

from gossan.base import jit
from gossan.base.jit import cache_folder, kernel, sources_digest

TOY = {
    "callee.py": """
from gossan.base.jit import kernel
@kernel(inner=True)
def twice(x):
    return 2.0 * x
""",
    "caller.py": """
from gossan.base.jit import kernel
from gossan.toy.kernel.callee import twice
@kernel
def answer(x):
    return twice(x) + 1.0
@kernel
def beyond(values, place):
    return values[place]
""",
}


@pytest.fixture
def package(tmp_path: Path) -> Path:
    """A package of our base and two kernels, one calling the other, with a cache of its own."""
    room = tmp_path / "gossan" / "toy" / "kernel"
    room.mkdir(parents=True)
    own = tmp_path / "gossan" / "base"
    shutil.copytree(jit.PACKAGE / "base", own, ignore=shutil.ignore_patterns("__pycache__"))
    for folder in (tmp_path / "gossan", tmp_path / "gossan" / "toy", room):
        (folder / "__init__.py").touch()
    for name, text in TOY.items():
        (room / name).write_text(text)
    return tmp_path


def told(package: Path, lines: str, **switches: str) -> str:
    """What a fresh interpreter prints."""
    ours = ("NUMBA_", "GOSSAN_")
    environment = {key: value for key, value in os.environ.items() if not key.startswith(ours)}
    environment |= {"PYTHONPATH": str(package), "XDG_CACHE_HOME": str(package / "cache"), **switches}
    done = subprocess.run([sys.executable, "-c", lines], capture_output=True, text=True, env=environment)
    return done.stdout.strip() or done.stderr.strip().splitlines()[-1]


ANSWER = "from gossan.toy.kernel.caller import answer; print(answer(3.0))"


def test_an_edited_callee_in_another_file_is_noticed(package):
    """Numba's own cache would go on with the old one."""
    assert told(package, ANSWER) == "7.0"
    assert told(package, ANSWER) == "7.0"
    callee = package / "gossan" / "toy" / "kernel" / "callee.py"
    callee.write_text(callee.read_text().replace("2.0 * x", "5.0 * x"))
    assert told(package, ANSWER) == "16.0"
    assert len(list((package / "cache" / "gossan").glob("kernels-*"))) == 2


def test_checked_bounds_are_not_taken_from_unchecked_code(package):
    lines = "import numpy as np; from gossan.toy.kernel.caller import beyond; print(beyond(np.zeros(3), {}))"
    assert told(package, lines.format(2)) == "0.0"
    assert "out of bounds" in told(package, lines.format(9), NUMBA_BOUNDSCHECK="1")


def test_compiled_code_is_found_again(package):
    ask = "from gossan.base.jit import is_compiled; print(is_compiled())"
    assert told(package, ask) == "False"
    assert told(package, ANSWER) == "7.0"
    assert told(package, ask) == "True"
    assert told(package, ask, NUMBA_BOUNDSCHECK="1") == "False"
    assert told(package, ask, NUMBA_CACHE_DIR=str(package / "elsewhere")) == "False"


def test_a_chosen_cache_is_keyed_all_the_same(package):
    chosen = package / "chosen"
    assert told(package, ANSWER, NUMBA_CACHE_DIR=str(chosen)) == "7.0"
    assert [path.name[:8] for path in chosen.iterdir()] == ["kernels-"]
    assert not (package / "cache").exists()


def test_a_child_process_keys_its_own_cache(package):
    """What this process was started with must not reach one that checks bounds."""
    lines = "import os, gossan.base.jit; print('NUMBA_CACHE_DIR' in os.environ)"
    assert told(package, lines) == "False"


def test_an_inner_kernel_refuses_to_be_called(package):
    """Without an entry from Python a call would end the process."""
    lines = "from gossan.toy.kernel.callee import twice; twice(1.0)"
    assert "twice is for other kernels" in told(package, lines)
    assert told(package, lines.replace("twice(1.0)", "print(twice(1.0))"), GOSSAN_KERNEL_ENTRIES="1") == "2.0"


@pytest.fixture
def copied(tmp_path, monkeypatch) -> Path:
    """The package's sources, to be edited."""
    copy = tmp_path / "gossan"
    shutil.copytree(jit.PACKAGE, copy, ignore=shutil.ignore_patterns("__pycache__"))
    before = sources_digest()
    monkeypatch.setattr(jit, "PACKAGE", copy)
    assert sources_digest() == before
    return copy


KERNEL_FILES = sorted(str(path.relative_to(jit.PACKAGE)) for path in jit.PACKAGE.glob("*/kernel/*.py"))


@pytest.mark.parametrize("name", [*KERNEL_FILES, "base/jit.py", "base/outcome.py"])
def test_every_source_that_kernels_see_counts(copied, name):
    before = sources_digest()
    (copied / name).write_text((copied / name).read_text() + "\n")
    assert sources_digest() != before


def test_a_new_file_and_a_new_name_count(copied):
    before = sources_digest()
    new = copied / "chemistry" / "kernel" / "new.py"
    new.touch()
    after = sources_digest()
    assert after != before
    new.rename(new.with_name("newer.py"))
    assert sources_digest() not in (before, after)


def test_other_sources_do_not_count(copied):
    before = sources_digest()
    (copied / "cli" / "main.py").write_text("")
    assert sources_digest() == before


@pytest.mark.parametrize("switch", ["NUMBA_BOUNDSCHECK", "GOSSAN_KERNEL_ENTRIES"])
def test_switches_that_change_the_code_count(monkeypatch, switch):
    monkeypatch.setenv(switch, "0")
    off = cache_folder()
    monkeypatch.setenv(switch, "1")
    assert cache_folder() != off


def uncached(function):
    return kernel(function, cache=False)


def makes_an_array(n):
    return np.zeros(n)[0]


def makes_a_list(n):
    return [n, n][0]


def copies(values):
    return values.copy()[0]


def adds_arrays(values):
    return (values + values)[0]


@pytest.mark.parametrize(
    ("function", "argument"),
    [(makes_an_array, 3), (makes_a_list, 3), (copies, np.zeros(3)), (adds_arrays, np.zeros(3))],
)
def test_a_kernel_that_allocates_does_not_compile(function, argument):
    """A rule of the house that the compiler keeps: without numba's runtime there is no memory to be had."""
    with pytest.raises(NumbaError, match=r"NRT required|Only accept returning of array"):
        uncached(function)(argument)


def test_division_follows_ieee():
    divided = uncached(lambda a, b: a / b)
    assert divided(1.0, 0.0) == np.inf
    assert np.isnan(divided(0.0, 0.0))


def test_nothing_is_regrouped_or_assumed():
    """Fast-math would fold both of these."""
    assert uncached(lambda a, b: (a + b) - a)(1e16, 1.0) == 0.0
    assert uncached(lambda a: a != a)(np.nan)


def test_the_global_lock_is_released():
    assert uncached(lambda a: a).targetoptions["nogil"]


BITS = """
import hashlib, numpy as np
from tests.support.battery import battery, random_bounds
from tests.support.small_systems import MINE_COMPONENTS
from tools.battery.mixes import mine_system
from gossan.chemistry.equilibrium import Solver
system = mine_system("davies")
totals = np.zeros((len(MINE_COMPONENTS), 200))
totals[[system.components.index(name) for name in MINE_COMPONENTS]] = battery(81, 200).T
upper = random_bounds(totals.T, len(system.minerals), 81).T
found = Solver(system).cold(np.ones(200), totals, np.zeros_like(upper), upper)
print(hashlib.sha256(found.ln_activity.tobytes() + found.solid.tobytes()).hexdigest())
"""


def test_what_users_run_is_what_is_tested():
    """Kernels compiled without entries of their own, as users have them, give the bits that tests see."""
    root = Path(__file__).resolve().parents[2]
    found = []
    for entries in ("0", "1"):
        environment = os.environ | {"GOSSAN_KERNEL_ENTRIES": entries, "PYTHONPATH": str(root)}
        done = subprocess.run(
            [sys.executable, "-c", BITS], capture_output=True, text=True, env=environment, check=True
        )
        found.append(done.stdout)
    assert found[0] == found[1] != ""
