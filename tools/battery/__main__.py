"""Send random waters through the program's equilibrium and judge every answer.

    python -m tools.battery --mix coupled open --waters 20000 --hard 60

Each answer is put back into the equations in plain numpy; of the hardest ones the ln activities are settled
at 60 or 120 digits and held against the certificate. Leaves with 1 where a water fails.
"""

from __future__ import annotations

import argparse
import sys
import time

from tools.battery.answers import solve
from tools.battery.conditions import conditions
from tools.battery.digits import NoAnswer, hardest, settled
from tools.battery.mixes import CHANGES, MIXES, batches
from tools.battery.report import Report

from gossan.chemistry.certificate import certify


def main() -> int:
    """Run the mixes that the command line asks for."""
    parser = argparse.ArgumentParser(prog="python -m tools.battery", description=__doc__.splitlines()[0])
    parser.add_argument("--mix", nargs="+", choices=[*MIXES], default=[*MIXES], help="default: all of them")
    parser.add_argument("--waters", type=int, default=2000, help="of each mix")
    parser.add_argument("--seed", type=int, default=20261201)
    parser.add_argument("--hard", type=int, default=0, metavar="K", help="settle the K hardest")
    parser.add_argument("--activity", default="davies", choices=("davies", "debye-hueckel", "ideal"))
    parser.add_argument("--change", default="", choices=["", *CHANGES])
    parser.add_argument("--no-certificates", action="store_true", help="judge in plain numpy alone: faster")
    asked = parser.parse_args()
    good = True
    for mix in asked.mix:
        report = one_mix(mix, asked)
        for line in report.lines():
            print(line, flush=True)
        good = good and report.good()
    return 0 if good else 1


def one_mix(mix: str, asked: argparse.Namespace) -> Report:
    """Solve and judge all batches of a mix."""
    report = Report(mix)
    every = list(batches(mix, asked.seed, asked.waters, asked.activity, asked.change))
    for batch in every:
        started = time.perf_counter()
        answers = solve(batch)
        report.seconds += time.perf_counter() - started
        report.asked += len(batch.totals)
        judged_by = conditions(answers)
        certificate = None
        if asked.hard or not asked.no_certificates:
            certificate = certify(answers.found, totals=answers.batch.totals.T, upper=answers.batch.upper.T)
        report.add(judged_by, certificate)
        if certificate is not None:
            share = -(-asked.hard // len(every))
            for cell in hardest(judged_by, certificate, share) if asked.hard else ():
                try:
                    report.settled.append(settled(judged_by, certificate, cell))
                except NoAnswer as failure:
                    told = f"{batch.name}, water {answers.water[cell]}: the oracle gave up: {failure}"
                    report.failures.append(told)
    return report


if __name__ == "__main__":
    sys.exit(main())
