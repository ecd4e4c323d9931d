"""Dispersion and diffusion: how well each face conducts, and a step that is stable at any length."""

from __future__ import annotations

from gossan.base.jit import kernel

LANES = 12  # solutes swept together: their chains of dependent operations hide each other's latency


@kernel
def conduct(darcy_flux, water, width, dispersivity, tortuosity, diffusion, first_type,
            out, lean_left, lean_right):
    """How well each face conducts dispersion: flux over difference of concentration (equations.md, 24).

    darcy_flux (face,) m s-1; water (cell,) m3 m-3; width, dispersivity (cell,) m
    tortuosity (cell,) 1, NaN for the cube root of the water content; diffusion (cell,) m2 s-1, in free water
    first_type bool, whether the inlet holds the concentration
    out        (face,) m s-1: both half cells in series; 0 at the outlet, and at an inlet that takes a flux
    leans      (cell,) 1, see `Slopes`: the share of a face's difference that falls to this side of it

    The coefficient is dispersivity times pore velocity plus tortuosity times diffusion; times water content.
    The profile at a third-type inlet is c_in + (D/v) dc/dx: as if the inflow stood D/v before the face.
    """
    cells = width.shape[0]
    out[0] = out[cells] = 0.0
    lean_right[cells - 1] = 0.5
    before = 0.0
    for i in range(cells):
        winding = tortuosity[i] if tortuosity[i] == tortuosity[i] else water[i] ** (1.0 / 3.0)
        speed = 0.5 * abs(darcy_flux[i] + darcy_flux[i + 1])
        here = 2.0 * (dispersivity[i] * speed + water[i] * winding * diffusion[i]) / width[i]
        if i > 0:
            both = before + here
            share = before / both if both > 0.0 else width[i] / (width[i - 1] + width[i])
            out[i] = here * share if both > 0.0 else 0.0
            lean_left[i], lean_right[i - 1] = share, 1.0 - share
        elif first_type:
            out[0], lean_left[0] = here, 1.0
        else:
            lean_left[0] = darcy_flux[0] / (darcy_flux[0] + here) if darcy_flux[0] > 0.0 else 0.0
        before = here


@kernel
def factor(storage, conductance, dt, hold, inverse, lower, upper):
    """Eliminate the tridiagonal matrix  storage - dt div(conductance grad)  once for all solutes (Thomas).

    storage (cell,) m, water content times width; conductance (face,) m s-1
    dt      s, times the weight of the end of the step
    Fills   hold (face,) m, dt conductance; inverse (cell,) m-1; lower, upper (cell,) 1, in [0, 1)
    """
    cells = storage.shape[0]
    for f in range(cells + 1):
        hold[f] = dt * conductance[f]
    behind = 0.0
    for i in range(cells):
        inverse[i] = 1.0 / (storage[i] + hold[i] + hold[i + 1] - hold[i] * behind)
        lower[i] = hold[i] * inverse[i]
        behind = upper[i] = hold[i + 1] * inverse[i]


@kernel
def sweep(rows, lower, upper):
    """Forward and back substitution in place, rows (LANES, cell), mol m-3."""
    r0, r1, r2, r3, r4, r5 = rows[0], rows[1], rows[2], rows[3], rows[4], rows[5]
    r6, r7, r8, r9, r10, r11 = rows[6], rows[7], rows[8], rows[9], rows[10], rows[11]
    a = b = c = d = e = f = g = h = j = k = m = n = 0.0
    for i in range(lower.shape[0]):
        share = lower[i]
        a, b, c = r0[i] + share * a, r1[i] + share * b, r2[i] + share * c
        d, e, f = r3[i] + share * d, r4[i] + share * e, r5[i] + share * f
        g, h, j = r6[i] + share * g, r7[i] + share * h, r8[i] + share * j
        k, m, n = r9[i] + share * k, r10[i] + share * m, r11[i] + share * n
        r0[i], r1[i], r2[i], r3[i], r4[i], r5[i] = a, b, c, d, e, f
        r6[i], r7[i], r8[i], r9[i], r10[i], r11[i] = g, h, j, k, m, n
    a = b = c = d = e = f = g = h = j = k = m = n = 0.0
    for i in range(upper.shape[0] - 1, -1, -1):
        share = upper[i]
        a, b, c = r0[i] + share * a, r1[i] + share * b, r2[i] + share * c
        d, e, f = r3[i] + share * d, r4[i] + share * e, r5[i] + share * f
        g, h, j = r6[i] + share * g, r7[i] + share * h, r8[i] + share * j
        k, m, n = r9[i] + share * k, r10[i] + share * m, r11[i] + share * n
        r0[i], r1[i], r2[i], r3[i], r4[i], r5[i] = a, b, c, d, e, f
        r6[i], r7[i], r8[i], r9[i], r10[i], r11[i] = g, h, j, k, m, n


@kernel
def gather(surplus, dissolved, swelling, inverse, out):
    """The right-hand side of one solute, already divided by the pivots."""
    for i in range(out.shape[0]):
        out[i] = inverse[i] * (surplus[i] - surplus[i + 1] - swelling[i] * dissolved[i])


@kernel
def pass_change(change, hold, passed):
    """Add what the change of one solute disperses through the inner faces."""
    for f in range(passed.shape[0]):
        passed[f] += hold[f] * (change[f] - change[f + 1])


@kernel
def spread(dissolved, swelling, surplus, hold, inverse, lower, upper, change, passed):
    """Let what a surplus of passages changes disperse implicitly, and add the passages that this makes.

    Solves  storage x = surplus in - surplus out - swelling dissolved + dt div(conductance grad x)  for the
    change x of the concentrations, mol m-3, and adds dt conductance grad x to passed (equations.md, 25).

    dissolved (solute, cell) mol m-3; swelling (cell,) m, what a cell keeps of the water passing through it
    surplus   (solute, face) mol m-2; hold, inverse, lower, upper as `factor` left them
    change    (LANES, cell) scratch; passed (solute, face) mol m-2, added to; may be the same array as surplus
    """
    solutes, cells = dissolved.shape
    for first in range(0, solutes, LANES):
        lanes = min(LANES, solutes - first)
        change[lanes:] = 0.0
        for j in range(lanes):
            gather(surplus[first + j], dissolved[first + j], swelling, inverse, change[j])
        sweep(change, lower, upper)
        for j in range(lanes):
            passed[first + j, 0] -= hold[0] * change[j, 0]
            pass_change(change[j], hold[1:cells], passed[first + j, 1:cells])
