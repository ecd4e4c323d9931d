"""One variable with everything needed to read it: values, axes, unit, long name."""

from __future__ import annotations

import difflib
from dataclasses import dataclass
from typing import Any

import numpy as np

from gossan.base.errors import ResultError


@dataclass(frozen=True, eq=False)
class Field:
    """A variable of a result.

    values  SI, along dims
    coords  what stands along each dimension: names, or s and m
    """

    name: str
    values: np.ndarray
    dims: tuple[str, ...]
    coords: dict[str, np.ndarray]
    unit: str
    long_name: str

    def sel(self, **labels: str | float) -> Field:
        """Where this stands along an axis: a name exactly, a number (s, m) at the nearest record or cell.

        >>> zinc = Field("dissolved", np.array([[1.0, 2.0]]), ("component", "x"),
        ...              {"component": np.array(["Zn^2+"]), "x": np.array([0.1, 0.3])}, "mol m-3", "zinc")
        >>> float(zinc.sel(component="Zn^2+", x=0.28).values)
        2.0
        """
        values, dims, coords = self.values, self.dims, dict(self.coords)
        for dim, label in labels.items():
            if dim not in dims:
                raise ResultError(f"{self.name} has no axis {dim!r}; it has {', '.join(self.dims) or 'none'}")
            values = np.take(values, self._index(dim, label), axis=dims.index(dim))
            dims = tuple(other for other in dims if other != dim)
            del coords[dim]
        return Field(self.name, values, dims, coords, self.unit, self.long_name)

    def _index(self, dim: str, label: str | float) -> int:
        along = self.coords[dim]
        if len(along) == 0:
            raise ResultError(f"{self.name}: nothing stands along {dim}")
        if not isinstance(label, str):
            return int(np.abs(along - label).argmin())
        names = [str(name) for name in along]
        if label in names:
            return names.index(label)
        near = difflib.get_close_matches(label, names, 1, 0.4)
        hint = f"did you mean {near[0]}?" if near else f"there are {', '.join(names)}"
        raise ResultError(f"{self.name} has no {dim} {label!r}: {hint}")

    def __array__(self, dtype: Any = None, copy: bool | None = None) -> np.ndarray:
        return np.array(self.values, dtype, copy=copy)

    def __repr__(self) -> str:
        shape = " x ".join(f"{dim} {n}" for dim, n in zip(self.dims, self.values.shape, strict=True))
        return f"<{self.name}: {self.long_name}, {self.unit}; {shape or self.values.item()}>"
