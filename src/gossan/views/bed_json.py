"""Conductivity and heads for machines, SI inside."""

from __future__ import annotations

from typing import Any

from gossan.views.bed import LEVELS, Bed, Bottleneck, HeadLoss, Left


def conductivity_json(bed: Bed, found: Bottleneck | None) -> dict[str, Any]:
    """The cell that kept least, the whole column, and the column by other laws; nulls where nothing is known.

    `half_at_s` and its like are when a first cell fell so far, those of `column` when the column did.
    """
    least = bed.least_cell if bed.known else None
    return {
        "least_fraction": found.fraction if found else None,
        "at_m": found.at if found else None,
        "layer": found.layer if found else None,
        "filled_by": found.filled_by if found else {},
        **_falls(least),
        "column": _left(bed.column if bed.in_series else None),
        "band": {name: _left(left) for name, left in bed.band.items()} if bed.in_series else {},
    }


def head_loss_json(found: HeadLoss | None) -> dict[str, Any] | None:
    """Loss of head over each layer and over the column at a few times, or null."""
    if found is None:
        return None
    layers = {name: found.loss[:, index].tolist() for index, name in enumerate(found.layers)}
    return {"time_s": found.time.tolist(), "whole_m": found.whole.tolist(), "layers_m": layers}


def _left(left: Left | None) -> dict[str, float | None]:
    return {"fraction": left.last if left else None, **_falls(left)}


def _falls(left: Left | None) -> dict[str, float | None]:
    told: dict[str, float | None] = {}
    for name in LEVELS:
        fall = left.falls[name] if left else None
        told[f"{name}_at_s"] = fall.at if fall else None
        told[f"{name}_error_s"] = fall.error if fall else None
    return told
