"""The gate on a repository of many boards of which one changed, as a ratio:  python -m tests.benchmarks.monorepo [boards]

Against auditing that one board alone, without a cache; both as whole processes, in one run, the best of three.
"""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from pathlib import Path

from tests.gate.helper import VENT

_PROJECT = 'boards = ["boards/*.netlist"]\ncache = ".netaudit-cache"\nworkers = 1\n'


def board(k: int, changed: int = 0) -> str:
    """A board of its own: 40 indicator channels and their names."""
    lines = [VENT.rstrip()]
    for n in range(40):
        lines += [
            f"R{n}A resistor {1000 + k + changed}R 5% P_tot=250mW V_max=200V 1:VIN 2:N{n}",
            f"D{n}A led material=red I_F=25mA V_R=5V P_tot=75mW T_j=100degC R_th_ja=300K/W A:N{n} K:GND",
        ]
    return "\n".join(lines) + "\n"


def seconds(folder: Path, *arguments: str) -> float:
    start = time.perf_counter()
    subprocess.run(
        [sys.executable, "-m", "netaudit", "audit", *arguments], cwd=folder, capture_output=True, check=False
    )
    return time.perf_counter() - start


def main(count: int) -> None:
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        (folder / "boards").mkdir()
        (folder / "netaudit.toml").write_text(_PROJECT, encoding="utf-8")
        for k in range(count):
            (folder / "boards" / f"b{k:03}.netlist").write_text(board(k), encoding="utf-8")
        print(f"{count} boards, nothing known: {seconds(folder):.1f} s")
        gate, alone = [], []
        for turn in range(1, 4):
            (folder / "boards" / "b007.netlist").write_text(board(7, turn), encoding="utf-8")
            gate.append(seconds(folder))
            alone.append(seconds(folder, "--no-cache", "boards/b007.netlist"))
        print(f"one changed: {min(gate):.2f} s, that one alone: {min(alone):.2f} s, ratio {min(gate) / min(alone):.2f}")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 200)
