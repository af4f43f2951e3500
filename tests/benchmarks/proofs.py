"""How much of the worst case can be proven, and whether any proof is wrong:  python -m tests.benchmarks.proofs [BOARDS]

First the shares proven, bounded and checked on boards with 30 tolerances; then random boards (networks, bridges, mirrors,
references, separate circuits on one rail) whose vertices are all solved, with points inside.
"""

from __future__ import annotations

import sys
import time
from collections import Counter

import numpy as np

import netaudit
from netaudit.solve.operate import Operation
from tests.audit.proof_boards import KINDS, broken, claims
from tests.benchmarks.samples import board


def tolerances(least: float, most: float, seed: int = 0) -> str:
    """The board of 60 nodes with 30 tolerances, each drawn between two percentages."""
    rng = np.random.default_rng(seed)
    lines, left = [], 30
    for line in board().splitlines():
        percent = f"{rng.uniform(least, most):.2f}%" if left and " 5% " in line else ""
        left -= bool(percent)
        lines.append(line.replace(" 5% ", f" {percent} ").replace("10.8V..13.2V", ""))
    return "\n".join(lines) + "\n"


def shares() -> None:
    for least, most in ((1, 1), (5, 5), (1, 20), (20, 20)):
        operation = Operation(netaudit.loads(tolerances(least, most)).board.circuits[0])
        operation.result()
        start = time.perf_counter()
        _, _, extremes = claims(operation)
        taken = time.perf_counter() - start
        tops = [max(some, key=lambda e: e.value) for some in extremes]
        counts = Counter(e.proof for e in tops)
        gaps = [e.bound / e.value - 1 for e in tops if e.bound is not None and e.value > 0]
        near = np.mean([g <= 0.01 for g in gaps]) if gaps else 1.0
        said = ", ".join(f"{name} {100 * counts[name] / len(tops):.0f} %" for name in ("proven", "bounded", "checked"))
        print(
            f"30 tolerances of {least} to {most} %: {said}; {100 * near:.0f} % of the bounds within 1 %; {taken:.1f} s"
        )


def hunt(count: int) -> None:
    total: dict[str, Counter[str]] = {}
    wrong: list[str] = []
    for seed in range(count):
        kind = KINDS[seed % len(KINDS)]
        widest = (3, 6, 21, 21)[seed % 4]
        counts, said = broken(kind(np.random.default_rng(seed), widest), seed)
        total.setdefault(f"{kind.__name__} up to {widest} %", Counter()).update(counts)
        wrong += [f"seed {seed}, {kind.__name__}: {text}" for text in said]
    for name, counter in sorted(total.items()):
        print(f"{name}: {dict(counter)}")
    print(f"{count} boards, {len(wrong)} wrong", *wrong, sep="\n")


if __name__ == "__main__":
    shares()
    hunt(int(sys.argv[1]) if len(sys.argv) > 1 else 2000)
