"""Random circuits of known count: not one false ``proven`` or ``complete``, and how many are decided.

python -m tests.benchmarks.known_counts [number of circuits] [seed]
"""

from __future__ import annotations

import sys
import tempfile
import time
from itertools import islice
from pathlib import Path

import netaudit
from tests.solve.known_counts import Known, circuits


def claim(known: Known, folder: Path) -> tuple[str, int]:
    """What ``solve`` says of a circuit: its uniqueness and the number of points."""
    for name, text in known.files.items():
        (folder / name).write_text(text, encoding="utf-8")
    path = folder / "known.netlist"
    path.write_text(known.text, encoding="utf-8")
    result = netaudit.load(str(path)).solve()[0]
    return result.uniqueness, len(result.points)


def main(count: int, seed: int) -> int:
    """Prints every false claim and the share that was decided; the exit status is 1 after a false claim."""
    false, decided, missed = 0, 0, 0
    started = time.perf_counter()
    with tempfile.TemporaryDirectory() as folder:
        for number, known in enumerate(islice(circuits(seed), count)):
            uniqueness, points = claim(known, Path(folder))
            decided += uniqueness != "searched"
            missed += points != known.count
            if uniqueness != "searched" and points != known.count:
                false += 1
                print(f"circuit {number}: {uniqueness} with {points} points, known {known.count}\n{known.text}")
    spent = time.perf_counter() - started
    print(
        f"{count} circuits: {false} false claims, {decided / count:.2%} decided, {missed} other counts, {spent:.0f} s"
    )
    return 1 if false else 0


if __name__ == "__main__":
    sys.exit(main(int(sys.argv[1]) if len(sys.argv) > 1 else 2000, int(sys.argv[2]) if len(sys.argv) > 2 else 1))
