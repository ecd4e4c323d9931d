"""The program against its goals, as ratios inside one process: python tools/bench/all.py [PART ...]

Prints what must be reached, what is aimed at and what was found. A part is skipped, not failed, where a fixed
piece of work takes so different times that nothing can be said; --anyway measures all the same.
"""

from __future__ import annotations

import argparse
import os
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
if str(ROOT) not in sys.path:
    sys.path.insert(0, str(ROOT))  # so that it finds tests/ and tools/ from wherever it is called

from tools.bench import carrying, equilibrium, records, start, whole_run  # noqa: E402  (needs the path)
from tools.bench.timing import steadily  # noqa: E402

PARTS = {
    "equilibrium": equilibrium,
    "transport": carrying,
    "run": whole_run,
    "start": start,
    "recording": records,
}


def main() -> int:
    """Measure the parts asked for, print the table."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("parts", nargs="*", metavar="PART", help=f"of {', '.join(PARTS)}; default: all")
    parser.add_argument("--anyway", action="store_true", help="measure on a busy machine too")
    asked = parser.parse_args()
    wrong = [part for part in asked.parts if part not in PARTS]
    if wrong:
        parser.error(f"no part {wrong[0]}: choose from {', '.join(PARTS)}")
    print(f"{'':58} {'must':>9} {'aim':>9} {'found':>11}")
    for name in asked.parts or PARTS:
        part = PARTS[name]
        for line in steadily(part.GOALS, part.measure, asked.anyway):
            print(line, flush=True)
    print(f"load of the last minute {os.getloadavg()[0]:.1f} on {os.cpu_count()} processors")
    return 0


if __name__ == "__main__":
    sys.exit(main())
