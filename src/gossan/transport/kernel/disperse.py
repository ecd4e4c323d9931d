"""Dispersion and diffusion: how well each face conducts, and a step that is stable at any length."""

from __future__ import annotations

import math

from gossan.base.jit import kernel

LANES = 12  # solutes swept together: their chains of dependent operations hide each other's latency
STRETCH = 256  # cells swept at a time: what the lanes hold of them stays in the first-level cache


@kernel
def conduct(darcy_flux, water, width, dispersivity, tortuosity, diffusion, first_type, held_outlet,
            out, lean_left, lean_right):
    """How well each face conducts dispersion: flux over difference of concentration (equations.md, 24).

    darcy_flux (face,) m s-1; water (cell,) m3 m-3; width, dispersivity (cell,) m
    tortuosity (cell,) 1; diffusion (cell,) m2 s-1, in free water
    first_type bool, whether the inlet holds the concentration; held_outlet, whether the outlet does
    out        (face,) m s-1: both half cells in series; 0 at an outlet and an inlet that do not hold it
    leans      (cell,) 1, see `Slopes`: the share of a face's difference that falls to this side of it

    The coefficient is dispersivity times pore velocity plus tortuosity times diffusion; times water content.
    The profile at a third-type inlet is c_in + (D/v) dc/dx: as if the inflow stood D/v before the face.
    At a held outlet x / (e^x - 1) of it, x = velocity half width / D, makes the steady flux through the last
    half cell exact, however thin the layer in which the concentration falls to what is held.
    """
    cells = width.shape[0]
    out[0] = out[cells] = 0.0
    lean_right[cells - 1] = 0.5
    before = 0.0
    for i in range(cells):
        speed = 0.5 * abs(darcy_flux[i] + darcy_flux[i + 1])
        here = 2.0 * (dispersivity[i] * speed + water[i] * tortuosity[i] * diffusion[i]) / width[i]
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
    if held_outlet:
        layers = max(darcy_flux[cells], 0.0)
        if layers > 0.0:
            thin = before * 700.0 <= layers
            out[cells] = 0.0 if thin else layers / math.expm1(layers / before)
        else:
            out[cells] = before


@kernel
def factor(storage, conductance, implicit_flux, dt, down, up, inverse, lower, upper):
    """Eliminate the tridiagonal matrix of a step once for all solutes (Thomas).

    It is  storage + dt div(implicit_flux upwind - conductance grad).
    storage (cell,) m, water content times width; conductance (face,) m s-1
    implicit_flux (face,) m s-1, >= 0: the flux where its advection is implicit, elsewhere 0
    dt      s, times the weight of the end of the step
    Fills   down, up (face,) m: what a unit of change passes on downstream and back; inverse (cell,) m-1;
            lower, upper (cell,) 1, in [0, 1)
    """
    cells = storage.shape[0]
    for f in range(cells + 1):
        up[f] = dt * conductance[f]
        down[f] = up[f] + dt * implicit_flux[f]
    behind = 0.0
    for i in range(cells):
        inverse[i] = 1.0 / (storage[i] + up[i] + down[i + 1] - down[i] * behind)
        lower[i] = down[i] * inverse[i]
        behind = upper[i] = up[i + 1] * inverse[i]


@kernel
def sweep(rows, lower, begin, end):
    """Forward substitution in place through the cells begin to end; rows (LANES, cell), mol m-3."""
    r0, r1, r2, r3, r4, r5 = rows[0], rows[1], rows[2], rows[3], rows[4], rows[5]
    r6, r7, r8, r9, r10, r11 = rows[6], rows[7], rows[8], rows[9], rows[10], rows[11]
    a = b = c = d = e = f = g = h = j = k = m = n = 0.0
    if begin > 0:
        last = begin - 1
        a, b, c, d, e, f = r0[last], r1[last], r2[last], r3[last], r4[last], r5[last]
        g, h, j, k, m, n = r6[last], r7[last], r8[last], r9[last], r10[last], r11[last]
    for i in range(begin, end):
        share = lower[i]
        a, b, c = r0[i] + share * a, r1[i] + share * b, r2[i] + share * c
        d, e, f = r3[i] + share * d, r4[i] + share * e, r5[i] + share * f
        g, h, j = r6[i] + share * g, r7[i] + share * h, r8[i] + share * j
        k, m, n = r9[i] + share * k, r10[i] + share * m, r11[i] + share * n
        r0[i], r1[i], r2[i], r3[i], r4[i], r5[i] = a, b, c, d, e, f
        r6[i], r7[i], r8[i], r9[i], r10[i], r11[i] = g, h, j, k, m, n


