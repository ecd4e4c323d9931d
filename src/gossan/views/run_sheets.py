"""The tables that a run prints."""

from __future__ import annotations

from collections.abc import Iterator

from gossan.case.bounds import PH
from gossan.views.bed import LEVELS, SPOKEN, HeadLoss, Left
from gossan.views.limits import Verdict
from gossan.views.scales import PLAIN, Scale, dissolved_text, solute_scale, time_scale, time_text
from gossan.views.sheet import Sheet
from gossan.views.summary import Stock, Summary

MOST_FILLERS = 3
NARROW = 0.95  # of its conductivity: a cell that keeps more is no bottleneck
SAME = 1e-3  # heads that stay within this share are told once, as the start and the end


def run_sheets(summary: Summary) -> Iterator[Sheet]:
    """Breakthrough against limits, the bed, the capacity left, the ledger, the effort."""
    yield from _ports(summary)
    if summary.redox:
        yield _redox(summary)
    yield _bed(summary)
    yield from _conductivity(summary)
    if summary.head_loss and _matters(summary.head_loss):
        yield _heads(summary)
    if summary.stocks:
        yield _capacity(summary)
    yield _ledger(summary)
    yield _effort(summary)


def _ports(summary: Summary) -> Iterator[Sheet]:
    scale = time_scale(summary.time)
    for port in summary.result.axes.ports:
        own = [verdict for verdict in summary.verdicts if verdict.port == port]
        limited = [verdict for verdict in own if verdict.bound]
        shown = limited or [verdict for verdict in own if verdict.quantity == PH or verdict.peak]
        rows = tuple(_port_row(verdict, scale, summary.tracer_masses) for verdict in shown)
        heads = ("", "unit", "limit", f"exceeded ({scale.unit})", "(PV)", "last", "peak")
        note = "flux-averaged; no limits are given for this port" if not limited else "flux-averaged"
        yield Sheet(f"Port {port}", heads, rows, left=2, note=note)


def _redox(summary: Summary) -> Sheet:
    rows = tuple((port, f"{1e3 * first:.0f}", f"{1e3 * last:.0f}")
                 for port, (first, last) in summary.redox.items())  # fmt: skip
    note = "Eh against the hydrogen electrode of what is coupled, in the water there"
    return Sheet("Redox", ("port", "start (mV)", "end (mV)"), rows, note=note)


def _port_row(verdict: Verdict, time: Scale, masses: dict[str, float]) -> tuple[str, ...]:
    is_ph = verdict.quantity == PH
    scale = PLAIN if is_ph else solute_scale(verdict.quantity, masses)

    def number(value: float | None) -> str:
        if is_ph:
            return "-" if value is None else f"{value:.2f}"
        return dissolved_text(value, scale)

    bound = verdict.bound
    limit = "-"
    if bound:
        limit = f"{bound.low:g}-{bound.high:g}" if is_ph else number(bound.high)
    if not bound:
        when, volumes = "-", "-"
    elif verdict.last is None:
        when, volumes = "not in this case", "-"
    elif verdict.first_exceeded is None or verdict.pore_volumes is None:
        when, volumes = "not in this run", "-"
    elif verdict.first_exceeded == 0.0:
        when, volumes = "from the start", "0"
    else:
        when = f"{verdict.first_exceeded * time.factor:.4g}"
        if verdict.error:
            when += f" ± {verdict.error * time.factor:.1g}"
        if verdict.grid_error is not None:
            when += f", cells ± {verdict.grid_error * time.factor:.1g}"
        volumes = f"{verdict.pore_volumes:.4g}"
    return (verdict.quantity, scale.unit, limit, when, volumes, number(verdict.last), number(verdict.peak))


def _bed(summary: Summary) -> Sheet:
    porosity, where = summary.least_porosity
    rows = [("least porosity", f"{porosity:.4g} at x = {where:.4g} m")]
    bed, found = summary.bed, summary.bottleneck
    if found is None:
        rows.append(("least conductivity", "not known: the case gives no conductivity"))
    else:
        place = f"in layer {found.layer}, x = {found.at:.4g} m"
        rows.append(("least conductivity", f"{_percent(found.fraction)} % of the start, {place}"))
        if found.filled_by and found.fraction < NARROW:
            rows.append(("what grew there", _shares(found.filled_by)))
    if bed.in_series:
        rows.append(("of the whole column", f"{_percent(bed.column.last)} % of the start at the end"))
    if summary.head_loss:
        first, last = summary.head_loss.whole[[0, -1]]
        rows.append(("head loss", f"{first:.4g} m at the start, {last:.4g} m at the end"))
    first, last = (86400.0 * flux for flux in summary.flux)
    if abs(last - first) > 1e-6 * abs(first):
        rows.append(("Darcy flux", f"{first:.4g} m/d at the start, {last:.4g} m/d at the end"))
    return Sheet("Bed", ("", ""), tuple(rows), left=2)


