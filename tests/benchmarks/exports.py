"""Speed of reading EDIF, as ratios measured side by side in one run:  python -m tests.benchmarks.exports [instances]

Against a regular-expression split of the same text into brackets, names and strings, which gives no structure at all;
and growth from a tenth of the size, with the memory of a process of its own for each.
"""

from __future__ import annotations

import re
import subprocess
import sys
import time

from tests.exports.writer import Placed, edif

_SPLIT = re.compile(r'"[^"]*"|[()]|[^\s()"]+')


def ladder(count: int) -> bytes:
    """A ladder of resistors with four properties each, a line a form."""
    placed = [
        Placed(
            f"R{k}",
            "RES",
            {"1": f"N{k}", "2": f"N{k + 1}"},
            {
                "Value": f"{k % 90 + 10}k",
                "PCB Footprint": "CHIP_0805",
                "Tolerance": "1%",
                "Part Number": f"RES-{k % 90}",
            },
        )
        for k in range(count)
    ]
    return edif(placed).replace(" (", "\n(").encode()


def measure(count: int) -> None:
    """One size in this process: seconds, lines and memory."""
    import resource

    from netaudit.syntax.edif import read_edif
    from netaudit.syntax.forms import read_forms

    data = ladder(count)
    text = data.decode()
    read_edif(ladder(10), "warm")
    before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    seconds = {}
    for what, work in (
        ("split", lambda: _SPLIT.findall(text)),
        ("forms", lambda: read_forms(text, "b")),
        ("export", lambda: read_edif(data, "b")),
    ):
        best = float("inf")
        for _ in range(3 if count <= 20_000 else 1):
            start = time.process_time()
            result = work()
            best = min(best, time.process_time() - start)
            del result
        seconds[what] = best
    lines = text.count("\n")
    memory = (resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before) / 1024
    print(
        f"{count} instances, {len(data) / 1e6:.1f} MB, {lines} lines: split {seconds['split']:.2f} s; forms "
        f"{seconds['forms'] / seconds['split']:.1f} times; whole {seconds['export'] / seconds['split']:.1f} times, "
        f"{seconds['export']:.2f} s, {lines / seconds['export']:,.0f} lines/s; {memory:.0f} MB more, "
        f"{memory * 1e6 / len(data):.1f} times the file"
    )


if __name__ == "__main__":
    if len(sys.argv) == 3:
        measure(int(sys.argv[1]))
    else:
        whole = int(sys.argv[1]) if len(sys.argv) > 1 else 20_000
        for size in (whole // 10, whole):
            subprocess.run([sys.executable, "-m", "tests.benchmarks.exports", str(size), "alone"], check=True)
