"""How far a run is, and Ctrl-C between two steps of it."""

from __future__ import annotations

import signal
import sys
import time as wall
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

from gossan.cli import shell

if TYPE_CHECKING:
    from gossan.coupling.state import State

DAY = 86400.0
REFRESH = 0.1  # s of wall clock between two looks at the bar
LINE_EVERY = 30.0  # s of wall clock between two lines where standard error is no terminal


class Progress:
    """A bar with percent, simulated day, pore volumes and time left; lines now and then in a log file."""

    def __init__(self, pore_volume: float, shown: bool = True):
        """pore_volume is the water in the column at the start, m3 per m2."""
        self.pore_volume = pore_volume
        self.shown = shown
        self.stop_asked = False
        self.began = False  # whether a step has been made
        self._bar: Any = None
        self._last = self._start = wall.monotonic()

    def __enter__(self) -> Progress:
        if self.shown and sys.stderr.isatty():
            self._bar = _bar()
            self._task = self._bar.add_task("", total=1.0, day="0", volumes="0")
            self._bar.start()
        return self

    def __exit__(self, *_: object) -> None:
        if self._bar:
            self._bar.stop()

    def tell(self, share: float, state: State) -> None:
        """Called after every step; raises KeyboardInterrupt where Ctrl-C was pressed during it."""
        self.began = True
        if self.stop_asked:
            raise KeyboardInterrupt
        now = wall.monotonic()
        if not self.shown or (now - self._last < (REFRESH if self._bar else LINE_EVERY) and share < 1.0):
            return
        self._last = now
        day, volumes = state.time / DAY, float(state.water_passed[0].sum()) / self.pore_volume
        if self._bar:
            self._bar.update(self._task, completed=share, day=f"{day:.4g}", volumes=f"{volumes:.3g}")
        elif now - self._start >= LINE_EVERY:
            left = (now - self._start) * (1.0 - share) / share if share else float("inf")
            shell.say(f"{100 * share:5.1f} %  day {day:.4g}  {volumes:.3g} PV  about {left:.0f} s left")


def _bar() -> Any:
    from rich.progress import BarColumn, TaskProgressColumn, TextColumn, TimeRemainingColumn
    from rich.progress import Progress as Bar

    return Bar(
        BarColumn(bar_width=24),
        TaskProgressColumn(),
        TextColumn("day {task.fields[day]}"),
        TextColumn("{task.fields[volumes]} PV"),
        TimeRemainingColumn(),
        TextColumn("left"),
        console=shell.console_of(sys.stderr),
        transient=True,
    )


@contextmanager
def stopping_between_steps(progress: Progress) -> Iterator[None]:
    """Ctrl-C waits for the end of a step, where state and file agree; a second one does not wait."""

    def asked(number: int, frame: object) -> None:
        if progress.stop_asked or not progress.began:
            raise KeyboardInterrupt
        progress.stop_asked = True

    before = signal.signal(signal.SIGINT, asked)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
