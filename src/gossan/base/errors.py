"""The tree of faults, each with the exit code that a shell sees."""

from __future__ import annotations

from dataclasses import dataclass

DONE, LIMIT_EXCEEDED, BAD_INPUT, STOPPED, GAVE_UP = 0, 1, 2, 3, 4


class GossanError(Exception):
    """Any fault that the program reports in a sentence instead of a traceback."""

    exit_code = BAD_INPUT


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing wrong with an input, and its cure.

    file and line say where (line 0: the whole file); key is the dotted key (`layers.gate.porosity`).
    """

    file: str
    line: int
    key: str
    wrong: str
    right: str = ""

    def __str__(self) -> str:
        where = f"{self.file}:{self.line}" if self.line else self.file
        text = f"{where}: {self.key}" if self.key else where
        text += f" {self.wrong}" if self.key else f": {self.wrong}"
        return f"{text}: {self.right}" if self.right else text


class InputError(GossanError):
    """A case, table or constants file is wrong; carries every fault found, not only the first."""

    exit_code = BAD_INPUT

    def __init__(self, faults: list[Fault]):
        super().__init__(faults)
        self.faults = list(faults)

    def __str__(self) -> str:
        return "\n".join(str(fault) for fault in self.faults)


class ResultError(GossanError):
    """A result file cannot be written or read."""

    exit_code = BAD_INPUT


class SolveError(GossanError):
    """The numerics gave up; says where, when and why, and where the last good state is kept.

    cell is the index (-1 outside a column), x in m, time in s, residual in the unit of the reason.
    """

    exit_code = GAVE_UP

    def __init__(self, reason: str, cell: int = -1, layer: str = "", x: float = float("nan"),
                 time: float = float("nan"), residual: float = float("nan"), kept: str = ""):
        super().__init__(reason, cell, layer, x, time, residual, kept)
        self.reason, self.cell, self.layer, self.x = reason, cell, layer, x
        self.time, self.residual, self.kept = time, residual, kept

    def __str__(self) -> str:
        text = self.reason
        if self.cell >= 0:
            where = f"cell {self.cell}"
            if self.layer:
                place = f", x = {self.x:.4g} m" if self.x == self.x else ""
                where += f" (layer {self.layer}{place})"
            text = f"no equilibrium in {where}"
            if self.time == self.time:
                text += f" at {self.time / 86400:.6g} d"
            text += f": {self.reason}"
        if self.kept:
            text += f"; last good state in {self.kept}"
        return text
