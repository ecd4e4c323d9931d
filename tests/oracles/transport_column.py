"""Advection and dispersion through layers, exactly: Laplace transform in time, inverted by mpmath.

In each layer  water C_t = water D C_xx - q C_x,  so C = a exp(m x) + b exp(n x) in the transformed time,
where m, n solve  water D m^2 - q m - water s = 0.  Between layers C and the flux q C - water D C_x are
continuous; at the inlet q C - water D C_x = q C0 (third type) or C = C0 (first type); at the outlet C_x = 0,
or the last layer has no end.
"""

from __future__ import annotations

from dataclasses import dataclass

import mpmath as mp


@dataclass(frozen=True)
class Stratum:
    """One layer: length (inf for the last of a column without end), water content, dispersion coefficient."""

    length: float
    water: float
    coefficient: float


@dataclass(frozen=True)
class Column:
    """The layers, the Darcy flux and the kind of inlet; the column is empty at first and C0 = 1 enters."""

    strata: tuple[Stratum, ...]
    darcy_flux: float
    first_type: bool = False

    @property
    def terms(self) -> int:
        """Of the Talbot contour: 48 give about 20 digits, steep fronts take more."""
        peclet = sum(self.darcy_flux * layer.length / (layer.water * layer.coefficient)
                     for layer in self.strata if layer.length != float("inf"))
        return 48 + int(peclet / 6)

    def transform(self, s):
        """Per layer (start, a, m, b, n, end): C = a exp(m (x - start)) + b exp(n (x - end))."""
        q, layers, start = mp.mpf(self.darcy_flux), [], mp.mpf(0)
        for stratum in self.strata:
            conduct = mp.mpf(stratum.water) * mp.mpf(stratum.coefficient)
            root = mp.sqrt(q * q + 4 * conduct * mp.mpf(stratum.water) * s)
            end = start + mp.mpf(stratum.length)
            layers.append((start, conduct, (q - root) / (2 * conduct), (q + root) / (2 * conduct), end))
            start = end
        size = 2 * len(layers)
        matrix, right = mp.matrix(size, size), mp.matrix(size, 1)

        def terms(j, x):  # the two solutions of layer j, their value and total flux at x
            at, conduct, m, n, end = layers[j]
            first = mp.exp(m * (x - at))
            second = mp.mpf(0) if mp.isinf(end) else mp.exp(n * (x - end))
            total_flux = (q - conduct * m) * first, (q - conduct * n) * second
            return (first, second), total_flux, (m * first, n * second)

        value, flux, _ = terms(0, mp.mpf(0))
        matrix[0, 0], matrix[0, 1] = value if self.first_type else flux
        right[0] = 1 / s if self.first_type else q / s
        row = 1
        for j in range(len(layers) - 1):
            x = layers[j][4]
            for which in (0, 1):
                left, behind = terms(j, x)[which], terms(j + 1, x)[which]
                matrix[row, 2 * j], matrix[row, 2 * j + 1] = left
                matrix[row, 2 * j + 2], matrix[row, 2 * j + 3] = -behind[0], -behind[1]
                row += 1
        last = len(layers) - 1
        if mp.isinf(layers[last][4]):
            matrix[row, 2 * last + 1] = 1  # nothing grows towards infinity
        else:
            matrix[row, 2 * last], matrix[row, 2 * last + 1] = terms(last, layers[last][4])[2]
        solved = mp.lu_solve(matrix, right)
        return [(*layers[j], solved[2 * j], solved[2 * j + 1]) for j in range(len(layers))]

    def _invert(self, transform, t):
        def with_spare_digits(s):  # far along the contour both solutions grow like exp(q L/(2 water D))
            with mp.workdps(2 * self.terms):
                return transform(s)

        return float(mp.re(mp.invertlaplace(with_spare_digits, t, method="talbot", degree=self.terms)))

    def _at(self, x, s, of_flux):
        q, x = mp.mpf(self.darcy_flux), mp.mpf(x)
        for at, conduct, m, n, end, a, b in self.transform(s):
            if x <= end:
                first = a * mp.exp(m * (x - at))
                second = mp.mpf(0) if mp.isinf(end) else b * mp.exp(n * (x - end))
                if of_flux:
                    return first * (1 - conduct * m / q) + second * (1 - conduct * n / q)
                return first + second
        raise ValueError("x lies beyond the column")

    def resident(self, x, t):
        """C(x, t) in the pore water."""
        return self._invert(lambda s: self._at(x, s, False), t)

    def flux_averaged(self, x, t):
        """(q C - water D C_x)/q at x: what a sampling port meets."""
        return self._invert(lambda s: self._at(x, s, True), t)

    def passed(self, x, t):
        """The amount that has crossed x by time t."""
        return self._invert(lambda s: mp.mpf(self.darcy_flux) * self._at(x, s, True) / s, t)

    def stored(self, t):
        """The dissolved amount in the column, the integral of water C over x."""

        def transform(s):
            total = mp.mpf(0)
            for (at, _, m, n, end, a, b), stratum in zip(self.transform(s), self.strata, strict=True):
                total += stratum.water * (
                    a * (mp.exp(m * (end - at)) - 1) / m + b * (1 - mp.exp(-n * (end - at))) / n
                )
            return total

        return self._invert(transform, t)


def ogata_banks(x, t, v, coefficient):
    """A column without end, held concentration at the inlet (Ogata & Banks 1961, USGS Prof. Paper 411-A)."""
    x, t, v, coefficient = map(mp.mpf, (x, t, v, coefficient))
    spread = 2 * mp.sqrt(coefficient * t)
    return float(
        (mp.erfc((x - v * t) / spread) + mp.exp(v * x / coefficient) * mp.erfc((x + v * t) / spread)) / 2
    )


def still_water(x, t, coefficient):
    """Diffusion into a half space from a held concentration (Carslaw & Jaeger 1959)."""
    return float(mp.erfc(mp.mpf(x) / (2 * mp.sqrt(mp.mpf(coefficient) * t))))
