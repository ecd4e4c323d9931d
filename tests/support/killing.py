"""Killing a writer and looking at what it leaves."""

from __future__ import annotations

import os
import select
import signal
import time
from collections.abc import Callable
from pathlib import Path

import h5py
import numpy as np
from tests.support import pretend

from gossan.store.checkpoint import decode
from gossan.store.read import open_result

WALL_CLOCK = {"started", "seconds", "wall_clock_seconds"}


Work = Callable[[Callable[[int], None]], None]


def in_a_child(work: Work, kill_after: float | None = None) -> tuple[int, int]:
    """Run work(tell) in a process of its own, killed after so many seconds; returns its last word and end.

    The end is the exit code, or minus the signal. A fork: a fresh interpreter takes longer than the run.
    """
    out, into = os.pipe()
    child = os.fork()
    if child == 0:
        os.close(out)
        code = 1
        try:
            work(lambda number: os.write(into, number.to_bytes(4, "little")) and None)
            code = 0
        finally:
            os._exit(code)
    os.close(into)
    if kill_after is not None:
        handle = os.pidfd_open(child)
        ended, _, _ = select.select([handle], [], [], kill_after)
        os.close(handle)
        if not ended:
            os.kill(child, signal.SIGKILL)
    _, status = os.waitpid(child, 0)
    told = b""
    while more := os.read(out, 65536):
        told += more
    os.close(out)
    return int.from_bytes(told[-4:], "little"), os.waitstatus_to_exitcode(status)


def remove_all(path: Path) -> None:
    """Delete a result file and what stands beside it."""
    for file in path.parent.glob(f"{path.name}*"):
        file.unlink()


def contents(path: Path) -> dict[str, bytes]:
    """Every array and attribute of a finished file that must not depend on the wall clock, as bytes."""
    found: dict[str, bytes] = {}
    with h5py.File(path, "r", locking=False) as file:
        for name in file.attrs.keys() - WALL_CLOCK:
            found[f"@{name}"] = repr(file.attrs[name]).encode()

        def visit(name: str, item: h5py.HLObject) -> None:
            if not isinstance(item, h5py.Dataset) or name in ("steps/seconds", "checkpoint/state"):
                return
            values = item[()]
            text = item.dtype.kind == "O"
            found[name] = repr(values.tolist()).encode() if text else values.tobytes()

        file.visititems(visit)
        state = decode(file["checkpoint/state"][:].tobytes())
    found["parts"] = repr([(name, part) for name, part in state.parts.items()]).encode()
    found["counts"] = repr(sorted(state.counts.items())).encode()
    return found


def assert_frames(path: Path, least: int) -> None:
    """At least so many frames stand in the file, bit for bit as the march made them."""
    profiles = open_result(path).loaded().profiles
    assert profiles.count >= least
    arrays = {name: profiles[name].values for name in pretend.profile(pretend.start()[0])}
    state, pace = pretend.start()
    for i in range(profiles.count):
        assert profiles.time.values[i] == state.time
        for name, values in pretend.profile(state).items():
            assert arrays[name][i].tobytes() == np.ascontiguousarray(values).tobytes(), (i, name)
        for _ in range(pretend.FRAME_EVERY):
            state, pace = pretend.stepped(state, pace)


def campaign(path: Path, kills: int, seed: int) -> dict[str, int]:
    """Kill the writer, and every one that resumes its file, at random moments; each file must go on.

    Returns how many kills hit a run before its file appeared, in its course, and after its end.
    """
    random = np.random.default_rng(seed)
    whole = path.with_name("whole.h5")
    began = time.perf_counter()
    _, end = in_a_child(lambda tell: pretend.march(whole, pause=0.002, tell=tell))
    assert end == 0, "the march itself failed"
    longest = time.perf_counter() - began  # on a busy machine a kill too early would meet no run at all
    expected = contents(whole)
    hit = {"before": 0, "running": 0, "ended": 0}
    done = 0
    while done < kills:
        resume = path.exists()

        def work(tell: Callable[[int], None], resume: bool = resume) -> None:
            pretend.march(path, resume, pause=0.002, tell=tell)

        told, end = in_a_child(work, random.uniform(0, longest))
        assert end in (0, -signal.SIGKILL), "the march itself failed"
        done += end != 0
        if not path.exists():
            hit["before"] += end != 0
            continue
        assert_frames(path, told)
        if open_result(path).status == "finished":
            hit["ended"] += end != 0
            assert contents(path) == expected
            remove_all(path)
        else:
            hit["running"] += 1
    if path.exists():
        pretend.march(path, resume=True)
        assert contents(path) == expected
    return hit
