"""Layers to cells and faces."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from gossan.transport.tortuosity import Tortuosity


@dataclass(frozen=True, slots=True)
class Layer:
    """One layer of the column, in flow order.

    length m > 0; cells >= 1; dispersivity m >= 0; diffusion m2 s-1 >= 0, in free water
    growth 1 > 0: each cell's length over that of the one before; start m, set by `grid_of`
    """

    name: str
    length: float
    cells: int
    dispersivity: float = 0.0
    diffusion: float = 0.0
    tortuosity: Tortuosity = field(default_factory=Tortuosity)
    growth: float = 1.0
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

    @property
    def length(self) -> float:
        """Of the whole column, m."""
        return float(self.edges[-1])

    @property
    def tortuosity(self) -> tuple[Tortuosity, ...]:
        """The law of each layer."""
        return tuple(layer.tortuosity for layer in self.layers)

    def refined(self, factor: int) -> Grid:
        """The same column with every cell cut into `factor`, which grow as the cells did: old faces stay."""

        def cut(layer: Layer) -> Layer:
            return replace(layer, cells=layer.cells * factor, growth=layer.growth ** (1.0 / factor))

        return grid_of([cut(layer) for layer in self.layers])

    def face_at(self, x: float) -> int:
        """The face nearest to x (m), the upstream one of two as near: where a port samples.

        Raises ValueError where x lies outside the column.
        """
        if not 0.0 <= x <= self.length * (1.0 + 1e-12):  # a length summed in another order may differ so
            raise ValueError(f"x = {x:g} m lies outside the column, 0 to {self.length:g} m")
        return int(np.argmin(np.abs(self.edges - x)))


def grid_of(layers: Sequence[Layer]) -> Grid:
    """Cut layers into cells, each layer by its growth; where layers meet there is a face (equations.md, 76).

    >>> grid = grid_of([Layer("sand", 1.0, 2), Layer("gate", 0.7, 3, growth=2.0)])
    >>> grid.edges.round(3).tolist(), grid.layer.tolist()
    ([0.0, 0.5, 1.0, 1.1, 1.3, 1.7], [0, 0, 1, 1, 1])
    """
    placed, edges, widths, start = [], [np.zeros(1)], [], 0.0
    for layer in layers:
        placed.append(replace(layer, start=start))
        shares = _shares(layer.cells, layer.growth)
        edges.append(start + layer.length * shares[1:])
        widths.append(layer.length * (np.diff(shares) if layer.growth != 1.0 else
                                      np.full(layer.cells, 1.0 / layer.cells)))
        start = float(edges[-1][-1])
    faces = np.concatenate(edges)
    cells = [layer.cells for layer in layers]

    def per_cell(values: list[float]) -> np.ndarray:
        return np.repeat(np.array(values, dtype=float), cells)

    return Grid(
        layers=tuple(placed),
        edges=faces,
        centres=0.5 * (faces[:-1] + faces[1:]),
        width=np.concatenate(widths),
        layer=np.repeat(np.arange(len(cells)), cells),
        dispersivity=per_cell([layer.dispersivity for layer in layers]),
        diffusion=per_cell([layer.diffusion for layer in layers]),
    )


def _shares(cells: int, growth: float) -> np.ndarray:
    """(cell + 1,) the share of a layer that lies before each of its faces."""
    number = np.arange(cells + 1)
    if growth == 1.0:
        return number / cells
    shares = np.expm1(math.log(growth) * number) / math.expm1(math.log(growth) * cells)
    shares[-1] = 1.0
    return shares
