"""Boards in the order in which they were named, several at a time; a broken one does not hide the others."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

from netaudit.audit.batch import BoardResult
from netaudit.audit.records import Audit
from netaudit.failure import InputError
from netaudit.gate.cache import Cache
from netaudit.gate.codec import from_plain, renamed, to_plain
from netaudit.gate.job import Job, judged, refused, solve, unreached
from netaudit.workers import IN_PROCESS, Interrupted, Workers


def run_jobs(
    jobs: Sequence[Job], cache: Cache | None = None, live: bool = False, workers: Workers = IN_PROCESS
) -> Iterator[BoardResult]:
    """The results in the order of the jobs.

    ``live``: with solved boards, so nothing is taken from the cache.  Once the workers are told to stop, boards that
    were not reached are said to be so; a board that was cut short is not kept.
    """
    known = [cache.find(job) if cache is not None and not live else None for job in jobs]
    missing = [job for job, found in zip(jobs, known, strict=True) if found is None]
    results = workers.each(_alive if live else _plain, missing, "boards")
    stopped = False
    for job, kept in zip(jobs, known, strict=True):
        if kept is not None:
            yield judged(job, kept)
            continue
        found = None
        if not stopped:
            try:
                found = next(results)
            except Interrupted:
                stopped = True
        yield unreached(job) if found is None else _result(job, found, cache)


def _alive(job: Job, workers: Workers) -> Any:
    """The audit with its solved boards, or why there is none."""
    try:
        return solve(job, workers)
    except InputError as error:
        return error


def _plain(job: Job, workers: Workers) -> Any:
    """The audit as plain values, which travel light, or why there is none."""
    found = _alive(job, workers)
    if isinstance(found, InputError):
        return found
    plain = to_plain(found)
    return renamed(plain, job.shown) if job.prefixes else plain


def _result(job: Job, found: Any, cache: Cache | None) -> BoardResult:
    if isinstance(found, InputError):
        return refused(job, found)
    audit = found if isinstance(found, Audit) else from_plain(found)
    if cache is not None and not audit.partial:
        cache.keep(job, to_plain(found) if found is audit else found, audit.board.files)
    return judged(job, audit)
