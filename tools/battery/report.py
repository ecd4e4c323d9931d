"""What is told of a battery: failures, the worst of each condition, steps, how far the waters reach."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np
from tools.battery.conditions import LIMITS, Conditions
from tools.battery.digits import Settled

from gossan.chemistry.certificate import Certificate

MOST_LINES = 20  # of failures that are told one by one
IN_LN_ACTIVITY = 1e-11  # at 60 digits, that a ln activity may be off by
OF_LARGEST = 1e-12  # the same for amounts, of the largest total


@dataclass
class Report:
    """Sums over all batches of one mix."""

    mix: str
    asked: int = 0
    seconds: float = 0.0
    failures: list[str] = field(default_factory=list)
    worst: dict[str, tuple[float, str]] = field(default_factory=dict)
    steps: list[np.ndarray] = field(default_factory=list)
    ph: list[np.ndarray] = field(default_factory=list)
    pe: list[np.ndarray] = field(default_factory=list)
    certified: list[np.ndarray] = field(default_factory=list)
    present: list[np.ndarray] = field(default_factory=list)
    settled: list[Settled] = field(default_factory=list)

    def add(self, judged_by: Conditions, certificate: Certificate | None) -> None:
        """Take in one batch."""
        answers = judged_by.answers
        name, found = answers.batch.name, answers.found
        self.failures += [f"{name}, water {water}: {reason}" for water, reason in answers.failures]
        for cell in np.flatnonzero(judged_by.broken()).tolist():
            here = {what: off[cell] for what, off in judged_by.off.items()}
            wrong = [f"{what} {off:.1e}" for what, off in here.items() if not off <= LIMITS[what]]
            self.failures.append(f"{name}, water {answers.water[cell]}: {', '.join(wrong)}")
        for what, off in judged_by.off.items():
            cell = int(np.argmax(off))
            mine = (float(off[cell]), f"{name}, water {answers.water[cell]}")
            self.worst[what] = max(self.worst.get(what, mine), mine)
        self.steps.append(found.steps)
        self.ph.append(-found.ln_activity[0] / np.log(10.0))
        if answers.batch.system.electron >= 0:
            self.pe.append(-found.ln_activity[answers.batch.system.electron] / np.log(10.0))
        if certificate is not None:
            self.certified.append(certificate.worst)
        self.present.append((found.solid > 0.0).sum(axis=0))

    def good(self) -> bool:
        """Whether nothing failed and every settled water is as near as it must be."""
        near = all(
            one.error <= IN_LN_ACTIVITY and one.amount_error <= OF_LARGEST and not one.changes
            for one in self.settled
        )
        return not self.failures and near

    def lines(self) -> Iterator[str]:
        """The report, for people."""
        solved = sum(map(len, self.steps))
        each = 1e6 * self.seconds / self.asked
        yield f"{self.mix}: {solved} of {self.asked} waters converged, {each:.0f} us each"
        yield from (f"  FAILED {one}" for one in self.failures[:MOST_LINES])
        if len(self.failures) > MOST_LINES:
            yield f"  and {len(self.failures) - MOST_LINES} more failed"
        if not solved:
            return
        for what, (value, where) in self.worst.items():
            if value > 0.0:
                yield f"  {what}: at worst {value:.1e} ({where}), allowed {LIMITS[what]:g}"
        steps = np.concatenate(self.steps)
        middle, late = np.quantile(steps, [0.5, 0.99])
        yield f"  Newton steps: median {middle:.0f}, 99 % {late:.0f}, most {steps.max()}"
        for what, parts in (("pH", self.ph), ("pe", self.pe)):
            if parts:
                every = np.concatenate(parts)
                marks = (f"{q:g} % {np.quantile(every, q / 100):.2f}" for q in (0, 1, 10, 50, 90, 99, 100))
                yield f"  {what}: " + ", ".join(marks)
        counts = np.bincount(np.concatenate(self.present))
        yield "  minerals present: " + ", ".join(f"{n} waters have {k}" for k, n in enumerate(counts) if n)
        if self.certified:
            every = np.concatenate(self.certified)
            yield (
                f"  certificates: ln activity within {np.median(every):.1e} in half of the waters, "
                f"{np.quantile(every, 0.999):.1e} in 999 of 1000, {every.max():.1e} at worst"
            )
        yield from self._settled_lines()

    def _settled_lines(self) -> Iterator[str]:
        if not self.settled:
            return
        errors = [one.error for one in self.settled]
        hard = max(self.settled, key=lambda one: one.error)
        yield (
            f"  {len(errors)} hardest at many digits: ln activity off by {hard.error:.1e} at worst "
            f"({hard.name}, water {hard.water}), median {np.median(errors):.1e};"
        )
        amount = max(one.amount_error for one in self.settled)
        covered = np.array([one.covered for one in self.settled])
        yield (
            f"    amounts off by {amount:.1e} of the largest total; "
            f"{(covered <= 1.0).sum()} of {len(covered)} errors within their certificates, "
            f"at most {covered.max():.3f} of it"
        )
        for one in self.settled:
            if one.changes:
                yield f"    wrong minerals: {one.name}, water {one.water}: {'; '.join(one.changes)}"
