"""What the answers of a case owe to its cells."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from tempfile import TemporaryDirectory

from gossan.base.amounts import Amount
from gossan.case.column_kinds import Growing
from gossan.case.model import Case, Layer
from gossan.recording import Progress, run_case
from gossan.store.read import open_result


def crossed_in_half_the_cells(case: Case, progress: Progress | None = None) -> dict[str, dict[str, float]]:
    """When the limits of a case are first exceeded in cells twice as long, s, by port and quantity.

    progress as in `run_case`. The run is not kept. (equations.md, 91)
    Raises   InputError; SolveError where the numerics gave up
    """
    with TemporaryDirectory(prefix="gossan-") as folder:
        path = Path(folder) / "half.h5"
        ending = run_case(with_half_the_cells(case), path, progress=progress)
        if ending.error is not None:
            ending.error.kept = ""  # in a folder that is gone
            raise ending.error
        if ending.status == "stopped":
            raise KeyboardInterrupt
        crossings = open_result(path).crossings
    return {port: {name: found[0] for name, found in own.items()} for port, own in crossings.items()}


def with_half_the_cells(case: Case) -> Case:
    """The same case in cells twice as long; its errors in time are not carried."""
    assert case.run is not None
    return case.model_copy(update={
        "layers": [_halved(layer) for layer in case.layers],
        "run": case.run.model_copy(update={"errors": "none"}),
    })  # fmt: skip


def _halved(layer: Layer) -> Layer:
    if isinstance(layer.cell, Growing):
        longer = Growing(_doubled(layer.cell.first), _doubled(layer.cell.last))
        return layer.model_copy(update={"cell": longer})
    cells = layer.mesh[0]
    return layer.model_copy(update={"cells": (cells + 1) // 2, "cell": None})


def _doubled(length: Amount) -> Amount:
    return replace(length, si=2.0 * length.si)