def _matters(found: HeadLoss) -> bool:
    """Whether any layer's loss of head changes."""
    return bool((found.loss.max(axis=0) - found.loss.min(axis=0)).max() > SAME * found.whole.max())


def _shares(shares: dict[str, float]) -> str:
    told = [f"{name} {100.0 * share:.3g} %" for name, share in list(shares.items())[:MOST_FILLERS]]
    return ", ".join(told) + ", by volume" if len(shares) > 1 else next(iter(shares))


def _percent(fraction: float) -> str:
    return f"{100.0 * fraction:.3g}" if fraction < 0.9995 else f"{100.0 * fraction:.4g}"


def _conductivity(summary: Summary) -> Iterator[Sheet]:
    """When it fell how far: a first cell, the column, and the column by other laws."""
    bed, scale = summary.bed, time_scale(summary.time)
    if not bed.known:
        return
    heads = ("", "left (%)", *(f"at {100.0 * level:g} % ({scale.unit})" for level in LEVELS.values()))
    rows = [_fall_row("a first cell", bed.least_cell, scale)]
    note = "of the conductivity at the start; - where it did not fall so far"
    if bed.in_series:
        rows.append(_fall_row("the whole column", bed.column, scale))
    if bed.has_band:
        rows += [_fall_row(f"  {SPOKEN[name]}", left, scale) for name, left in bed.band.items()]
        note += "; below, the column by other laws, for the same porosities"
    if bed.has_band or any(bed.least_cell.falls.values()):
        yield Sheet("Conductivity left", heads, tuple(rows), note=note)


def _fall_row(name: str, left: Left, scale: Scale) -> tuple[str, ...]:
    def when(level: str) -> str:
        fall = left.falls[level]
        if fall is None:
            return "-"
        told = f"{fall.at * scale.factor:.4g}"
        return f"{told} ± {fall.error * scale.factor:.1g}" if fall.error else told

    return (name, _percent(left.last), *(when(level) for level in LEVELS))


def _heads(summary: Summary) -> Sheet:
    found, scale = summary.head_loss, time_scale(summary.time)
    assert found is not None
    several = len(found.layers) > 1
    names = (*found.layers, "column") if several else ("column",)
    columns = [*found.loss.T, found.whole] if several else [found.whole]
    rows = tuple(
        (f"{time * scale.factor:.4g}", *(f"{values[i]:.4g}" for values in columns))
        for i, time in enumerate(found.time)
    )
    return Sheet("Head loss", (f"time ({scale.unit})", *(f"{name} (m)" for name in names)), rows, left=0)


def _capacity(summary: Summary) -> Sheet:
    def used(stock: Stock) -> tuple[str, str, str]:
        if stock.used_percent <= -0.05:
            return f"{stock.used:.4g}", f"{stock.used * stock.molar_mass:.4g}", "grew"
        return f"{stock.used:.4g}", f"{stock.used * stock.molar_mass:.4g}", f"{stock.used_percent:.1f}"

    rows = tuple((stock.mineral, f"{stock.first:.4g}", *used(stock)) for stock in summary.stocks)
    heads = ("mineral of the start", "mol/m2", "used (mol/m2)", "(kg/m2)", "(%)")
    return Sheet("Capacity", heads, rows, note="per cross-section of the column")


def _ledger(summary: Summary) -> Sheet:
    rows = tuple((name, f"{error:.1e}") for name, error in summary.ledger.items())
    return Sheet("Ledger", ("", "largest error"), rows, note="relative to the largest amount there ever was")


def _error_of_steps(summary: Summary) -> str:
    if summary.splitting_error is None:
        return "not carried (run.errors)"
    return f"{summary.splitting_error:.2g} of the most there was of a solute stood elsewhere"


def _effort(summary: Summary) -> Sheet:
    result = summary.result
    rows = (
        ("simulated", time_text(summary.time)),
        ("steps", f"{summary.steps}"),
        ("error of steps", _error_of_steps(summary)),
        ("wall clock", f"{summary.seconds:.3g} s"),
        ("file", str(result.path)),
    )
    return Sheet("Run", ("", ""), rows, left=2)
