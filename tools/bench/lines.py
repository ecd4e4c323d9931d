"""A whole march against the method of lines: the same column, the same error, two ways through time.

A front enters a column of which the exact profile is known (Lindstrom et al. 1967: held flux, no end). The
method of lines takes the same cells with unlimited third-order fluxes, and scipy's stiff integrator (BDF,
told the entries of its Jacobian) at the loosest tolerance whose error is no larger than the march's.
"""

from __future__ import annotations

import time
from dataclasses import dataclass

import numpy as np
from scipy.integrate import solve_ivp
from scipy.sparse import diags_array
from scipy.special import erfcx

from gossan.transport.faces import Faces, faces_of, transport_of
from gossan.transport.grid import Layer, grid_of
from gossan.transport.step import DAMPING, corrected, passages

SPEED, END = 1.0, 0.4  # m per unit of time, and that time
TOLERANCES = (1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7)


@dataclass(frozen=True)
class Front:
    """Water of concentration 1 enters one metre of clean water; dispersivity m."""

    dispersivity: float
    cells: int

    @property
    def faces(self) -> Faces:
        """At unit water content, where the Darcy flux is the velocity."""
        grid = grid_of([Layer("sand", 1.0, self.cells, dispersivity=self.dispersivity)])
        transport = transport_of(grid, np.zeros(1))
        return faces_of(transport, np.ones(self.cells), np.full(self.cells + 1, SPEED))

    def error(self, dissolved: np.ndarray) -> float:
        """The mean error, with the exact solution taken at centres."""
        x, spread = self.faces.transport.grid.centres, SPEED * self.dispersivity
        root, behind, ahead = 2.0 * np.sqrt(spread * END), x - SPEED * END, x + SPEED * END
        gauss = np.exp(-((behind / root) ** 2))  # exp(v x / D) erfc(ahead) = gauss erfcx(ahead)
        exact = (
            0.5 * np.where(behind > 0.0, gauss * erfcx(np.abs(behind / root)),
                           2.0 - gauss * erfcx(np.abs(behind / root)))
            + np.sqrt(SPEED**2 * END / (np.pi * spread)) * gauss
            - 0.5 * (1.0 + SPEED * x / spread + SPEED**2 * END / spread) * gauss * erfcx(ahead / root)
        )
        return float(np.mean(np.abs(dissolved - exact)))

    def marched(self) -> np.ndarray:
        """By our steps at Courant 1/2, implicit where that saves more than two steps in three."""
        faces, inflow = self.faces, np.ones(1)
        longest = 0.5 / faces.fastest
        theta = None if 3.0 * faces.explicit_limit > longest else DAMPING
        steps = int(np.ceil(END / (longest if theta else min(longest, faces.explicit_limit))))
        dissolved = np.zeros((1, self.cells))
        for _ in range(steps):
            first = passages(faces, dissolved, inflow, END / steps, theta)
            predicted = dissolved + (first.passed[:, :-1] - first.passed[:, 1:]) / faces.storage
            passed = corrected(first, dissolved, predicted)
            dissolved = dissolved + (passed[:, :-1] - passed[:, 1:]) / faces.storage
        return dissolved[0]

    def by_lines(self, tolerance: float) -> np.ndarray:
        """By the method of lines: third-order upwind-biased advection, central dispersion."""
        n, width = self.cells, 1.0 / self.cells
        mixing = self.dispersivity * SPEED / width

        def change(_: float, c: np.ndarray) -> np.ndarray:
            before = np.concatenate(([1.0], c[:-1]))
            after = np.concatenate((c[1:], c[-1:]))
            passing = SPEED * (c + (c - before) / 6.0 + (after - c) / 3.0) + mixing * (c - after)
            passing = np.concatenate(([SPEED], passing))
            return (passing[:-1] - passing[1:]) / width

        pattern = diags_array([np.ones(n)] * 4, offsets=[-2, -1, 0, 1], shape=(n, n))
        found = solve_ivp(change, (0.0, END), np.zeros(n), method="BDF", jac_sparsity=pattern,
                          rtol=tolerance, atol=0.1 * tolerance)
        return found.y[:, -1]


def print_lines() -> None:
    """Print seconds and errors of both."""
    print("\na front through one metre, against the method of lines with BDF at equal error")
    head = f"{'cells':>8} {'Peclet':>8} {'march, s':>9} {'error':>9} {'lines, s':>9} {'error':>9}"
    print(head + "  times faster")
    for cells in (100, 400, 1600):
        for dispersivity in (0.05, 0.002):
            front = Front(dispersivity, cells)
            front.marched()
            begin = time.perf_counter()
            error = front.error(front.marched())
            ours = time.perf_counter() - begin
            for tolerance in TOLERANCES:
                begin = time.perf_counter()
                theirs_error = front.error(front.by_lines(tolerance))
                theirs = time.perf_counter() - begin
                if theirs_error <= error:
                    break
            print(f"{cells:8} {1.0 / dispersivity:8.0f} {ours:9.4f} {error:9.1e} {theirs:9.3f}"
                  f" {theirs_error:9.1e} {theirs / ours:13.0f}")


if __name__ == "__main__":
    print_lines()
