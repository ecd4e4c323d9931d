"""Kill a writer at random, often, and see that nothing is lost: `python -m tools.kills [--kills 100]`."""

from __future__ import annotations

import argparse
import tempfile
import time
from pathlib import Path

from tests.support.killing import campaign


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--kills", type=int, default=100)
    parser.add_argument("--seed", type=int, default=1)
    wanted = parser.parse_args()
    began = time.perf_counter()
    with tempfile.TemporaryDirectory() as folder:
        hit = campaign(Path(folder) / "gate.h5", wanted.kills, wanted.seed)
    seconds = time.perf_counter() - began
    print(f"{wanted.kills} kills in {seconds:.0f} s: {hit['before']} before the file appeared, "
          f"{hit['running']} in its course, {hit['ended']} after its end;\n"
          "no committed frame lost, every file resumed to the bits of a run never stopped")


if __name__ == "__main__":
    main()