@kernel
def sweep_back(rows, upper, begin, end):
    """Back substitution in place through the cells end to begin."""
    r0, r1, r2, r3, r4, r5 = rows[0], rows[1], rows[2], rows[3], rows[4], rows[5]
    r6, r7, r8, r9, r10, r11 = rows[6], rows[7], rows[8], rows[9], rows[10], rows[11]
    a = b = c = d = e = f = g = h = j = k = m = n = 0.0
    if end < upper.shape[0]:
        a, b, c, d, e, f = r0[end], r1[end], r2[end], r3[end], r4[end], r5[end]
        g, h, j, k, m, n = r6[end], r7[end], r8[end], r9[end], r10[end], r11[end]
    for i in range(end - 1, begin - 1, -1):
        share = upper[i]
        a, b, c = r0[i] + share * a, r1[i] + share * b, r2[i] + share * c
        d, e, f = r3[i] + share * d, r4[i] + share * e, r5[i] + share * f
        g, h, j = r6[i] + share * g, r7[i] + share * h, r8[i] + share * j
        k, m, n = r9[i] + share * k, r10[i] + share * m, r11[i] + share * n
        r0[i], r1[i], r2[i], r3[i], r4[i], r5[i] = a, b, c, d, e, f
        r6[i], r7[i], r8[i], r9[i], r10[i], r11[i] = g, h, j, k, m, n


@kernel(inner=True)
def gather(surplus, inverse, out):
    """The right-hand side of one solute, already divided by the pivots."""
    for i in range(out.shape[0]):
        out[i] = inverse[i] * (surplus[i] - surplus[i + 1])


@kernel(inner=True)
def gather_swollen(surplus, dissolved, swelling, inverse, out):
    """The same where cells keep water that passes through them."""
    for i in range(out.shape[0]):
        out[i] = inverse[i] * (surplus[i] - surplus[i + 1] - swelling[i] * dissolved[i])


@kernel(inner=True)
def pass_change(change, down, up, passed):
    """Add what the change of one solute sends through the inner faces; change (face + 1,)."""
    for f in range(passed.shape[0]):
        passed[f] += down[f] * change[f] - up[f] * change[f + 1]


@kernel
def spread(dissolved, swelling, surplus, down, up, inverse, lower, upper, change, passed):
    """Let what a surplus of passages changes spread implicitly, and add the passages that this makes.

    Solves  storage x + dt div(implicit flux x - conductance grad x) = surplus in - out - swelling dissolved
    for the change x of the concentrations, mol m-3, and adds dt (implicit flux x - conductance grad x) to
    passed (equations.md, 25).

    dissolved (solute, cell) mol m-3; swelling (cell,) m, what a cell keeps of the water passing through it
    surplus   (solute, face) mol m-2; down, up, inverse, lower, upper as `factor` left them
    change    (LANES, cell) scratch; passed (solute, face) mol m-2, added to; may be the same array as surplus
    """
    solutes, cells = dissolved.shape
    swells = False
    for i in range(cells):
        swells |= swelling[i] != 0.0
    for first in range(0, solutes, LANES):
        lanes = min(LANES, solutes - first)
        change[lanes:] = 0.0
        for begin in range(0, cells, STRETCH):
            end = min(begin + STRETCH, cells)
            for j in range(lanes):
                if swells:
                    gather_swollen(surplus[first + j, begin : end + 1], dissolved[first + j, begin:end],
                                   swelling[begin:end], inverse[begin:end], change[j, begin:end])
                else:
                    gather(surplus[first + j, begin : end + 1], inverse[begin:end], change[j, begin:end])
            sweep(change, lower, begin, end)
        begin = ((cells - 1) // STRETCH) * STRETCH
        end = cells
        while begin >= 0:
            sweep_back(change, upper, begin, end)
            stop = min(end, cells - 1)  # inner faces behind the cells begin to stop
            for j in range(lanes):
                pass_change(change[j, begin : stop + 1], down[begin + 1 : stop + 1], up[begin + 1 : stop + 1],
                            passed[first + j, begin + 1 : stop + 1])
                if end == cells:
                    passed[first + j, cells] += down[cells] * change[j, cells - 1]
            end = begin
            begin -= STRETCH
        for j in range(lanes):
            passed[first + j, 0] -= up[0] * change[j, 0]
