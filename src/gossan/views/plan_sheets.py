"""The tables that a check prints."""

from __future__ import annotations

from collections.abc import Iterator

from gossan.views.plan import Plan
from gossan.views.scales import time_text
from gossan.views.sheet import Sheet


def plan_sheets(plan: Plan) -> Iterator[Sheet]:
    """The layers, and what would run in them."""
    yield _layers(plan)
    yield Sheet("Would run", ("", ""), _facts(plan), left=2, wraps=True)


def _layers(plan: Plan) -> Sheet:
    rows = []
    for layer, said in zip(plan.problem.grid.layers, plan.case.layers, strict=True):
        conductivity = said.conductivity.text if said.conductivity else "-"
        rows.append((
            layer.name, f"{layer.start:.4g}", f"{layer.start + layer.length:.4g}", str(layer.cells),
            f"{100 * layer.length / layer.cells:.3g}", f"{said.porosity:g}", conductivity,
        ))  # fmt: skip
    heads = ("layer", "from (m)", "to (m)", "cells", "cell (cm)", "porosity", "conductivity")
    return Sheet("Layers", heads, tuple(rows))


def _facts(plan: Plan) -> tuple[tuple[str, str], ...]:
    problem, run = plan.problem, plan.case.run
    assert run is not None
    feeds = problem.feeds
    held = "at the start; it follows the " + ("conductivity" if feeds.head_at_start else "feed")
    held = "held" if feeds.flux_is_steady else held
    residence = time_text(plan.residence) if plan.darcy_flux > 0.0 else "none at the start: nothing flows"
    seconds = "not known"
    if plan.seconds is not None:
        seconds = f"about {time_words(plan.seconds)}, from its first steps"
    duration = f"{run.duration.text}: {time_text(plan.duration)}, {plan.pore_volumes:.4g} pore volumes"
    return (
        ("cells", f"{len(problem.grid.width)}"),
        ("pore volume", f"{1e3 * problem.pore_volume:.4g} L per m2 of cross-section"),
        ("Darcy flux", f"{86400 * plan.darcy_flux:.4g} m/d, {held}"),
        ("residence time", residence),
        ("duration", duration),
        ("steps", f"about {plan.steps}, or more where accuracy = {run.accuracy:g} needs shorter ones"),
        ("wall clock", seconds),
        ("dissolved", ", ".join(problem.solutes)),
        ("redox", _redox(plan)),
        *_gases(plan),
        ("may form", ", ".join(plan.may_form) or "nothing"),
        ("may only dissolve", ", ".join(plan.may_dissolve) or "nothing"),
        ("ports", ", ".join(f"{port.name} at {port.x:.4g} m" for port in problem.ports)),
    )


def _redox(plan: Plan) -> str:
    """What is coupled, in the words of the case."""
    chemistry = plan.case.chemistry
    if chemistry.redox == "coupled":
        return "coupled: valences of all elements are at equilibrium"
    if chemistry.coupled:
        return f"held, but for {', '.join(chemistry.coupled)}"
    return "held: no valence turns into another"


def _gases(plan: Plan) -> tuple[tuple[str, str], ...]:
    told = [
        f"{name} at {held.pressure}" + (f", {held.amount} of it" if held.amount else ", without end")
        for name, held in plan.case.chemistry.gases.items()
    ]
    return (("gases", "; ".join(told)),) if told else ()


def time_words(seconds: float) -> str:
    """A wall-clock time in one figure, as an estimate deserves.

    >>> time_words(7.3), time_words(200.0)
    ('7 s', '3 min')
    """
    if seconds < 1.0:
        return "a second"
    if seconds < 100.0:
        return f"{float(f'{seconds:.1g}'):g} s"
    return f"{seconds / 60:.0f} min" if seconds < 6000.0 else f"{seconds / 3600:.1g} h"
