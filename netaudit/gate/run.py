"""Boards in the order in which they were named, several at a time; a broken one does not hide the others."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from netaudit.audit.batch import BoardResult
from netaudit.audit.records import Audit
from netaudit.failure import InputError
from netaudit.gate.cache import Cache
from netaudit.gate.codec import to_plain
from netaudit.gate.job import Job, judged, refused, solve, unreached
from netaudit.workers import IN_PROCESS, Interrupted, Workers


def run_jobs(
    jobs: Sequence[Job], cache: Cache | None = None, live: bool = False, workers: Workers = IN_PROCESS
) -> Iterator[BoardResult]:
    """The results in the order of the jobs.

    ``live``: with solved boards, so nothing is taken from the cache.  Once the workers are told to stop, boards that
    were not reached are said to be so; a board that was cut short is not kept.
    """
    known = {k: cache.find(job) for k, job in enumerate(jobs)} if cache is not None and not live else {}
    results = workers.each(_tried, [job for k, job in enumerate(jobs) if known.get(k) is None], "boards")
    stopped = False
    for k, job in enumerate(jobs):
        found: Audit | InputError | None = known.get(k)
        if found is not None:
            yield _result(job, found)
            continue
        if not stopped:
            try:
                found = next(results)
            except Interrupted:
                stopped = True
        if found is None:
            yield unreached(job)
            continue
        if cache is not None and isinstance(found, Audit) and not found.partial:
            cache.keep(job, to_plain(found), found.board.files)
        yield _result(job, found)


def _tried(job: Job, workers: Workers) -> Audit | InputError:
    try:
        return solve(job, workers)
    except InputError as error:
        return error


def _result(job: Job, found: Audit | InputError) -> BoardResult:
    return refused(job, found) if isinstance(found, InputError) else judged(job, found)
