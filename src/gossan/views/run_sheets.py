"""The tables that a run prints."""

from __future__ import annotations

from collections.abc import Iterator

from gossan.case.bounds import PH
from gossan.views.limits import Verdict
from gossan.views.scales import PLAIN, Scale, dissolved_text, solute_scale, time_scale, time_text
from gossan.views.sheet import Sheet
from gossan.views.summary import HALF, Summary


def run_sheets(summary: Summary) -> Iterator[Sheet]:
    """Breakthrough against limits, the bed, the capacity left, the ledger, the effort."""
    yield from _ports(summary)
    if summary.redox:
        yield _redox(summary)
    yield _bed(summary)
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
        volumes = f"{verdict.pore_volumes:.4g}"
    return (verdict.quantity, scale.unit, limit, when, volumes, number(verdict.last), number(verdict.peak))


def _bed(summary: Summary) -> Sheet:
    porosity, where = summary.least_porosity
    rows = [("least porosity", f"{porosity:.4g} at x = {where:.4g} m")]
    found = summary.conductivity
    if found.least_fraction is None:
        rows.append(("least conductivity", "not known: the case gives no conductivity"))
    else:
        least = f"{100 * found.least_fraction:.4g} % of the start, at x = {found.at:.4g} m"
        rows.append(("least conductivity", least))
        fell = "no cell in this run" if found.half_at is None else f"a cell at {time_text(found.half_at)}"
        rows.append((f"fell to {100 * HALF:g} %", fell))
    if summary.head_loss:
        first, last = summary.head_loss
        rows.append(("head loss", f"{first:.4g} m at the start, {last:.4g} m at the end"))
    first, last = (86400.0 * flux for flux in summary.flux)
    if abs(last - first) > 1e-6 * abs(first):
        rows.append(("Darcy flux", f"{first:.4g} m/d at the start, {last:.4g} m/d at the end"))
    return Sheet("Bed", ("", ""), tuple(rows), left=2)


def _capacity(summary: Summary) -> Sheet:
    rows = tuple(
        (stock.mineral, f"{stock.first:.4g}", f"{stock.left:.4g}",
         f"{stock.used_percent:.1f}" if stock.used_percent > -0.05 else "grew")
        for stock in summary.stocks
    )  # fmt: skip
    return Sheet("Capacity", ("mineral of the start", "mol/m2", "left", "used (%)"), rows)


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
