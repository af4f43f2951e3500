"""Where independent pieces of work run: in this process, in several processes, or on the workers of a Dask scheduler.

Everything that loops over boards, modes, corners or samples hands its pieces to ``Workers.each``.  Pieces are cut without
looking at the number of workers and come back in their order, so that results are the same for any number.  It is also
where progress is told and where an interruption takes effect: between two pieces, with all results so far kept.
"""

from __future__ import annotations

import os
from collections import deque
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Executor, Future
from concurrent.futures import TimeoutError as NotYet
from typing import Any, Protocol, TypeVar

from netaudit.failure import InputError

Piece = TypeVar("Piece")
Result = TypeVar("Result")
#: called with a piece and the workers that it may use for pieces of its own
Work = Callable[[Piece, "Workers"], Result]

#: pieces handed out ahead for each worker
_AHEAD = 2
#: how often a wait for a worker looks whether it is to stop, seconds
_LOOK = 0.1


class Interrupted(Exception):  # noqa: N818 - no error: somebody asked for it
    """The work was told to stop; what was done before stands."""


class Watch(Protocol):
    """Follows the work: ``begin`` a loop of ``total`` pieces (gives its number), a ``step`` of it, its ``end``; asked
    before every piece whether to stop (``stopping``)."""

    @property
    def stopping(self) -> bool: ...

    def begin(self, what: str, total: int) -> int: ...

    def step(self, number: int) -> None: ...

    def end(self, number: int) -> None: ...


class Unwatched:
    """Nobody looks and nobody interrupts."""

    stopping = False

    def begin(self, what: str, total: int) -> int:
        return 0

    def step(self, number: int) -> None: ...

    def end(self, number: int) -> None: ...


class Workers:
    """Runs pieces of work: by an ``executor`` with ``count`` workers, without one in this process."""

    def __init__(self, executor: Executor | None = None, count: int = 1, watch: Watch | None = None) -> None:
        self._executor = executor
        self.count = count if executor is not None else 1
        self.watch: Watch = Unwatched() if watch is None else watch

    def each(self, work: Work[Piece, Result], pieces: Sequence[Piece], what: str = "") -> Iterator[Result]:
        """The results of all pieces in their order.

        ``work`` is a function of a module (workers import it by name); pieces and results must be picklable.  A single
        piece stays in this process and may use all workers for its own pieces.  Raises Interrupted between pieces.
        """
        number = self.watch.begin(what, len(pieces))
        try:
            apart = self._executor is not None and len(pieces) > 1
            for result in self._apart(work, pieces) if apart else self._here(work, pieces):
                self.watch.step(number)
                yield result
        finally:
            self.watch.end(number)

    def check(self) -> None:
        """Raises Interrupted where the work is to stop."""
        if self.watch.stopping:
            raise Interrupted

    def _here(self, work: Work[Piece, Result], pieces: Sequence[Piece]) -> Iterator[Result]:
        for piece in pieces:
            self.check()
            yield work(piece, self)

    def _apart(self, work: Work[Piece, Result], pieces: Sequence[Piece]) -> Iterator[Result]:
        assert self._executor is not None
        waiting: deque[Future[Result]] = deque()
        left = iter(pieces)
        try:
            for piece in left:
                self.check()
                waiting.append(self._executor.submit(_alone, work, piece))
                if len(waiting) >= _AHEAD * self.count:
                    yield self._wait(waiting.popleft())
            while waiting:
                yield self._wait(waiting.popleft())
        finally:
            for future in waiting:
                future.cancel()

    def _wait(self, future: Future[Result]) -> Result:
        while True:
            self.check()
            try:
                return future.result(_LOOK)
            except NotYet:
                if future.done():
                    raise

    def close(self) -> None:
        """Lets the workers go."""
        if self._executor is not None:
            self._executor.shutdown(wait=True)


IN_PROCESS = Workers()


def _alone(work: Work[Piece, Result], piece: Piece) -> Result:
    """In a worker: its own pieces stay there."""
    return work(piece, IN_PROCESS)


def processes(count: int, watch: Watch | None = None) -> Workers:
    """``count`` processes of this machine (0: one a processor); one means this process."""
    count = count or os.cpu_count() or 1
    if count == 1:
        return Workers(watch=watch)
    import multiprocessing
    from concurrent.futures import ProcessPoolExecutor

    # no fork: the numerical libraries may hold threads
    context = multiprocessing.get_context("spawn")
    return Workers(ProcessPoolExecutor(count, context, _deaf), count, watch)


def cluster(address: str, watch: Watch | None = None) -> Workers:
    """The workers of the Dask scheduler at an address such as ``tcp://10.0.0.5:8786``; netaudit must be installed there.

    Raises InputError where the extra is not installed or nothing answers.
    """
    try:
        from distributed import Client
    except ImportError:
        raise InputError("--cluster needs the extra cluster", mend="pip install 'netaudit[cluster]'") from None
    try:
        connect: Any = Client
        client = connect(address, timeout="10s", set_as_default=False)
    except (OSError, ValueError) as error:
        said = str(error).splitlines()[0]
        raise InputError(f"no scheduler answers at {address} ({said})", mend="check the address and port") from None
    count = len(client.scheduler_info(n_workers=-1)["workers"])
    if not count:
        client.close()
        raise InputError(f"the scheduler at {address} has no workers", mend="start some first")
    return _Cluster(client, count, watch)


class _Cluster(Workers):
    """Closes the connection as well."""

    def __init__(self, client: Any, count: int, watch: Watch | None) -> None:
        super().__init__(client.get_executor(pure=False), count, watch)
        self._client = client

    def close(self) -> None:
        super().close()
        self._client.close()


def _deaf() -> None:
    """In a worker process: an interruption from the keyboard is for the one that hands out the work."""
    import signal

    signal.signal(signal.SIGINT, signal.SIG_IGN)
