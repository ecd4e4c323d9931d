"""Whether a run stays within the range of its law of activity coefficients."""

from __future__ import annotations

from dataclasses import dataclass

from gossan.coupling.problem import Problem
from gossan.coupling.state import State

DAY = 86400.0


@dataclass(frozen=True, slots=True)
class Beyond:
    """Where and when a run first left the range, and how far it went."""

    time: float = -1.0  # s, and
    cell: int = -1  # both -1 as long as it has stayed within
    most: float = 0.0  # mol/kg, the largest ionic strength of any cell and step

    def told(self, problem: Problem) -> str:
        """A sentence for people, none for a run that stayed within."""
        if self.cell < 0:
            return ""
        law, grid = problem.system.activity, problem.grid
        layer = grid.layers[grid.layer[self.cell]].name
        return (
            f"ionic strength up to {self.most:.3g} mol/kg: the {law.name} law is meant for waters up to "
            f"{law.valid_to:g}, which was first exceeded in cell {self.cell} (layer {layer}, "
            f"x = {grid.centres[self.cell]:.4g} m) at {self.time / DAY:.6g} d"
        )


def watched(problem: Problem, state: State, before: Beyond) -> Beyond:
    """What is known of it after one more state."""
    strength, valid_to = state.ionic_strength, problem.system.activity.valid_to
    most = max(before.most, float(strength.max()))
    if before.cell < 0 and most > valid_to:
        return Beyond(state.time, int((strength > valid_to).argmax()), most)
    return Beyond(before.time, before.cell, most)
