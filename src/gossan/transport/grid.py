"""Layers to cells and faces."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np


@dataclass(frozen=True, slots=True)
class Layer:
    """One layer of the column, in flow order.

    length m > 0; cells >= 1; dispersivity m >= 0; diffusion m2 s-1 >= 0, in free water
    tortuosity 1 in (0, 1], NaN: the cube root of the water content of the moment; start m, set by `grid_of`
    """

    name: str
    length: float
    cells: int
    dispersivity: float = 0.0
    diffusion: float = 0.0
    tortuosity: float = float("nan")
    start: float = 0.0


@dataclass(frozen=True, slots=True)
class Grid:
    """The column cut into cells; x = 0 at the inlet, m."""

    layers: tuple[Layer, ...]
    edges: np.ndarray  # (face,) m
    centres: np.ndarray  # (cell,) m
    width: np.ndarray  # (cell,) m
    layer: np.ndarray  # (cell,) int, index into layers
    dispersivity: np.ndarray  # (cell,) m
    diffusion: np.ndarray  # (cell,) m2 s-1
    tortuosity: np.ndarray  # (cell,) 1 or NaN

    @property
    def length(self) -> float:
        """Of the whole column, m."""
        return float(self.edges[-1])

    def refined(self, factor: int) -> Grid:
        """The same column with every cell cut into `factor` equal ones."""
        return grid_of([replace(layer, cells=layer.cells * factor) for layer in self.layers])

    def face_at(self, x: float) -> int:
        """The face nearest to x (m), the upstream one of two as near: where a port samples.

        Raises ValueError where x lies outside the column.
        """
        if not 0.0 <= x <= self.length * (1.0 + 1e-12):  # a length summed in another order may differ so
            raise ValueError(f"x = {x:g} m lies outside the column, 0 to {self.length:g} m")
        return int(np.argmin(np.abs(self.edges - x)))


def grid_of(layers: Sequence[Layer]) -> Grid:
    """Cut layers into cells, each layer evenly.

    >>> grid = grid_of([Layer("sand", 1.0, 2), Layer("gate", 0.6, 3)])
    >>> grid.edges.round(3).tolist(), grid.layer.tolist()
    ([0.0, 0.5, 1.0, 1.2, 1.4, 1.6], [0, 0, 1, 1, 1])
    """
    placed, edges, start = [], [np.zeros(1)], 0.0
    for layer in layers:
        placed.append(replace(layer, start=start))
        edges.append(start + layer.length * (np.arange(layer.cells) + 1) / layer.cells)
        start = float(edges[-1][-1])
    faces = np.concatenate(edges)
    cells = [layer.cells for layer in layers]

    def per_cell(values: list[float]) -> np.ndarray:
        return np.repeat(np.array(values, dtype=float), cells)

    return Grid(
        layers=tuple(placed),
        edges=faces,
        centres=0.5 * (faces[:-1] + faces[1:]),
        width=per_cell([layer.length / layer.cells for layer in layers]),
        layer=np.repeat(np.arange(len(cells)), cells),
        dispersivity=per_cell([layer.dispersivity for layer in layers]),
        diffusion=per_cell([layer.diffusion for layer in layers]),
        tortuosity=per_cell([layer.tortuosity for layer in layers]),
    )
