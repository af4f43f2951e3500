"""Boards in the order in which they were named, several at a time; a broken one does not hide the others."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from netaudit.audit.batch import BoardResult
from netaudit.failure import InputError
from netaudit.gate.cache import Cache
from netaudit.gate.codec import to_plain
from netaudit.gate.job import Job, judged, refused, solve


def run_jobs(jobs: Sequence[Job], cache: Cache | None = None, live: bool = False) -> Iterator[BoardResult]:
    """The results in the order of the jobs.

    ``live``: with solved boards, so nothing is taken from the cache.
    """
    for job in jobs:
        found = cache.find(job) if cache is not None and not live else None
        if found is not None:
            yield judged(job, found)
            continue
        try:
            audit = solve(job)
        except InputError as error:
            yield refused(job, error)
            continue
        if cache is not None:
            cache.keep(job, to_plain(audit), audit.board.files)
        yield judged(job, audit)
