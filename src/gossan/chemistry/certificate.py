"""What an equilibrium is worth: its residuals in doubled precision, and how far it is from the truth."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.system import System

ABSENT, PRESENT, FULL = 0, 1, 2
GONE = -1e5  # ln activity below which a component is not there


@dataclass(frozen=True, eq=False)
class Certificate:
    """How well each water meets its equations; all evaluated with 32 digits from the stored numbers alone.

    Amounts of minerals, and whether a balance holds that they take part in, are judged only where the totals
    were given to `certify`. Under SIT the interactions
    and the activity of water count as they stand.
    """

    system: System
    balance: np.ndarray  # (component, cell) mass balance off by, relative to its largest term
    ionic_strength: np.ndarray  # (cell,) relative to what the species make
    saturation: np.ndarray  # (mineral, cell) ln of saturation ratio; NaN where a component is absent
    present: np.ndarray  # (cell,) largest |ln saturation ratio| of minerals present, couples and open gases
    absent: np.ndarray  # (cell,) largest ln saturation ratio of an absent mineral that may form; 0 below 0
    full: np.ndarray  # (cell,) largest undersaturation, in ln, of a mineral at its upper bound
    ln_activity: np.ndarray  # (basis, cell) estimated error

    @property
    def worst(self) -> np.ndarray:
        """(cell,) the largest estimated error of a ln activity."""
        return self.ln_activity.max(axis=0)

    def line(self, cell: int = 0) -> str:
        """One cell's certificate, for people."""
        k, b = int(self.balance[:, cell].argmax()), int(self.ln_activity[:, cell].argmax())
        parts = [
            f"balances within {self.balance[k, cell]:.1e} ({self.system.components[k]})",
            f"ionic strength within {self.ionic_strength[cell]:.1e}",
        ]
        if not np.isnan(self.saturation[:, cell]).all():
            wrong = max(self.present[cell], self.absent[cell], self.full[cell])
            parts.append(f"minerals within {wrong:.1e}")
        parts.append(f"ln activities within {self.ln_activity[b, cell]:.1e} ({self.system.species[b]})")
        return ", ".join(parts)


def certify(
    found: Equilibrium,
    kilograms: np.ndarray | None = None,
    totals: np.ndarray | None = None,
    upper: np.ndarray | None = None,
) -> Certificate:
    """Put an equilibrium back into its equations, in doubled precision (equations.md, 79 and 80).

    kilograms (cell,) kg of water per unit that the amounts are per; default 1, for mol per kg of water
    totals    (component, cell) what was to be shared out, solids included, in the unit of the amounts;
              default: what the answer holds, so that a balance judges the dissolved amounts alone
    upper     (mineral, cell) the most there could be; default: by what may form and what is full
    """
    from gossan.chemistry.kernel.certify import certify_cells, desk

    system, matrices, cells = found.system, found.system.matrices, found.amount.shape[1]
    rows, minerals = matrices.solid, len(system.minerals)
    tied = np.ones((len(rows), cells), np.int8)
    tied[:minerals] = found.presence == PRESENT
    gone = found.ln_activity < GONE
    tied[(rows != 0.0).astype(float) @ gone > 0.0] = 0  # a couple or gas of an element that is not there
    held = np.zeros((len(rows), cells))
    if totals is not None:
        held[:minerals] = found.solid
        held[len(rows) - len(found.given) :] = -found.given
    total = np.ascontiguousarray(found.amount if totals is None else totals, float)
    weight = np.ones(cells) if kilograms is None else np.ascontiguousarray(kilograms, float)
    # under SIT they depend on every molality: as the answer has them
    ln_gamma = found.ln_gamma() if system.activity.interacts else np.zeros((0, cells))
    balance, strength = np.empty(total.shape), np.empty(cells)
    saturation, error = np.empty((len(rows), cells)), np.empty(found.ln_activity.shape)
    certify_cells(
        matrices, desk(len(found.ln_activity), len(matrices.ln_k), len(rows)), tied, weight, total, held,
        np.ascontiguousarray(found.ln_activity), np.ascontiguousarray(found.ionic_strength),
        np.ascontiguousarray(ln_gamma), balance, strength, saturation, error,
    )  # fmt: skip
    may_form = system.may_form[:, None] if upper is None else upper > 0.0
    there = np.nan_to_num(saturation, nan=0.0)
    marks = found.presence

    def most(values: np.ndarray) -> np.ndarray:
        return np.maximum(values, 0.0).max(axis=0, initial=0.0)

    return Certificate(
        system=system,
        balance=balance,
        ionic_strength=strength,
        saturation=saturation[:minerals],
        present=most(np.where(tied == 1, np.abs(there), 0.0)),
        absent=most(np.where((marks == ABSENT) & may_form, there[:minerals], 0.0)),
        full=most(np.where(marks == FULL, -there[:minerals], 0.0)),
        ln_activity=error,
    )


def certify_water(found: Equilibrium) -> Certificate:
    """Certify waters on their own: no mineral forms in them, whatever they are oversaturated with."""
    cells, minerals = found.amount.shape[1], len(found.system.minerals)
    none = np.zeros((minerals, cells))
    given = np.zeros((len(found.system.open_gases), cells))
    alone = replace(found, solid=none, presence=none.astype(np.int8), given=given)
    return certify(alone, upper=none)
