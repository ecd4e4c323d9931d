"""The hardest waters, by three measures, settled at 60 digits, or at 120 where electrons are counted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from tests.oracles.newton60 import NoAnswer
from tests.support.plain_of import judged
from tools.battery.conditions import Conditions

from gossan.chemistry.certificate import Certificate


@dataclass(frozen=True)
class Settled:
    """One water at many digits."""

    name: str  # of its batch
    water: int
    error: float  # the largest of its ln activities
    certified: float  # what its certificate says of it
    covered: float  # the largest share of a component's certified error that was really there
    amount_error: float
    changes: tuple[str, ...]


def scarcity(judged_by: Conditions) -> np.ndarray:
    """(water,): the largest total over what is dissolved of the scarcest component that is there."""
    plain, totals = judged_by.plain, judged_by.answers.batch.totals
    dissolved = np.abs(plain.formation).T @ judged_by.molality
    scarcest = np.where(dissolved > 0.0, dissolved, np.inf).min(axis=0)
    return np.abs(totals).max(axis=1) / scarcest


def want_of_poise(judged_by: Conditions) -> np.ndarray:
    """(water,): the largest total over the electrons that the water itself would take up per unit of pe.

    Without minerals: what is left of the electrons' column after the best fit by all others, weighted by
    molality. 0 where no electrons are counted.
    """
    plain, totals = judged_by.plain, judged_by.answers.batch.totals
    if judged_by.answers.batch.system.electron < 0:
        return np.zeros(len(totals))
    out = np.empty(len(totals))
    for w, molality in enumerate(judged_by.molality.T):
        weighted = np.sqrt(molality)[:, None] * plain.formation
        size = np.linalg.norm(weighted, axis=0)
        there = (size > 0.0) & (np.arange(len(size)) < len(size) - 1)
        others = weighted[:, there] / size[there]
        left = weighted[:, -1] - others @ np.linalg.lstsq(others, weighted[:, -1], rcond=None)[0]
        out[w] = np.abs(totals[w]).max() / max(float(left @ left), 1e-300)
    return out


def hardest(judged_by: Conditions, certificate: Certificate, count: int) -> list[int]:
    """Cells: a third by scarcity, a third by want of poise, a third by what their certificate admits."""
    chosen: dict[int, None] = {}
    for measure in (scarcity(judged_by), want_of_poise(judged_by), certificate.worst):
        order = np.argsort(-measure, kind="stable")
        fresh = [int(w) for w in order.tolist() if int(w) not in chosen]
        chosen.update(dict.fromkeys(fresh[: -(-count // 3)]))
    return list(chosen)[:count]


def settled(judged_by: Conditions, certificate: Certificate, cell: int) -> Settled:
    """One water at many digits, beside its answer and its certificate.

    Raises  NoAnswer
    """
    answers = judged_by.answers
    batch, water = answers.batch, int(answers.water[cell])
    exact = judged(
        answers.found, cell, batch.totals[cell], batch.upper[cell], judged_by.plain
    )
    says = certificate.ln_activity[: len(exact.errors), cell]
    covered = float((exact.errors / np.maximum(says, 1e-300)).max())
    return Settled(
        batch.name, water, float(exact.errors.max()), float(says.max()), covered, exact.amount_error,
        exact.changes,
    )  # fmt: skip


__all__ = ["NoAnswer", "Settled", "hardest", "scarcity", "settled", "want_of_poise"]
