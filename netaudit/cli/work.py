"""How a command works: in how many processes or where, its progress on a terminal, and how Ctrl-C ends it."""

from __future__ import annotations

import argparse
import signal
import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType, TracebackType
from typing import TYPE_CHECKING, Any

from netaudit.workers import Watch, Workers, cluster, processes

if TYPE_CHECKING:
    from rich.progress import Progress, TaskID

#: what takes less time than this shows no progress, seconds
_PATIENCE = 2.0


def add_workers(command: argparse.ArgumentParser) -> None:
    """``--workers`` and ``--cluster``."""
    where = command.add_mutually_exclusive_group()
    where.add_argument(
        "--workers",
        type=int,
        metavar="N",
        help="processes for boards, modes, corners and samples; 0 takes every processor (default: 1)",
    )
    where.add_argument(
        "--cluster", metavar="ADDRESS", help="a Dask scheduler whose workers do it, such as tcp://10.0.0.5:8786"
    )


@contextmanager
def at_work(count: int, address: str | None = None) -> Iterator[Workers]:
    """``count`` workers, or those of the scheduler at ``address``, with progress on a terminal; the first Ctrl-C stops
    the work between two pieces, the second at once.  Raises InputError for an address that cannot be used."""
    with Bars(sys.stderr.isatty()) as bars, _listening(bars):
        workers = cluster(address, bars) if address else processes(count, bars)
        try:
            yield workers
        finally:
            workers.close()


class Bars(Watch):
    """Progress bars on stderr, one for each loop that is going on; ``visible`` on a terminal only."""

    def __init__(self, visible: bool) -> None:
        self.stopped = False
        self._visible = visible
        self._begun = time.monotonic()
        self._loops: dict[int, tuple[str, int, int]] = {}
        self._next = 0
        self._display: Progress | None = None
        self._tasks: dict[int, TaskID] = {}

    def __enter__(self) -> Bars:
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None, at: TracebackType | None) -> None:
        if self._display is not None:
            self._display.stop()
            self._display = None

    @property
    def stopping(self) -> bool:
        return self.stopped

    def begin(self, what: str, total: int) -> int:
        self._next += 1
        self._loops[self._next] = (what, 0, total)
        self._show()
        return self._next

    def step(self, number: int) -> None:
        what, done, total = self._loops[number]
        self._loops[number] = (what, done + 1, total)
        self._show()

    def end(self, number: int) -> None:
        self._loops.pop(number, None)
        if self._display is not None and number in self._tasks:
            self._display.remove_task(self._tasks.pop(number))

    def _show(self) -> None:
        if not self._visible or time.monotonic() - self._begun < _PATIENCE:
            return
        if self._display is None:
            from rich.console import Console
            from rich.progress import Progress

            self._display = Progress(console=Console(stderr=True), transient=True)
            self._display.start()
        for number, (what, done, total) in self._loops.items():
            if number not in self._tasks:
                self._tasks[number] = self._display.add_task(what, total=total)
            self._display.update(self._tasks[number], completed=done)


@contextmanager
def _listening(bars: Bars) -> Iterator[None]:
    """Ctrl-C once: stop between two pieces of work and report what is done; twice: at once."""

    def stop(number: int, frame: FrameType | None) -> None:
        bars.stopped = True
        signal.signal(signal.SIGINT, signal.default_int_handler)
        print("netaudit: stopping after this step; Ctrl-C again stops at once", file=sys.stderr)

    try:
        before: Any = signal.signal(signal.SIGINT, stop)
    except ValueError:
        # not in the main thread: whoever runs us there handles the keyboard
        yield
        return
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
