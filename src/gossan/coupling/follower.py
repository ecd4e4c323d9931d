"""The shadow of a column, walked in a thread of its own a few steps behind."""

from __future__ import annotations

from collections import deque
from concurrent.futures import Future, ThreadPoolExecutor

from gossan.chemistry.equilibrium import Solver
from gossan.chemistry.system import System
from gossan.coupling.march import Solvers, Stride
from gossan.coupling.shadow import Shadow, followed

BEHIND = 8  # steps: more would only keep more of them in memory


class Follower:
    """Follows the strides of a march; what it computes does not depend on when it does.

    Kernels release Python's lock, so on a second processor the shadow costs little time of its own.
    """

    def __init__(self, shadow: Shadow, system: System):
        self._shadow = shadow
        self._solvers = Solvers(Solver(system))
        self._pool = ThreadPoolExecutor(1, "gossan-shadow")
        self._ahead: deque[Future[None]] = deque()

    def follow(self, stride: Stride) -> None:
        """Take one more step, soon; waits while too many are left to take."""
        self._ahead.append(self._pool.submit(self._step, stride))
        self._wait(BEHIND)

    def shadow(self) -> Shadow:
        """The shadow beside the last stride it was given."""
        self._wait(0)
        return self._shadow

    def close(self) -> None:
        """Take no further step."""
        self._pool.shutdown(cancel_futures=True)

    def _step(self, stride: Stride) -> None:
        self._shadow = followed(self._shadow, stride, self._solvers)

    def _wait(self, left: int) -> None:
        while len(self._ahead) > left:
            self._ahead.popleft().result()
